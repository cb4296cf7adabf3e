//! What a scheme and the Gridassay harness say to each other: trait, C ABI and JSON conversation.
