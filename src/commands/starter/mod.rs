//! `starter`: a smallest complete scheme with claims and a CI job.

mod files;

use std::path::{Path, PathBuf};

use clap::{Args, ValueEnum};

use super::outcome::Outcome;
use files::File;

/// Writes a smallest complete scheme with claims and CI jobs, which work as they are.
#[derive(Debug, Args)]
#[command(
    after_help = "Examples:\n  gridassay starter python my-scheme\n  gridassay starter fortran my-scheme && sh my-scheme/judge.sh\n\n\
                  Any other language: gridassay starter conversation DIR writes the page on the conversation in JSON."
)]
pub struct Starter {
    /// The language.
    #[arg(value_name = "LANGUAGE")]
    language: Language,
    /// The folder to write into, created where it is missing. Nothing in it is overwritten.
    #[arg(value_name = "DIR")]
    folder: PathBuf,
}

/// What a starter is written in.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub enum Language {
    /// Python, standard library only.
    Python,
    /// Python with NumPy.
    PythonNumpy,
    /// C, as a shared library.
    C,
    /// C++, as a shared library.
    Cpp,
    /// Fortran through iso_c_binding, as a shared library.
    Fortran,
    /// Rust, as a plugin crate.
    Rust,
    /// Any other language: the page on the conversation.
    Conversation,
}

/// Why a starter could not be written.
#[derive(Debug, thiserror::Error)]
pub enum StarterError {
    /// Something is there already.
    #[error("`{}` is there already and nothing was written; name another folder, or move it away", path.display())]
    Exists {
        /// What is there.
        path: PathBuf,
    },
    /// The operating system refused.
    #[error("`{}` cannot be written: {reason}; check that you may write there", path.display())]
    NotWritten {
        /// What was to be written.
        path: PathBuf,
        /// What the operating system said.
        reason: std::io::Error,
    },
}

impl Starter {
    /// Looks whether anything would be overwritten, and writes.
    pub fn run(self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let files = files::of(self.language);
        write(&self.folder, &files)?;
        for file in &files {
            println!("{}", self.folder.join(file.path).display());
        }
        if self.language != Language::Conversation {
            println!("\nNext: sh {}", self.folder.join("judge.sh").display());
        }
        Ok(Outcome::Measured)
    }
}

/// Writes all files, or none where one of them is there already.
fn write(folder: &Path, files: &[File]) -> Result<(), StarterError> {
    let mut paths = files.iter().map(|file| folder.join(file.path));
    if let Some(path) = paths.find(|path| path.symlink_metadata().is_ok()) {
        return Err(StarterError::Exists { path });
    }
    for file in files {
        let path = folder.join(file.path);
        let failed = |reason| StarterError::NotWritten { path: path.clone(), reason };
        std::fs::create_dir_all(path.parent().unwrap_or(folder)).map_err(failed)?;
        // A file that appeared since the look is not overwritten either.
        let mut open = std::fs::File::options().write(true).create_new(true).open(&path).map_err(failed)?;
        std::io::Write::write_all(&mut open, file.text.as_bytes()).map_err(failed)?;
    }
    Ok(())
}
