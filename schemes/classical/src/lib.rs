//! Textbook schemes as an ordinary Gridassay plugin: the embedded default and the worked example.
