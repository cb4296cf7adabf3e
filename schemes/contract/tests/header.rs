//! The header and the Rust structs say the same. Trusted: the C compiler, which is asked for the size of each struct, the offset of
//! each member and the value of each constant.

use std::mem::{offset_of, size_of};
use std::path::{Path, PathBuf};
use std::process::Command;

use gridassay_scheme::abi::{CCase, CHarness, CParameter, CState, kind_code};
use gridassay_scheme::{BoundaryKind, CONTRACT, SchemeError, Side};

fn include() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("include")
}

fn scratch(name: &str) -> PathBuf {
    Path::new(env!("CARGO_TARGET_TMPDIR")).join(name)
}

/// Compiles and runs a C program that prints `questions`, one a line.
fn ask_c(questions: &[String]) -> Vec<i64> {
    let (file, program) = (scratch("layout.c"), scratch("layout"));
    let prints: String = questions.iter().map(|q| format!("  printf(\"%lld\\n\", (long long)({q}));\n")).collect();
    let head = "#include <stddef.h>\n#include <stdio.h>\n#include \"gridassay_scheme.h\"\n";
    std::fs::write(&file, format!("{head}int main(void) {{\n{prints}  return 0;\n}}\n")).unwrap();
    let mut cc = Command::new("cc");
    cc.args(["-std=c99", "-Wall", "-Wextra", "-Werror", "-I"]).arg(include()).arg(&file).arg("-o").arg(&program);
    assert!(cc.status().unwrap().success());
    let output = Command::new(program).output().unwrap();
    String::from_utf8(output.stdout).unwrap().lines().map(|line| line.parse().unwrap()).collect()
}

macro_rules! members {
    ($list:ident, $rust:ty, $c:literal, [$($member:ident),*]) => {
        $list.push((format!("sizeof({})", $c), size_of::<$rust>() as i64));
        $($list.push((format!("offsetof({}, {})", $c, stringify!($member)), offset_of!($rust, $member) as i64));)*
    };
}

#[test]
fn the_structs_have_the_layout_of_the_header() {
    let mut list: Vec<(String, i64)> = Vec::new();
    members!(list, CState, "gridassay_state", [fields, lengths, values]);
    members!(list, CParameter, "gridassay_parameter", [name, values, count, is_vector]);
    members!(
        list,
        CCase,
        "gridassay_case",
        [
            equation,
            fields,
            parameters,
            coefficients,
            cells,
            lower,
            upper,
            edges,
            vertices,
            boundaries,
            dimensions,
            field_count,
            parameter_count,
            coefficient_count,
            source,
            steady_source,
            steady_boundary,
            steady_coefficient
        ]
    );
    members!(
        list,
        CHarness,
        "gridassay_harness",
        [
            context,
            source,
            boundary,
            ghost,
            coefficient,
            source_length,
            boundary_length,
            coefficient_length,
            coefficient_components,
            message
        ]
    );
    let constants = [
        ("GRIDASSAY_CONTRACT", CONTRACT as i32),
        ("GRIDASSAY_FAILED", SchemeError::FAILED),
        ("GRIDASSAY_STEP_REFUSED", SchemeError::STEP_REFUSED),
        ("GRIDASSAY_NOT_PREPARED", SchemeError::NOT_PREPARED),
        ("GRIDASSAY_PANICKED", SchemeError::PANICKED),
        ("GRIDASSAY_NOT_OFFERED", SchemeError::NOT_OFFERED),
        ("GRIDASSAY_PERIODIC", kind_code(BoundaryKind::Periodic)),
        ("GRIDASSAY_VALUE", kind_code(BoundaryKind::Value)),
        ("GRIDASSAY_GRADIENT", kind_code(BoundaryKind::Gradient)),
        ("GRIDASSAY_NONE", kind_code(BoundaryKind::None)),
        ("GRIDASSAY_X_LOWER", Side::XLower as i32),
        ("GRIDASSAY_X_UPPER", Side::XUpper as i32),
        ("GRIDASSAY_Y_LOWER", Side::YLower as i32),
        ("GRIDASSAY_Y_UPPER", Side::YUpper as i32),
        ("GRIDASSAY_Z_LOWER", Side::ZLower as i32),
        ("GRIDASSAY_Z_UPPER", Side::ZUpper as i32),
    ];
    list.extend(constants.map(|(name, value)| (name.to_owned(), i64::from(value))));
    let questions: Vec<String> = list.iter().map(|(question, _)| question.clone()).collect();
    let answers = ask_c(&questions);
    assert_eq!(answers.len(), list.len());
    for ((question, rust), c) in list.iter().zip(answers) {
        assert_eq!(*rust, c, "{question}");
    }
}

#[test]
fn the_header_is_good_cpp_too() {
    let file = scratch("header.cpp");
    std::fs::write(&file, "#include \"gridassay_scheme.h\"\nint main() { return GRIDASSAY_OK; }\n").unwrap();
    let mut compiler = Command::new("c++");
    compiler.args(["-std=c++11", "-Wall", "-Wextra", "-Werror", "-fsyntax-only", "-I"]).arg(include()).arg(&file);
    assert!(compiler.status().unwrap().success());
}
