//! The process tree, read from /proc.

/// All descendants of the process `root`, without itself. Processes that end while it looks may be missing or gone.
pub fn descendants(root: u32) -> Vec<u32> {
    let Ok(entries) = std::fs::read_dir("/proc") else { return Vec::new() };
    let numbers = entries.flatten().filter_map(|entry| entry.file_name().to_str()?.parse::<u32>().ok());
    let parents: Vec<(u32, u32)> = numbers.filter_map(|process| Some((process, parent(process)?))).collect();
    let mut found = vec![root];
    let mut at = 0;
    while at < found.len() {
        let of = found[at];
        found.extend(parents.iter().filter(|(_, parent)| *parent == of).map(|(process, _)| *process));
        at += 1;
    }
    found.split_off(1)
}

/// The parent of a process: the fourth field of its stat line, behind a name that may hold spaces and brackets.
fn parent(process: u32) -> Option<u32> {
    let stat = std::fs::read(format!("/proc/{process}/stat")).ok()?;
    let stat = String::from_utf8_lossy(&stat);
    stat.rsplit_once(") ")?.1.split(' ').nth(1)?.parse().ok()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_child_is_a_descendant_until_it_is_reaped() {
        let mut child = std::process::Command::new("sleep").arg("30").spawn().unwrap();
        assert!(descendants(std::process::id()).contains(&child.id()));
        child.kill().unwrap();
        child.wait().unwrap();
        assert!(!descendants(std::process::id()).contains(&child.id()));
    }
}
