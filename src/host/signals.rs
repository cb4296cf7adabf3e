//! Names of signals, and what their cause often is.

use super::FaultKind;

/// The sentence for a process that was ended by `signal`.
pub(super) fn fault(signal: i32, memory: Option<u64>) -> FaultKind {
    let (name, cause) = match signal {
        1 => ("SIGHUP, hang-up", ""),
        2 => ("SIGINT, interrupt", ""),
        3 => ("SIGQUIT, quit", ""),
        4 => ("SIGILL, illegal instruction", "built for another processor, or a trap of the compiler"),
        5 => ("SIGTRAP, trap", ""),
        6 => ("SIGABRT, abort", "an assertion, an uncaught exception or exhausted memory"),
        7 => ("SIGBUS, bus error", "an access beyond the end of a mapped file or a misaligned one"),
        8 => ("SIGFPE, arithmetic exception", "an integer division by zero, or trapping floating-point exceptions"),
        9 => ("SIGKILL, killed", "the system was out of memory, or somebody killed it"),
        11 => ("SIGSEGV, segmentation fault", "an access outside an array, or an exhausted stack"),
        13 => ("SIGPIPE, broken pipe", "it wrote to a pipe that nobody reads"),
        14 => ("SIGALRM, alarm", ""),
        15 => ("SIGTERM, terminated", "somebody asked it to end"),
        24 => ("SIGXCPU, processor time limit", ""),
        25 => ("SIGXFSZ, file size limit", ""),
        31 => ("SIGSYS, bad system call", ""),
        _ => ("another signal", ""),
    };
    let mut hint = if cause.is_empty() { String::new() } else { format!("; the cause often is {cause}") };
    if let (6 | 9 | 11, Some(bytes)) = (signal, memory) {
        hint.push_str(&format!("; its memory limit is {bytes} bytes, raise `memory_limit` if it needs more"));
    }
    FaultKind::Signalled { signal, name, hint }
}
