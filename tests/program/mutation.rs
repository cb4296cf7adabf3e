//! Readers of what people and schemes write never panic: seeded mutations of a small corpus, 20 000 for each reader (GRIDASSAY_MUTATIONS).
//!
//! Trusted: nothing; any answer but a panic, an abort or an endless loop is right. The whole must take its time in seconds.

use std::path::Path;
use std::time::{Duration, Instant};

use gridassay::claims::plan_of;
use gridassay_reference::expression::{Expression, Scope};
use gridassay_reference::problem::Problem;
use gridassay_scheme::conversation::Message;

const SEED: u64 = 0x6a09_e667_f3bc_c908;
/// No input of the corpus's size may take longer, also on a busy machine.
const LONGEST: Duration = Duration::from_secs(20);

/// Pieces that readers trip over.
const PIECES: [&str; 24] = [
    "((((((((((",
    "[[[[[[[[[[",
    "{{{{{{{{",
    "\"",
    "\\",
    "\\u0000",
    "\0",
    "1e999",
    "-1e-999",
    "0x",
    "99999999999999999999",
    "^-",
    "..",
    "'''",
    "\"\"\"",
    "= ",
    "nan",
    "inf",
    "\u{202e}",
    "é",
    "]",
    "}",
    "#",
    ",",
];

struct Random(u64);

impl Random {
    /// A number below `end` by xorshift (Marsaglia 2003).
    fn below(&mut self, end: usize) -> usize {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 % end.max(1) as u64) as usize
    }

    fn mutated(&mut self, seeds: &[Vec<u8>]) -> Vec<u8> {
        let mut input = seeds[self.below(seeds.len())].clone();
        for _ in 0..=self.below(4) {
            let (a, b) = (self.below(input.len() + 1), self.below(input.len() + 1));
            let (a, b) = (a.min(b), a.max(b).min(a.min(b) + 64));
            match self.below(8) {
                0 => input.truncate(a),
                1 => drop(input.drain(a..b)),
                2 => {
                    let copy = input[a..b].to_vec();
                    input.splice(a..a, copy);
                }
                3 if !input.is_empty() => {
                    let at = a.min(input.len() - 1);
                    input[at] ^= 1 << self.below(8);
                }
                4 => {
                    // Deep nesting: a piece many times over.
                    let piece = PIECES[self.below(PIECES.len())].repeat(1 + self.below(2000));
                    input.splice(a..a, piece.bytes());
                }
                5 => {
                    let other = &seeds[self.below(seeds.len())];
                    let (c, d) = (self.below(other.len() + 1), self.below(other.len() + 1));
                    input.splice(a..b, other[c.min(d)..c.max(d)].iter().copied());
                }
                6 => drop(input.splice(a..b, self.below(1 << 20).to_string().bytes())),
                _ => drop(input.splice(a..b, PIECES[self.below(PIECES.len())].bytes())),
            }
        }
        input
    }
}

/// Hands the corpus itself and its mutations to a reader; how many of them it took.
fn survive(name: &str, seeds: &[Vec<u8>], mut take: impl FnMut(&[u8]) -> bool) {
    let count: usize = std::env::var("GRIDASSAY_MUTATIONS").ok().and_then(|n| n.parse().ok()).unwrap_or(20_000);
    let mut random = Random(SEED);
    assert!(seeds.iter().filter(|seed| take(seed)).count() * 2 >= seeds.len(), "{name}: the corpus itself is read");
    let mut taken = 0;
    for number in 0..count {
        let input = random.mutated(seeds);
        let begun = Instant::now();
        let outcome = std::panic::catch_unwind(std::panic::AssertUnwindSafe(|| take(&input)));
        let shown = || String::from_utf8_lossy(&input[..input.len().min(2000)]).into_owned();
        match outcome {
            Ok(good) => taken += usize::from(good),
            Err(_) => panic!("{name}: mutation {number} of seed {SEED:#x} panics: {}", shown()),
        }
        assert!(begun.elapsed() < LONGEST, "{name}: mutation {number} takes {:?}: {}", begun.elapsed(), shown());
    }
    println!("{name}: {count} mutations, {taken} of them taken");
    assert!(taken * 10 < count * 9, "{name}: mutations that change nothing prove nothing");
}

fn lines(text: &str) -> Vec<Vec<u8>> {
    text.lines().map(|line| line.as_bytes().to_vec()).collect()
}

#[test]
fn the_reader_of_claims_survives() {
    let folder = support_folder();
    let seeds = [include_str!("corpus/claims.toml"), gridassay_classical::CLAIMS].map(|text| text.as_bytes().to_vec());
    survive("claims", &seeds, |input| {
        std::str::from_utf8(input).is_ok_and(|text| plan_of(Path::new("claims.toml"), text, &folder).is_ok())
    });
}

#[test]
fn the_reader_of_problems_survives() {
    let catalogue = Path::new(env!("CARGO_MANIFEST_DIR")).join("reference-solutions/catalogue");
    let names =
        ["travelling-sine", "manufactured-euler-1d", "toro-1", "varying-conductivity", "still-water", "burgers-front"];
    let seeds = names.map(|name| std::fs::read(catalogue.join(format!("{name}.toml"))).unwrap());
    survive("problems", &seeds, |input| {
        std::str::from_utf8(input).is_ok_and(|text| Problem::from_text("problem.toml", text).is_ok())
    });
}

#[test]
fn the_parser_of_expressions_survives() {
    let scope = Scope::new(["x", "y", "t", "theta", "c"]).with_imaginary_unit();
    survive("expressions", &lines(include_str!("corpus/expressions.txt")), |input| {
        std::str::from_utf8(input).is_ok_and(|text| Expression::parse(text, &scope).is_ok())
    });
}

#[test]
fn the_reader_of_messages_survives() {
    survive("messages", &lines(include_str!("corpus/messages.txt")), |input| {
        Message::from_line(input.to_vec()).is_ok()
    });
}

/// An empty folder: mutated names of problem files lead nowhere.
fn support_folder() -> std::path::PathBuf {
    let folder = crate::support::scratch().join("mutation");
    std::fs::create_dir_all(&folder).unwrap();
    folder
}
