//! Digests of what was run: a result is traced to these bytes.

use std::fs::File;
use std::io::{self, Read};
use std::os::unix::fs::PermissionsExt;
use std::path::{Path, PathBuf};

use sha2::{Digest, Sha256};

/// SHA-256 of a file in hexadecimal, as `sha256sum` prints it.
pub fn file_digest(path: &Path) -> io::Result<String> {
    let mut file = File::open(path)?;
    let (mut digest, mut buffer) = (Sha256::new(), vec![0u8; 1 << 16]);
    loop {
        match file.read(&mut buffer)? {
            0 => return Ok(hexadecimal(&digest.finalize())),
            count => digest.update(&buffer[..count]),
        }
    }
}

/// The digest of a list of files: of the file itself where there is one, else of the lines of digests.
pub(super) fn joint_digest(files: &[(String, String)]) -> String {
    match files {
        [] => String::new(),
        [(_, digest)] => digest.clone(),
        several => {
            let lines: String = several.iter().map(|(_, digest)| format!("{digest}\n")).collect();
            hexadecimal(&Sha256::digest(lines.as_bytes()))
        }
    }
}

/// The executable of a command, and the files named among its arguments, each with its digest.
pub(super) fn command_files(command: &[String], folder: &Path) -> Vec<(String, String)> {
    let Some((program, arguments)) = command.split_first() else { return Vec::new() };
    let mut files = Vec::new();
    if let Some(path) = find_program(program, folder) {
        files.extend(file_digest(&path).ok().map(|digest| (program.clone(), digest)));
    }
    for argument in arguments {
        let path = folder.join(argument);
        if path.is_file() {
            files.extend(file_digest(&path).ok().map(|digest| (argument.clone(), digest)));
        }
    }
    files
}

/// A file with its digest; a file that cannot be read has none.
pub(super) fn named_file(path: &Path, folder: &Path) -> Vec<(String, String)> {
    let digest = file_digest(&folder.join(path)).ok();
    digest.map(|digest| (path.display().to_string(), digest)).into_iter().collect()
}

/// Where a program is: as it is named where the name has a slash, else on the search path.
fn find_program(program: &str, folder: &Path) -> Option<PathBuf> {
    if program.contains('/') {
        return Some(folder.join(program));
    }
    let paths = std::env::var_os("PATH")?;
    let candidates = std::env::split_paths(&paths).map(|part| part.join(program));
    let executable =
        |path: &PathBuf| path.metadata().is_ok_and(|data| data.is_file() && data.permissions().mode() & 0o111 != 0);
    candidates.into_iter().find(executable)
}

fn hexadecimal(bytes: &[u8]) -> String {
    bytes.iter().map(|byte| format!("{byte:02x}")).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_digest_is_sha256() {
        // FIPS 180-4, the message "abc" (NIST's example).
        let expected = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad";
        assert_eq!(hexadecimal(&Sha256::digest(b"abc")), expected);
    }
}
