//! Everything that a scheme can do wrong, done by a real process: each fault has its sentence with the scheme's last words, the harness
//! goes on, and no process remains.
//!
//! Trusted: the operating system. What remains is looked for in /proc by the working folder, which every descendant inherits and
//! which each fault has for itself.

use std::path::PathBuf;
use std::sync::atomic::{AtomicUsize, Ordering};
use std::time::{Duration, Instant};

use crate::support::{self, Formulas, c_library, command, periodic, plugin, python, rust_plugin, schemes};
use gridassay::host::{HostError, Limits, Route, SchemeSource, Session};
use gridassay_scheme::{Advance, SchemeError};

/// A folder of its own, so that what is left running can be told from everything else.
fn folder() -> PathBuf {
    static NEXT: AtomicUsize = AtomicUsize::new(0);
    let name = format!("fault-{}-{}", std::process::id(), NEXT.fetch_add(1, Ordering::Relaxed));
    let folder = support::scratch().join(name);
    std::fs::create_dir_all(&folder).unwrap();
    folder.canonicalize().unwrap()
}

/// Opens, prepares and takes two steps; the first error, if there is one.
fn run(source: &SchemeSource) -> Result<Session, HostError> {
    let mut session = Session::open(source)?;
    let mut harness = Formulas { lengths: vec![8] };
    session.prepare(&periodic(8), &mut harness)?;
    let mut state = support::state(&[8]);
    for n in 0..2 {
        let request = Advance { time: f64::from(n), step: 0.01, steps: 1, state: &mut state, earlier: &mut [] };
        session.advance(request, &mut harness)?;
    }
    Ok(session)
}

/// Whether the log holds `text`, now or soon: it is read beside the conversation, not in step with it.
fn logged(session: &Session, text: &str) -> bool {
    let until = Instant::now() + Duration::from_secs(10);
    while !session.stderr_tail().contains(text) && Instant::now() < until {
        std::thread::sleep(Duration::from_millis(5));
    }
    session.stderr_tail().contains(text)
}

/// Limits that a fault meets soon; the start is long, since a busy machine starts an interpreter slowly.
fn limits() -> Limits {
    Limits {
        start: Duration::from_secs(30),
        request: Duration::from_millis(1500),
        message: 1 << 20,
        ..Limits::default()
    }
}

/// What a fault must lead to: words of the sentence.
fn expect(name: &str, source: &SchemeSource, words: &[&str], last_words: Option<&str>) {
    let begun = Instant::now();
    let error = match run(source) {
        Ok(session) => panic!("{name}: nothing was noticed; the log:\n{}", session.stderr_tail()),
        Err(error) => error,
    };
    assert!(matches!(error, HostError::Fault(_)), "{name}: no fault but {error}");
    let sentence = error.to_string();
    for word in words.iter().chain(&last_words) {
        assert!(sentence.contains(word), "{name}: `{word}` is not in: {sentence}");
    }
    assert!(!sentence.chars().any(|c| c.is_control() && c != '\n'), "{name}: control characters in {sentence:?}");
    assert!(sentence.len() < 4000, "{name}: {} bytes are no sentence", sentence.len());
    assert!(begun.elapsed() < Duration::from_secs(40), "{name} took {:?}", begun.elapsed());
    let left = support::remaining(&source.folder);
    assert!(left.is_empty(), "{name}: still running: {left:?}");
}

fn python_source(fault: &str, limits: Limits) -> SchemeSource {
    let script = schemes().join("faulty.py");
    let route = command(&[&python(), script.to_str().unwrap(), fault]);
    SchemeSource { folder: folder(), limits, ..support::source(route) }
}

