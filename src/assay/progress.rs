//! What a person sees while a run goes on.

use std::time::Instant;

use indicatif::{ProgressBar, ProgressStyle};

/// Told of each claim as it is taken up.
pub trait Progress {
    /// Claim `done` + 1 of `total` is being tried.
    fn tells(&self, done: usize, total: usize, what: &str);
    /// The run is over.
    fn ends(&self);
}

/// Tells nothing.
pub struct Quiet;

impl Progress for Quiet {
    fn tells(&self, _: usize, _: usize, _: &str) {}

    fn ends(&self) {}
}

/// A bar with the time left, for a terminal.
pub struct Bar(ProgressBar);

impl Default for Bar {
    fn default() -> Self {
        let style =
            ProgressStyle::with_template("{bar:24} {pos}/{len}  {msg}  ({eta} left)").expect("the template is valid");
        let bar = ProgressBar::new(0).with_style(style);
        bar.enable_steady_tick(std::time::Duration::from_millis(200));
        Self(bar)
    }
}

impl Progress for Bar {
    fn tells(&self, done: usize, total: usize, what: &str) {
        self.0.set_length(total as u64);
        self.0.set_position(done as u64);
        self.0.set_message(what.to_owned());
    }

    fn ends(&self) {
        self.0.finish_and_clear();
    }
}

/// A plain line a claim, for logs.
pub struct Lines(Instant);

impl Default for Lines {
    fn default() -> Self {
        Self(Instant::now())
    }
}

impl Progress for Lines {
    fn tells(&self, done: usize, total: usize, what: &str) {
        eprintln!("[{:>6.1} s] {}/{total} {what}", self.0.elapsed().as_secs_f64(), done + 1);
    }

    fn ends(&self) {}
}

/// A bar where stderr is a terminal, lines elsewhere, nothing where `quiet`.
pub fn fitting(quiet: bool) -> Box<dyn Progress> {
    use std::io::IsTerminal;
    match (quiet, std::io::stderr().is_terminal()) {
        (true, _) => Box::new(Quiet),
        (false, true) => Box::new(Bar::default()),
        (false, false) => Box::new(Lines::default()),
    }
}
