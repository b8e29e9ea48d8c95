//! What happens when the machine does not do its part: kills, full disks, folders that cannot be written.
#![cfg(unix)]

use std::collections::BTreeMap;
use std::fs;
use std::os::unix::process::ExitStatusExt;
use std::path::{Path, PathBuf};
use std::process::{Child, Command, ExitStatus, Stdio};
use std::thread::sleep;
use std::time::{Duration, Instant};

use crate::fixture::Fixture;

const SIGINT: i32 = 2;
const SIGKILL: i32 = 9;
const SIGTERM: i32 = 15;

/// A ride whose export takes a while: many samples a second.
fn slow() -> Fixture {
    let study = Fixture::valley();
    let rate = "envelopes: [ride.envelope.yaml]\nrate: 5000 Hz\n";
    study.replace("ride.study.yaml", "envelopes: [ride.envelope.yaml]\n", rate);
    study
}

/// At whatever moment an export is ended, each file holds the whole of what it held before or is to hold.
#[test]
fn an_export_that_is_ended_leaves_whole_files() {
    let study = slow();
    study
        .run(&["export", "ride.study.yaml", "-o", "new"])
        .expect_status(0);
    study.replace("ride.study.yaml", "5000 Hz", "2000 Hz");
    study
        .run(&["export", "ride.study.yaml", "-o", "out"])
        .expect_status(0);
    study.replace("ride.study.yaml", "2000 Hz", "5000 Hz");
    let (new, old) = (tables(&study.path("new")), tables(&study.path("out")));
    assert_eq!(new.len(), 8);
    assert!(new.keys().eq(old.keys()) && new.values().ne(old.values()));
    let (mut ended, mut replaced) = (0, 0);
    for files_done in 0..6 {
        let signal = [SIGKILL, SIGINT, SIGTERM][files_done % 3];
        let mut child = start(&study);
        // Not before a new file is there, so that the moments spread over the whole export.
        wait_until(&mut child, || count_new(&study, &new) >= files_done.min(4));
        sleep(Duration::from_millis(7 * files_done as u64));
        let status = end(&mut child, signal);
        ended += usize::from(status.signal() == Some(signal));
        let found = tables(&study.path("out"));
        assert!(found.keys().eq(new.keys()), "after signal {signal}");
        for (name, text) in &found {
            let whole = *text == new[name] || *text == old[name];
            assert!(
                whole,
                "{name:?} after signal {signal}: {} bytes",
                text.len()
            );
            replaced += usize::from(*text == new[name]);
        }
        restore(&study, &old);
    }
    assert!(
        ended >= 3 && replaced >= 1,
        "{ended} ended, {replaced} replaced"
    );
}

/// A signal that can be caught takes the unfinished file away, whenever it comes.
#[test]
fn a_signal_leaves_no_unfinished_file() {
    let study = slow();
    for signal in [SIGINT, SIGTERM] {
        let mut child = start(&study);
        wait_until(&mut child, || !parts(&study.path("out")).is_empty());
        let status = end(&mut child, signal);
        assert_eq!(
            status.signal(),
            Some(signal),
            "the caller sees what ended it"
        );
        assert_eq!(parts(&study.path("out")), Vec::<PathBuf>::new());
        fs::remove_dir_all(study.path("out")).expect("removable");
    }
}

/// A limit on the size of files makes writing fail half way, as a full disk does.
#[test]
fn a_file_that_cannot_be_finished_is_named() {
    let study = slow();
    let limited = "trap '' XFSZ; ulimit -f 64; exec \"$0\" export ride.study.yaml -o out";
    let output = Command::new("sh")
        .args(["-c", limited, env!("CARGO_BIN_EXE_crestfall")])
        .current_dir(study.path(""))
        .output()
        .expect("a shell");
    let err = String::from_utf8_lossy(&output.stderr);
    assert_eq!(output.status.code(), Some(2), "{err}");
    let path = Path::new("out/as-drawn/full/car1-left.csv")
        .display()
        .to_string();
    assert!(
        err.contains(&format!("{path} could not be written")),
        "{err}"
    );
    assert!(tables(&study.path("out")).is_empty() && parts(&study.path("out")).is_empty());
}

/// The rights of files do not bind the superuser; a file in the place of a folder binds everybody.
#[test]
fn a_folder_that_cannot_be_made_is_named() {
    let study = Fixture::level();
    study.write("taken", "a file");
    for arguments in [
        &["export", "ride.study.yaml", "-o", "taken/below"][..],
        &["new", "taken/below"],
        &["new", "taken"],
    ] {
        let ran = study.run(arguments);
        ran.expect_status(2);
        assert!(ran.err.contains("taken"), "{ran:?}");
    }
    assert_eq!(
        fs::read_to_string(study.path("taken")).expect("there"),
        "a file"
    );
}