/// Fault of faulty.py, and words of its sentence.
const CONVERSATION: &[(&str, &[&str])] = &[
    ("exits at once", &["left with exit status 3", "during start-up"]),
    ("exits at once with status 0", &["left with exit status 0", "must go on answering"]),
    ("raises", &["left with exit status 1", "IndexError"]),
    ("contract 2", &["speaks version 2 of the scheme contract", "version 1"]),
    ("contract one", &["speaks version \"one\""]),
    ("no contract", &["missing field `contract`"]),
    ("no name", &["missing field `name`", "describe"]),
    ("empty name", &["its name is empty"]),
    ("unknown key", &["unknown field `ofers`", "`offers`"]),
    ("no offers", &["offers nothing"]),
    ("offers a number", &["invalid type: integer `7`"]),
    ("unknown operation", &["unknown variant `advanced`", "`advance`"]),
    ("four dimensions", &["has dimensions [4], not some of 1, 2 and 3"]),
    ("no operations", &["has no operation"]),
    ("describes as list", &["does not fit the contract"]),
    ("describes as null", &["does not fit the contract"]),
    ("refuses to describe", &["answers `describe` with an error", "I am nobody"]),
    ("says something else", &["no JSON-RPC 2.0", "hello"]),
    ("nodes for nothing", &["belong to `cell_nodes` alone", "during prepare"]),
    ("prepares a list", &["the answer to `prepare` is", "not an object"]),
    ("prepares a stranger", &["has `mesh`, which is not asked for"]),
    ("too short", &["state.u has 7 values where 8 are needed", "during advance"]),
    ("too long", &["state.u has 9 values where 8 are needed"]),
    ("empty array", &["state.u has 0 values where 8 are needed"]),
    ("array a text", &["state.u cannot be read", "no multiple of 8"]),
    ("array a number", &["state.u is the number 0.0, not an array of numbers"]),
    ("array an object", &["state.u is an object, not an array of numbers"]),
    ("array of texts", &["state.u is a list, not an array of numbers"]),
    ("array of arrays", &["state.u is a list, not an array of numbers"]),
    ("array of booleans", &["value 1 begins with `true`, which is no number"]),
    ("field missing", &["state lacks `u`; add it"]),
    ("field unknown", &["state has `v`, which is not asked for; expected: `u`"]),
    ("state missing", &["the answer to `advance` lacks `state`"]),
    ("state null", &["state is null, not an object"]),
    ("state an array", &["state is an array, not an object"]),
    ("result null", &["the answer to `advance` is null, not an object"]),
    ("base64 that is none", &["state.u cannot be read", "RFC 4648"]),
    ("base64 of odd bytes", &["9 bytes, which is no multiple of 8"]),
    ("base64 too short", &["state.u has 1 values where 8 are needed"]),
    ("no JSON", &["is no JSON", "{state: 1}"]),
    ("half JSON", &["is no JSON"]),
    ("invalid UTF-8", &["is no JSON"]),
    ("nested JSON", &["is no JSON", "recursion limit"]),
    ("nested lists", &["is no JSON", "recursion limit"]),
    ("a huge number", &["is no JSON", "number out of range"]),
    ("no version of JSON-RPC", &["lacks \"jsonrpc\": \"2.0\""]),
    ("no id", &["lacks an `id`"]),
    ("both result and error", &["both `result` and `error`"]),
    ("neither result nor error", &["no `method`, `result` or `error`"]),
    ("an error without a code", &["`error` lacks a code and a message"]),
    ("another id", &["answered id 4711 where id 3 was asked"]),
    ("an id of text", &["answered id \"3\" where id 3 was asked"]),
    ("the id of an earlier request", &["answered id 1 a second time"]),
    ("many small lists", &["more than 65536 lists"]),
    ("answers twice", &["answered id 2 a second time"]),
    ("closes stdin", &["closed its std", "still running"]),
    ("exits in the middle", &["left with exit status 5", "during advance"]),
    ("raises in the middle", &["left with exit status 1", "KeyError: 'velocity'"]),
    ("SIGSEGV", &["signal 11 (SIGSEGV, segmentation fault)"]),
    ("SIGABRT", &["signal 6 (SIGABRT, abort)"]),
    ("SIGKILL", &["signal 9 (SIGKILL, killed)"]),
    ("SIGTERM", &["signal 15 (SIGTERM, terminated)"]),
    ("SIGFPE", &["signal 8 (SIGFPE"]),
    ("SIGBUS", &["signal 7 (SIGBUS"]),
    ("SIGILL", &["signal 4 (SIGILL"]),
    ("hangs", &["did not answer within 1.5 s", "`time_limit`"]),
    ("hangs and ignores SIGTERM", &["did not answer within 1.5 s"]),
    ("hangs in the middle of a line", &["did not answer within 1.5 s"]),
    ("floods stdout with lines", &["did not answer within 1.5 s", "the weather is fine"]),
    ("floods stdout without an end of line", &["more than 1048576 bytes", "`message_limit`"]),
    ("floods stderr", &["did not answer within 1.5 s", "the weather is fine"]),
    ("closes stdout", &["closed its stdout and is still running"]),
    ("closes stdout and stderr", &["closed its stdout and is still running"]),
    ("leaves a child and exits", &["left with exit status 6"]),
    ("leaves a child that left the group and exits", &["left with exit status 6"]),
    ("has a stubborn family and hangs", &["did not answer within 1.5 s"]),
    ("a bad side", &["boundary.side is \"x_middle\"; the sides are x_lower, x_upper"]),
    ("a side of number", &["boundary.side is 3"]),
    ("side and sides", &["either `side` or `sides`"]),
    ("no side", &["either `side` or `sides`"]),
    ("too many layers", &["boundary.layers is 100000, not 0 to 64"]),
    ("a bad time", &["source.time is not finite"]),
    ("an infinite time", &["source.time is not finite"]),
    ("a time of text", &["source.time is the text \"now\", not a number"]),
    ("no time", &["source lacks `time`"]),
    ("uneven points", &["1 and 2 coordinates"]),
    ("points a number", &["source.points is the number 7, not a list"]),
    ("a question unknown", &["`weather` is none of `source`, `boundary` and `coefficient`"]),
    ("a question with a stranger", &["source has `when`, which is not asked for"]),
    ("no name of coefficient", &["coefficient lacks `name`"]),
];

