//! Emitted code, compiled by other people's compilers with warnings as errors, run, and compared with the own evaluation.
//!
//! What is trusted: gcc, g++, gfortran, rustc and NumPy, with the elementary functions of their libraries. Tolerance: 1e-14 of
//! the largest value that an output takes at the points tried; the functions of two libraries differ by up to 2 ulp, and sums cancel.

use std::path::{Path, PathBuf};
use std::process::Command;

use gridassay_reference::equation::{Equation, Parameters, Solution};
use gridassay_reference::expression::{Expression, Program, Scope};
use gridassay_reference::writer::{Argument, Language, Listing, Output, source_listing};

const POINTS: [[f64; 3]; 8] = [
    [0.3, 0.6, 0.1],
    [0.7, 0.2, 0.45],
    [0.11, 0.93, 1.3],
    [0.5, 0.5, 0.5],
    [0.9, 0.05, 2.2],
    [0.25, 0.75, 0.0],
    [0.613, 0.381, 0.7],
    [0.02, 0.41, 1.9],
];

/// Every function of the language, nested and side by side; long sums; powers; names that languages reserve.
fn functions() -> Listing {
    let scope = Scope::new(["x", "y", "t"]);
    let texts = [
        "exp(-x)*log(1 + y) + sqrt(x + t) + tan(x)*asin(x)*acos(y)*atan(t) + atan2(x - 0.4, y - t)",
        "sinh(x) - cosh(y)*tanh(t) + asinh(x)*acosh(1 + y)/atanh(x/2) + erf(x)*erfc(y)",
        "min(x, y) + max(x, t)*abs(x - y) + sign(x - y)*heaviside(t - 0.6) + heaviside(x - x*1)",
        "if(x < y, x^3, if(t >= 1, y^2.5, x^y)) + (x > y)*3 - (x <= t)*(x != y) + (x == y)",
        "-x - y - t + 3*(x + y)^7/(2 - x)^3 - 1e-7*t + 6.02e23*0*x - 1/(x + 1)^(3/2)",
        "7",
    ];
    let outputs = texts.iter().enumerate().map(|(k, text)| Output {
        name: format!("f_{k}"),
        meaning: "a number".into(),
        expression: Expression::parse(text, &scope).unwrap(),
    });
    let argument = |name: &str| Argument { name: name.into(), meaning: "a number".into() };
    Listing {
        function: "functions".into(),
        title: vec!["Every function".into()],
        arguments: ["x", "y", "t"].map(argument).to_vec(),
        outputs: outputs.collect(),
    }
}

/// An unsteady source of the compressible Navier-Stokes equations.
fn navier_stokes() -> Listing {
    let scope = Scope::new(["x", "y", "t"]);
    let parse = |text: &str| Expression::parse(text, &scope).unwrap();
    let solution: Solution = [
        ("density", "1 + 0.1*sin(0.75*pi*x) + 0.15*cos(pi*y)*exp(-t) + 0.08*cos(1.25*pi*x*y)"),
        ("velocity_x", "70 + 4*sin(5/3*pi*x) - 12*cos(1.5*pi*y - t) + 7*cos(0.6*pi*x*y)"),
        ("velocity_y", "90 - 20*cos(1.5*pi*x + t) + 4*sin(pi*y) - 11*cos(0.9*pi*x*y)"),
        ("pressure", "1e5 - 0.3e5*cos(pi*x) + 0.2e5*sin(1.25*pi*y)*cos(t) - 0.25e5*sin(0.75*pi*x*y)"),
    ]
    .map(|(name, text)| (name.to_string(), parse(text)))
    .into();
    let parameters: Parameters = [("gamma", 1.4), ("gas_constant", 287.0), ("viscosity", 10.0), ("prandtl", 0.7)]
        .map(|(name, value)| (name.to_string(), vec![value.into()]))
        .into();
    let equation = Equation::named("navier_stokes").unwrap();
    let mut listing = source_listing(&equation, 2, &parameters, &solution, &[]).unwrap();
    listing.function = "navier_stokes".into();
    listing
}

