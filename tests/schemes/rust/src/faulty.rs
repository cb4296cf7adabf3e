//! Upwind differences with one fault each, named by what goes wrong.

use gridassay_scheme::{Advance, Case, Description, Harness, Nodes, Scheme, SchemeError};

use crate::upwind::Upwind;

/// The scheme and its fault.
pub struct Faulty {
    inner: Upwind,
    fault: String,
}

impl Faulty {
    /// The fault that shows in the first step (or in `prepare`).
    pub fn new(fault: &str) -> Self {
        Self { inner: Upwind::default(), fault: fault.to_owned() }
    }
}

impl Scheme for Faulty {
    fn describe(&self) -> Description {
        Description { name: format!("faulty-{}", self.fault), ..self.inner.describe() }
    }

    fn prepare(&mut self, case: &Case, harness: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        if self.fault == "panics-in-prepare" {
            panic!("there is no case like this");
        }
        self.inner.prepare(case, harness)
    }

    fn advance(&mut self, request: Advance<'_>, harness: &mut dyn Harness) -> Result<(), SchemeError> {
        match self.fault.as_str() {
            "panics" => panic!("index 7 of 5"),
            "exits" => std::process::exit(9),
            "aborts" => std::process::abort(),
            "overflows" => println!("{}", deeper(request.steps as u64 + 1)),
            "prints" => println!("what a library prints goes to the log"),
            "lengthens" => request.state[0].push(0.0),
            "hangs" => std::thread::sleep(std::time::Duration::from_secs(3600)),
            "allocates" => drop(std::hint::black_box(vec![1u8; 8 << 30])),
            _ => {}
        }
        self.inner.advance(request, harness)
    }
}

/// Recursion without an end that an optimiser could see.
fn deeper(level: u64) -> u64 {
    let frame = std::hint::black_box([level; 512]);
    if level == 0 { 0 } else { deeper(level + 1) + frame[(level % 512) as usize] }
}