/// Faults whose flood of stderr has washed their first line away, or that say nothing.
const WITHOUT_LAST_WORDS: &[&str] =
    &["floods stderr", "floods stdout with lines", "raises", "raises in the middle", "nested JSON", "nested lists"];

#[test]
fn every_fault_of_a_conversation_has_its_sentence_and_leaves_nothing_running() {
    assert!(CONVERSATION.len() >= 40);
    let next = AtomicUsize::new(0);
    std::thread::scope(|scope| {
        for _ in 0..4 {
            scope.spawn(|| {
                while let Some((fault, words)) = CONVERSATION.get(next.fetch_add(1, Ordering::Relaxed)) {
                    let last = format!("about to {fault}");
                    let last = (!WITHOUT_LAST_WORDS.contains(fault)).then_some(last.as_str());
                    expect(fault, &python_source(fault, limits()), words, last);
                }
            });
        }
    });
}

#[test]
fn the_same_process_without_a_fault_works() {
    // Without this the table above could pass because nothing works.
    let source = python_source("none", limits());
    let session = run(&source).unwrap();
    assert!(!support::remaining(&source.folder).is_empty());
    drop(session);
    assert_eq!(support::remaining(&source.folder), [""; 0]);
}

#[test]
fn start_up_has_a_limit_of_its_own() {
    for fault in ["hangs at start", "ignores SIGTERM and hangs at start"] {
        let source = python_source(fault, Limits { start: Duration::from_secs(2), ..limits() });
        expect(fault, &source, &["did not answer `describe` within 2 s", "`start_limit`", "during start-up"], None);
    }
}

#[test]
fn limits_of_processes_and_memory_are_kept() {
    let source = python_source("has too many processes", Limits { processes: Some(8), ..limits() });
    expect("processes", &source, &["processes at once", "the limit is 8", "`process_limit`"], None);
    let source = python_source("allocates", Limits { memory: Some(1 << 30), ..limits() });
    expect("memory", &source, &["left with exit status 1", "MemoryError"], None);
}

