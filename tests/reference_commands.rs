//! `problems` and `source` as their user meets them, and a person's own problem file wherever a catalogue name goes.
//!
//! Trusted: sources derived by hand for one-line solutions; the catalogue's own files.

use std::path::{Path, PathBuf};
use std::process::{Command, Output};

use gridassay_reference::problem::Problem;

fn folder(name: &str) -> PathBuf {
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR")).join(name);
    std::fs::create_dir_all(&folder).unwrap();
    folder
}

fn gridassay(folder: &Path, arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_gridassay")).args(arguments).current_dir(folder).output().unwrap()
}

/// Exit status, stdout and stderr.
fn said(folder: &Path, arguments: &[&str]) -> (i32, String, String) {
    let output = gridassay(folder, arguments);
    let text = |bytes: &[u8]| String::from_utf8(bytes.to_vec()).unwrap();
    (output.status.code().unwrap(), text(&output.stdout), text(&output.stderr))
}

/// A problem file of one's own: a travelling sine with another wavelength; `decay` spoils the solution unless it is zero.
fn own_problem(decay: f64) -> String {
    format!(
        "name = \"my-wave\"\ntitle = \"A wave of my own\"\nreference = \"own\"\nequation = \"advection\"\ndimensions = 1\n\
         [parameters]\nvelocity = [0.9]\n\
         [solution]\nu = \"0.3 + sin(2*pi*(x - 0.9*t)/1.4)*exp(-{decay}*t)\"\n\
         [domain]\nlower = [-0.1]\nupper = [1.3]\nboundaries = [\"periodic\"]\n[time]\nstart = 0.1\nfinal = 0.83\n"
    )
}

#[test]
fn the_catalogue_is_listed_and_every_problem_is_shown() {
    let (status, list, _) = said(&folder("catalogue"), &["problems"]);
    assert_eq!(status, 0);
    assert!(Problem::catalogue().len() >= 35);
    for name in Problem::catalogue() {
        assert!(list.lines().any(|line| line.trim_start().starts_with(name)), "{name} is not listed");
    }
    for name in ["travelling-sine", "boundary-layer", "roy-navier-stokes", "ethier-steinman", "toro-1"] {
        let problem = Problem::named(name).unwrap();
        let (status, shown, _) = said(&folder("catalogue"), &["problems", name]);
        assert_eq!(status, 0);
        for word in ["equation", "published in", "domain", "at the end"] {
            assert!(shown.contains(word), "{name} does not show `{word}`: {shown}");
        }
        assert!(shown.starts_with(&format!("{name}: {}", problem.title())), "{shown}");
    }
}

#[test]
fn an_own_problem_file_goes_wherever_a_catalogue_name_goes() {
    let folder = folder("own-problem");
    std::fs::write(folder.join("wave.toml"), own_problem(0.0)).unwrap();
    assert!(said(&folder, &["problems", "wave.toml"]).1.contains("A wave of my own"));
    let arguments = ["order", "--problem", "wave.toml", "--cells", "32,64,128", "--courant", "0.7", "--expect", "2"];
    let (status, shown, _) = said(&folder, &[arguments.as_slice(), &["--classical", "lax-wendroff"]].concat());
    assert_eq!(status, 0, "{shown}");
    let claims = "[scheme]\nclassical = \"lax-wendroff\"\n[[order]]\nproblem = \"wave.toml\"\ncells = [32, 64, 128]\ncourant = 0.7\nexpect = 2\n";
    std::fs::write(folder.join("claims.toml"), claims).unwrap();
    assert_eq!(said(&folder, &["judge", "claims.toml", "--quiet"]).0, 0);
}

#[test]
fn a_problem_whose_solution_does_not_fit_its_equation_is_refused() {
    let folder = folder("wrong-problem");
    std::fs::write(folder.join("wave.toml"), own_problem(0.001)).unwrap();
    let (status, _, error) = said(&folder, &["problems", "wave.toml"]);
    assert_eq!(status, 2);
    assert!(error.contains("wave.toml") && error.contains("solution"), "{error}");
}

#[test]
fn a_source_is_derived_for_an_equation_and_for_an_own_residual() {
    let folder = folder("source");
    let formula = |arguments: &[&str]| {
        let (status, shown, error) = said(&folder, &[&["source"], arguments].concat());
        assert_eq!(status, 0, "{error}");
        shown.lines().last().unwrap().to_owned()
    };
    // By hand: u = x^2 t gives u_t + a u_x - nu u_xx = x^2 + 2 a x t - 2 nu t.
    let own = [
        "--residual",
        "d(u,t) + a*d(u,x) - nu*d(u,x,x)",
        "--parameter",
        "a=3",
        "--parameter",
        "nu=0.5",
        "--solution",
        "u = x^2*t",
    ];
    assert_eq!(formula(&own), "S_u = 6*t*x + x^2 - t");
    let contract =
        ["--equation", "advection", "--parameter", "velocity=3", "--solution", "k = 2*x", "--solution", "u = k*t"];
    assert_eq!(formula(&contract), "S_u = 6*t + 2*x");
}

#[test]
fn what_is_wrong_with_an_expression_is_shown_with_its_place() {
    let folder = folder("wrong-expression");
    // (solution, what the sentence says, column of the caret)
    let table = [
        ("u = sin(pi*x)*exx(-t)", "did you mean `exp`?", 10),
        ("u = sin(pi*x", "never closed; add `)`", 3),
        ("u = sin(kappa*x)", "kappa", 4),
    ];
    for (solution, sentence, column) in table {
        let (status, _, error) = said(&folder, &["source", "--equation", "advection", "--solution", solution]);
        assert_eq!(status, 2, "{solution}");
        assert!(error.contains(sentence), "{solution}: {error}");
        let caret = error.lines().find(|line| line.trim_start().starts_with('^')).unwrap_or_else(|| panic!("{error}"));
        // Two blanks stand before the line of text and before the caret alike.
        assert_eq!(caret.find('^').unwrap() - 2, column, "{error}");
    }
}
