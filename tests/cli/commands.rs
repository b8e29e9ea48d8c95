//! The commands as a user meets them: files in, text and exit status out.

mod check;
mod export;
mod fixture;
mod rules;
mod speed_rules;
mod spine;
mod wrong_input;

use std::fs;
use std::io::Read;
use std::process::Stdio;

use fixture::Fixture;

#[cfg(target_os = "linux")]
#[test]
fn a_full_disk_is_told() {
    let full = fs::OpenOptions::new()
        .write(true)
        .open("/dev/full")
        .expect("a device of Linux");
    let output = Fixture::level()
        .command(&["check", "ride.study.yaml"])
        .stdout(full)
        .output()
        .expect("the program starts");
    assert_eq!(output.status.code(), Some(2));
    assert!(
        String::from_utf8_lossy(&output.stderr).contains("standard output could not be written")
    );
}

#[test]
fn a_reader_that_goes_away_is_no_mistake() {
    let study = Fixture::valley();
    let mut child = study
        .command(&["check", "ride.study.yaml", "--format", "json"])
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("the program starts");
    drop(child.stdout.take());
    let mut err = String::new();
    let mut stream = child.stderr.take().expect("piped");
    stream.read_to_string(&mut err).expect("text");
    let status = child.wait().expect("it ends");
    assert_eq!((status.code(), err.as_str()), (Some(1), ""));
}
