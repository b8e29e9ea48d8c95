//! The commands as a user meets them: files in, text and exit status out.

mod check;
mod close_call;
mod export;
mod faults;
mod fixture;
mod new;
mod rules;
mod speed_rules;
mod spine;
mod wrong_input;

use std::io::Read;
use std::process::Stdio;

use fixture::Fixture;

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
