//! The files of the starters, embedded: what is in `schemes/starters`, the C header and the contract crate.

use super::Language;

/// A file of a starter.
#[derive(Clone, Copy, Debug)]
pub struct File {
    /// Where it goes, relative to the starter's folder.
    pub path: &'static str,
    /// What is in it.
    pub text: &'static str,
}

macro_rules! files {
    ($from:literal: $($path:literal),+ $(,)?) => { files!($from => "": $($path),+) };
    ($from:literal => $to:literal: $($path:literal),+ $(,)?) => {
        &[$(File { path: concat!($to, $path), text: include_str!(concat!("../../../schemes/", $from, $path)) }),+]
    };
}

const CI: &[File] = &[
    File { path: ".github/workflows/claims.yml", text: include_str!("../../../schemes/starters/ci/github.yml") },
    File { path: ".gitlab-ci.yml", text: include_str!("../../../schemes/starters/ci/gitlab.yml") },
];
const HEADER: &[File] = files!("contract/include/": "gridassay_scheme.h");
const CONVERSATION: &[File] = &[File { path: "conversation.md", text: include_str!("../../guide/conversation.md") }];
const PYTHON: &[File] = files!("starters/python/": "README.md", "claims.toml", "judge.sh", "scheme.py");
const PYTHON_NUMPY: &[File] =
    files!("starters/python-numpy/": "README.md", "claims.toml", "judge.sh", "scheme.py", "requirements.txt");
const C: &[File] = files!("starters/c/": "README.md", "claims.toml", "judge.sh", "scheme.c");
const CPP: &[File] = files!("starters/cpp/": "README.md", "claims.toml", "judge.sh", "scheme.cpp");
const FORTRAN: &[File] = files!("starters/fortran/": "README.md", "claims.toml", "judge.sh", "scheme.f90");
const RUST: &[File] = files!("starters/rust/": "README.md", "claims.toml", "judge.sh", "Cargo.toml", "src/lib.rs");
/// A verbatim copy, so that a plugin crate can be built before anything is published.
const CONTRACT: &[File] = files!("contract/" => "gridassay-scheme/":
    "Cargo.toml",
    "include/gridassay_scheme.h",
    "src/abi/export.rs",
    "src/abi/layout.rs",
    "src/abi/macros.rs",
    "src/abi/mod.rs",
    "src/abi/plugin_harness.rs",
    "src/abi/problem.rs",
    "src/case.rs",
    "src/conversation/array.rs",
    "src/conversation/decode.rs",
    "src/conversation/encode.rs",
    "src/conversation/error.rs",
    "src/conversation/lift.rs",
    "src/conversation/mod.rs",
    "src/conversation/serve.rs",
    "src/conversation/transport.rs",
    "src/description.rs",
    "src/error.rs",
    "src/fields.rs",
    "src/grid.rs",
    "src/harness.rs",
    "src/lib.rs",
    "src/scheme.rs",
);

/// The files of a starter.
pub fn of(language: Language) -> Vec<File> {
    let parts: &[&[File]] = match language {
        Language::Python => &[PYTHON, CI],
        Language::PythonNumpy => &[PYTHON_NUMPY, CI],
        Language::C => &[C, HEADER, CI],
        Language::Cpp => &[CPP, HEADER, CI],
        Language::Fortran => &[FORTRAN, HEADER, CI],
        Language::Rust => &[RUST, CONTRACT, CI],
        Language::Conversation => &[CONVERSATION],
    };
    parts.concat()
}

#[cfg(test)]
mod tests {
    use std::collections::BTreeSet;
    use std::path::Path;

    use super::*;

    fn found(folder: &Path, below: &Path, into: &mut BTreeSet<String>) {
        for entry in std::fs::read_dir(below).unwrap().flatten() {
            let path = entry.path();
            match path.is_dir() {
                true => found(folder, &path, into),
                false => {
                    into.insert(path.strip_prefix(folder).unwrap().to_str().unwrap().to_owned());
                }
            }
        }
    }

    #[test]
    fn no_file_of_the_contract_crate_is_forgotten() {
        let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("schemes/contract");
        let mut expected = BTreeSet::new();
        found(&folder, &folder, &mut expected);
        expected.retain(|path| !path.starts_with("tests/") && !path.starts_with("target/"));
        let copied = CONTRACT.iter().map(|file| file.path.strip_prefix("gridassay-scheme/").unwrap().to_owned());
        assert_eq!(copied.collect::<BTreeSet<_>>(), expected);
    }
}