#[cfg(target_os = "linux")]
#[test]
fn a_full_disk_is_told_by_every_command_that_prints() {
    let study = Fixture::level();
    for arguments in [
        &["check", "ride.study.yaml"][..],
        &["check", "ride.study.yaml", "--format", "json"],
        &["export", "ride.study.yaml", "-o", "out"],
        &["schema", "track"],
        &["completions", "bash"],
        &["new", "fresh"],
    ] {
        let full = fs::OpenOptions::new().write(true).open("/dev/full");
        let output = study
            .command(arguments)
            .stdout(full.expect("a device of Linux"))
            .output()
            .expect("the program starts");
        let err = String::from_utf8_lossy(&output.stderr);
        assert_eq!(output.status.code(), Some(2), "{arguments:?}: {err}");
        assert!(
            err.contains("standard output could not be written"),
            "{err}"
        );
    }
}

#[test]
fn a_reader_that_goes_away_is_no_mistake_of_any_command() {
    let study = Fixture::level();
    for arguments in [&["schema", "operation"][..], &["completions", "zsh"]] {
        let mut child = study
            .command(arguments)
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .expect("the program starts");
        drop(child.stdout.take());
        let output = child.wait_with_output().expect("it ends");
        let err = String::from_utf8_lossy(&output.stderr).into_owned();
        assert_eq!((output.status.code(), err.as_str()), (Some(0), ""));
    }
}

#[test]
fn a_study_that_is_not_there_or_a_folder_is_named() {
    let study = Fixture::level();
    fs::create_dir(study.path("folder")).expect("a folder");
    for command in ["check", "export"] {
        for (name, said) in [("missing.yaml", "there is no file"), ("folder", "folder")] {
            let mut arguments = vec![command, name];
            arguments.extend(
                ["-o", "out"]
                    .iter()
                    .take(if command == "export" { 2 } else { 0 }),
            );
            let ran = study.run(&arguments);
            ran.expect_status(2);
            assert!(ran.err.contains(said) && ran.err.contains(name), "{ran:?}");
        }
    }
    assert!(
        !study.path("out").exists(),
        "nothing is made for a study that is wrong"
    );
}

fn start(study: &Fixture) -> Child {
    study
        .command(&["export", "ride.study.yaml", "-o", "out"])
        .stdout(Stdio::null())
        .stderr(Stdio::null())
        .spawn()
        .expect("the program starts")
}

/// Waits for a moment in the export, at most until its end.
fn wait_until(child: &mut Child, come: impl Fn() -> bool) {
    let start = Instant::now();
    while !come() && child.try_wait().expect("a child").is_none() {
        assert!(
            start.elapsed() < Duration::from_secs(120),
            "the moment never came"
        );
        sleep(Duration::from_millis(1));
    }
}

/// Sends a signal and waits; by the number of the one process that was started here.
fn end(child: &mut Child, signal: i32) -> ExitStatus {
    let kill = Command::new("kill")
        .args([format!("-{signal}"), child.id().to_string()])
        .stderr(Stdio::null())
        .status();
    kill.expect("the command `kill`");
    child.wait().expect("it ends")
}

/// How many files hold the new content.
fn count_new(study: &Fixture, new: &BTreeMap<PathBuf, String>) -> usize {
    let out = study.path("out");
    let is_new = |name: &&PathBuf| {
        let size = fs::metadata(out.join(name)).map_or(0, |data| data.len());
        size == new[*name].len() as u64
    };
    new.keys().filter(is_new).count()
}

fn restore(study: &Fixture, old: &BTreeMap<PathBuf, String>) {
    for (name, text) in old {
        fs::write(study.path("out").join(name), text).expect("writable");
    }
}

/// All exported files below a folder with their content.
fn tables(folder: &Path) -> BTreeMap<PathBuf, String> {
    let named =
        |end: &'static str| move |path: &PathBuf| path.extension().is_some_and(|e| e == end);
    let files = below(folder).into_iter().filter(named("csv"));
    let read = |path: PathBuf| {
        let text = fs::read_to_string(&path).expect("readable");
        let name = path.strip_prefix(folder).expect("below it").to_owned();
        (name, text)
    };
    files.map(read).collect()
}

/// Files that are no finished ones.
fn parts(folder: &Path) -> Vec<PathBuf> {
    let mut files = below(folder);
    files.retain(|path| path.extension().is_none_or(|e| e != "csv"));
    files
}

fn below(folder: &Path) -> Vec<PathBuf> {
    let Ok(entries) = fs::read_dir(folder) else {
        return Vec::new();
    };
    let paths = entries.map(|entry| entry.expect("an entry").path());
    let deep = |path: PathBuf| match path.is_dir() {
        true => below(&path),
        false => vec![path],
    };
    paths.flat_map(deep).collect()
}
