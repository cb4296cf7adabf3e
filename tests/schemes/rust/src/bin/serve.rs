//! The same schemes as an executable: `serve NAME [base64]`.

use gridassay_scheme::conversation::serve;
use gridassay_scheme::{
    Advance, ArrayEncoding, Case, Description, Fields, Harness, March, Nodes, Scheme, SchemeError, Solution,
};

fn main() {
    let arguments: Vec<String> = std::env::args().skip(1).collect();
    let inner = test_schemes::scheme(arguments.first().map(String::as_str)).expect("a known scheme");
    let base64 = arguments.iter().any(|argument| argument == "base64");
    println!("this line belongs to the log");
    if let Err(error) = serve(Encoded { inner, base64 }) {
        eprintln!("{error}");
        std::process::exit(1);
    }
}

/// A scheme that understands base64, or does not.
struct Encoded {
    inner: Box<dyn Scheme>,
    base64: bool,
}

impl Scheme for Encoded {
    fn describe(&self) -> Description {
        let mut description = self.inner.describe();
        if self.base64 {
            description.arrays.push(ArrayEncoding::Base64);
        }
        description
    }

    fn prepare(&mut self, case: &Case, harness: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        println!("so does this one");
        self.inner.prepare(case, harness)
    }

    fn advance(&mut self, request: Advance<'_>, harness: &mut dyn Harness) -> Result<(), SchemeError> {
        self.inner.advance(request, harness)
    }

    fn march(&mut self, request: March<'_>, harness: &mut dyn Harness) -> Result<usize, SchemeError> {
        self.inner.march(request, harness)
    }

    fn rate(&mut self, time: f64, state: &[Vec<f64>], harness: &mut dyn Harness) -> Result<Fields, SchemeError> {
        self.inner.rate(time, state, harness)
    }

    fn solve(&mut self, guess: &[Vec<f64>], harness: &mut dyn Harness) -> Result<Solution, SchemeError> {
        self.inner.solve(guess, harness)
    }
}