#[test]
fn a_program_that_cannot_be_started_is_named_with_the_remedy() {
    let here = folder();
    let write = |name: &str, text: &str, executable: bool| {
        use std::os::unix::fs::PermissionsExt;
        let path = here.join(name);
        std::fs::write(&path, text).unwrap();
        std::fs::set_permissions(&path, std::fs::Permissions::from_mode(if executable { 0o755 } else { 0o644 }))
            .unwrap();
    };
    write("plain.sh", "#!/bin/sh\ncat\n", false);
    write("no-interpreter", "#!/no/such/interpreter\n", true);
    write("no-format", "\u{1}\u{2}\u{3}\u{4} neither a script nor a program", true);
    let cases: [(&[&str], &[&str]); 5] = [
        (&["no-such-program-anywhere"], &["could not be started", "check the name of the program"]),
        (&["./missing.py", "x"], &["`./missing.py x`", "check the name of the program"]),
        (&["./plain.sh"], &["make the file executable"]),
        (&["./no-interpreter"], &["the interpreter in its first line"]),
        (&["./no-format"], &["begin the script with #!"]),
    ];
    for (words, expected) in cases {
        let source = SchemeSource { folder: here.clone(), limits: limits(), ..support::source(command(words)) };
        expect(words[0], &source, expected, None);
    }
    let nowhere = SchemeSource { folder: here.join("nowhere"), ..support::source(command(&["cat"])) };
    expect("folder", &nowhere, &["could not be started", "its working folder does not exist"], None);
    let nothing = SchemeSource { folder: here, ..support::source(Route::Command(Vec::new())) };
    expect("no command", &nothing, &["could not be started", "command is empty"], None);
}

#[test]
fn a_session_goes_on_with_a_fresh_process_after_a_fault() {
    let source = python_source("SIGSEGV", limits());
    let mut session = Session::open(&source).unwrap();
    let mut harness = Formulas { lengths: vec![8] };
    for _ in 0..3 {
        session.prepare(&periodic(8), &mut harness).unwrap();
        let mut state = support::state(&[8]);
        let mut advance = |session: &mut Session| {
            let request = Advance { time: 0.0, step: 0.01, steps: 1, state: &mut state, earlier: &mut [] };
            session.advance(request, &mut Formulas { lengths: vec![8] })
        };
        assert!(matches!(advance(&mut session), Err(HostError::Fault(_))));
        assert!(session.stderr_tail().contains("about to SIGSEGV"));
        assert_eq!(support::remaining(&source.folder), [""; 0]);
        assert!(matches!(advance(&mut session), Err(HostError::Refused(SchemeError::NotPrepared))));
    }
}

#[test]
fn a_scheme_that_stays_after_the_end_is_ended() {
    let source = python_source("stays after the end", limits());
    drop(run(&source).unwrap());
    assert_eq!(support::remaining(&source.folder), [""; 0]);
}

fn c_source(fault: &str) -> SchemeSource {
    let library =
        c_library(&schemes().join("faulty.c"), &[&format!("-DFAULT={fault}"), "-Wno-infinite-recursion", "-O1"]);
    SchemeSource { folder: folder(), limits: limits(), ..support::source(plugin(library)) }
}

#[test]
fn every_fault_of_a_library_has_its_sentence() {
    let cases: [(&str, &[&str]); 11] = [
        ("OTHER_CONTRACT", &["built for version 7 of the scheme contract", "rebuild it"]),
        ("DESCRIBES_CONTRACT_3", &["built for version 3 of the scheme contract"]),
        ("NO_CONTRACT", &["does not export `gridassay_contract`", "C linkage"]),
        ("NO_DESCRIBE", &["does not export `gridassay_describe`"]),
        ("NULL_TEXT", &["`gridassay_describe` returns NULL"]),
        ("NO_JSON", &["`gridassay_describe` is no JSON"]),
        ("MISFIT", &["missing field `operations`"]),
        ("SEGFAULT", &["signal 11 (SIGSEGV", "outside an array"]),
        ("EXIT", &["left with exit status 4"]),
        ("STACK", &["signal", "stack"]),
        // The standard library aborts over a descriptor that is gone where it checks, in builds for debugging.
        (
            "CLOSES_ALL",
            if cfg!(debug_assertions) { &["signal 6 (SIGABRT, abort)"] } else { &["left with exit status 0"] },
        ),
    ];
    for (fault, words) in cases {
        expect(fault, &c_source(fault), words, None);
    }
}