/// One output, one argument, and open parameters in Fortran's and Python's way of spelling.
fn single() -> Listing {
    let scope = Scope::new(["x", "y", "t"]);
    let expression = Expression::parse("sin(3*x)^2*erf(x)", &scope).unwrap();
    Listing {
        function: "single".into(),
        title: vec!["One value".into()],
        arguments: vec![Argument { name: "x".into(), meaning: "coordinate, m".into() }],
        outputs: vec![Output { name: "f".into(), meaning: "a number".into(), expression }],
    }
}

fn own_values(listing: &Listing) -> Vec<Vec<f64>> {
    let expressions: Vec<Expression> = listing.outputs.iter().map(|output| output.expression.clone()).collect();
    let program = Program::new(&expressions, &["x", "y", "t"]).unwrap();
    POINTS.iter().map(|point| program.at(point)).collect()
}

fn folder(name: &str) -> PathBuf {
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR")).join(name);
    std::fs::create_dir_all(&folder).unwrap();
    folder
}

fn run(command: &mut Command) -> String {
    let output = command.output().unwrap_or_else(|error| panic!("{command:?} does not start: {error}"));
    let complaints = String::from_utf8_lossy(&output.stderr);
    assert!(output.status.success() && complaints.is_empty(), "{command:?}:\n{complaints}");
    String::from_utf8(output.stdout).unwrap()
}

/// Compares numbers printed point by point, listing by listing.
fn compare(language: &str, printed: &str) {
    let mut numbers = printed.split_whitespace().map(|text| text.parse::<f64>().unwrap_or_else(|_| panic!("{text}")));
    for listing in [functions(), navier_stokes(), single()] {
        let own = own_values(&listing);
        for k in 0..listing.outputs.len() {
            let scale = own.iter().map(|values| values[k].abs()).fold(0.0, f64::max);
            for (point, values) in own.iter().enumerate() {
                let found = numbers.next().expect("a number for every output and point");
                let close = (found - values[k]).abs() <= 1e-14 * scale;
                assert!(
                    close,
                    "{language} {} output {k} point {point}: {found:e}, own {:e}",
                    listing.function, values[k]
                );
            }
        }
    }
    assert!(numbers.next().is_none());
}

fn emitted(language: Language) -> String {
    [functions(), navier_stokes(), single()].map(|listing| listing.write(language).unwrap()).join("\n")
}

fn points_in(open: &str, close: &str, row_open: &str, row_close: &str) -> String {
    let rows = POINTS.map(|point| format!("{row_open}{}{row_close}", point.map(|x| format!("{x:?}")).join(", ")));
    format!("{open}{}{close}", rows.join(", "))
}

fn c_main(print: &str) -> String {
    let points = points_in("{", "}", "{", "}");
    let count = POINTS.len();
    format!(
        "\n#include <stdio.h>\nint main(void)\n{{\n    const double p[{count}][3] = {points};\n    double f[6], s[4];\n    int i, k;\n    \
         for (k = 0; k < 6; k++) for (i = 0; i < {count}; i++) {{ functions(p[i][0], p[i][1], p[i][2], f); {print}f[k]); }}\n    \
         for (k = 0; k < 4; k++) for (i = 0; i < {count}; i++) {{ navier_stokes(p[i][0], p[i][1], p[i][2], s); {print}s[k]); }}\n    \
         for (i = 0; i < {count}; i++) {print}single(p[i][0]));\n    return 0;\n}}\n"
    )
}

fn compiled(name: &str, file: &str, source: &str, compiler: &str, flags: &[&str], libraries: &[&str]) -> String {
    let folder = folder(name);
    std::fs::write(folder.join(file), source).unwrap();
    run(Command::new(compiler).current_dir(&folder).args(flags).args(["-o", "program", file]).args(libraries));
    run(&mut Command::new(folder.join("program")))
}

#[test]
fn c() {
    let source = emitted(Language::C) + &c_main("printf(\"%.17g\\n\", ");
    let flags = ["-std=c99", "-O2", "-Wall", "-Wextra", "-Werror", "-pedantic"];
    compare("C", &compiled("c", "emitted.c", &source, "gcc", &flags, &["-lm"]));
}

#[test]
fn cpp() {
    let source = emitted(Language::Cpp) + &c_main("std::printf(\"%.17g\\n\", ").replace("stdio.h", "cstdio");
    let flags = ["-std=c++11", "-O2", "-Wall", "-Wextra", "-Werror", "-pedantic"];
    compare("C++", &compiled("cpp", "emitted.cpp", &source, "g++", &flags, &[]));
}

#[test]
fn fortran() {
    let points = points_in("[", "]", "", "");
    let points = points.split_inclusive(',').map(|number| format!("{number} &\n  ")).collect::<String>();
    let points = points.replace(',', "_real64,").replace(']', "_real64]");
    let count = POINTS.len();
    let main = format!(
        "program main\n  use, intrinsic :: iso_fortran_env, only: real64\n  use emitted\n  implicit none\n  \
         real(real64), parameter :: p(3, {count}) = reshape({points}, [3, {count}])\n  real(real64) :: f(6), s(4)\n  integer :: i, k\n  \
         do k = 1, 6\n  do i = 1, {count}\n    call functions(p(1, i), p(2, i), p(3, i), f)\n    print '(es25.17e3)', f(k)\n  end do\n  end do\n  \
         do k = 1, 4\n  do i = 1, {count}\n    call navier_stokes(p(1, i), p(2, i), p(3, i), s)\n    print '(es25.17e3)', s(k)\n  end do\n  end do\n  \
         do i = 1, {count}\n    print '(es25.17e3)', single(p(1, i))\n  end do\nend program main\n"
    );
    let source = format!("module emitted\ncontains\n{}end module emitted\n{main}", emitted(Language::Fortran));
    let flags = ["-std=f2008", "-O2", "-Wall", "-Wextra", "-Wno-compare-reals", "-Werror"];
    compare("Fortran", &compiled("fortran", "emitted.f90", &source, "gfortran", &flags, &[]));
}

#[test]
fn rust() {
    let points = points_in("[", "]", "[", "]");
    let source = emitted(Language::Rust)
        + &format!(
            "\nfn main() {{\n    let p = {points};\n    \
             for k in 0..6 {{ for p in &p {{ println!(\"{{:e}}\", functions(p[0], p[1], p[2])[k]); }} }}\n    \
             for k in 0..4 {{ for p in &p {{ println!(\"{{:e}}\", navier_stokes(p[0], p[1], p[2])[k]); }} }}\n    \
             for p in &p {{ println!(\"{{:e}}\", single(p[0])); }}\n}}\n"
        );
    // Each function declares what it needs from the C library; one file needs it once.
    let (declaration, rest) = source.split_once("unsafe extern \"C\" {\n    safe fn erf(").expect("erf is used");
    let again = rest.find("unsafe extern \"C\" {\n    safe fn erf(").expect("erf is used twice");
    let end = again + rest[again..].find("}\n").unwrap() + 2;
    let source = format!("{declaration}unsafe extern \"C\" {{\n    safe fn erf({}{}", &rest[..again], &rest[end..]);
    let flags = ["--edition=2021", "-O", "-D", "warnings"];
    compare("Rust", &compiled("rust", "emitted.rs", &source, "rustc", &flags, &[]));
}

#[test]
fn python() {
    let source = emitted(Language::Python)
        + &format!(
            "\nnp.seterr(all=\"raise\")\nx, y, t = np.array({}).T\n\
             for values in list(functions(x, y, t)) + list(navier_stokes(x, y, t)) + [single(x)]:\n    \
             for value in np.broadcast_to(values, x.shape):\n        print(repr(float(value)))\n",
            points_in("[", "]", "[", "]")
        );
    let file = folder("python").join("emitted.py");
    std::fs::write(&file, source).unwrap();
    let python = std::env::var("GRIDASSAY_PYTHON").unwrap_or_else(|_| "python3".into());
    compare("Python", &run(Command::new(python).arg("-W").arg("error").arg(file)));
}