#[test]
fn a_library_that_says_no_is_no_fault() {
    let cases = [
        ("BAD_SIDE", "there is no side 9"),
        ("WRONG_ROOM", "the answer has 8 values, there is room for 13"),
        ("OWN_MESSAGE", "the matrix is singular at row 3"),
        ("OWN_CODE", "code 12345, without a message"),
    ];
    for (fault, words) in cases {
        match run(&c_source(fault)) {
            Err(HostError::Refused(SchemeError::Failed(message))) => assert!(message.contains(words), "{message}"),
            Err(error) => panic!("{fault}: {error}"),
            Ok(_) => panic!("{fault}: nothing was noticed"),
        }
    }
    let session = run(&c_source("WRITE_TO_1")).unwrap();
    assert!(logged(&session, "what a library writes goes to the log"));
}

#[test]
fn every_fault_of_a_plugin_crate_has_its_sentence() {
    let source = |name: &str, limits: Limits| {
        let route = match rust_plugin(name) {
            Route::Plugin { path, name } => Route::Plugin { path: schemes().join(path), name },
            other => other,
        };
        SchemeSource { folder: folder(), limits, ..support::source(route) }
    };
    let cases: [(&str, &[&str]); 7] = [
        ("faulty-panics", &["panicked: index 7 of 5", "during advance"]),
        ("faulty-panics-in-prepare", &["panicked: there is no case like this", "during prepare"]),
        ("faulty-exits", &["left with exit status 9"]),
        ("faulty-aborts", &["signal 6 (SIGABRT"]),
        ("faulty-overflows", &["signal 6 (SIGABRT", "overflowed its stack"]),
        ("faulty-hangs", &["did not answer within 1.5 s"]),
        ("nobody", &["it has no scheme `nobody`"]),
    ];
    for (fault, words) in cases {
        expect(fault, &source(fault, limits()), words, None);
    }
    let small = source("faulty-allocates", Limits { memory: Some(2 << 30), ..limits() });
    expect("allocates", &small, &["signal 6", "memory limit is 2147483648 bytes"], None);
    let session = run(&source("faulty-prints", limits())).unwrap();
    assert!(logged(&session, "what a library prints goes to the log"));
    match run(&source("faulty-lengthens", limits())) {
        Err(HostError::Refused(SchemeError::Failed(message))) => assert!(message.contains("[9]"), "{message}"),
        Err(error) => panic!("{error}"),
        Ok(_) => panic!("nothing was noticed"),
    }
}

#[test]
fn what_is_no_library_is_named_with_the_remedy() {
    let here = folder();
    std::fs::write(here.join("text.so"), "this is no library\n").unwrap();
    let at =
        |path: &str| SchemeSource { folder: here.clone(), limits: limits(), ..support::source(plugin(path.into())) };
    expect("missing", &at("missing.so"), &["cannot be loaded", "No such file"], None);
    expect("text", &at("text.so"), &["cannot be loaded", "text.so"], None);
    let broken = |folder: &str, manifest: &str, source: &str| {
        std::fs::create_dir_all(here.join(folder).join("src")).unwrap();
        std::fs::write(here.join(folder).join("Cargo.toml"), manifest).unwrap();
        std::fs::write(here.join(folder).join("src/lib.rs"), source).unwrap();
        Session::open(&at(folder)).err().unwrap().to_string()
    };
    let manifest = "[workspace]\n[package]\nname = \"broken\"\nedition = \"2024\"\n[lib]\n";
    let cdylib = format!("{manifest}crate-type = [\"cdylib\"]\n");
    let error = broken("uncompiled", &cdylib, "pub fn f() -> f64 { \"one\" }\n");
    assert!(error.contains("does not compile") && error.contains("mismatched types"), "{error}");
    let error = broken("plain", manifest, "");
    assert!(error.contains("builds no shared library") && error.contains("cdylib"), "{error}");
    std::fs::create_dir_all(here.join("empty")).unwrap();
    let error = Session::open(&at("empty")).err().unwrap().to_string();
    assert!(error.contains("holds no Cargo.toml"), "{error}");
    let error = Session::open(&support::source(Route::Classical("upwing".into()))).err().unwrap().to_string();
    assert!(error.contains("no classical scheme `upwing`") && error.contains("upwind"), "{error}");
}
