//! What the demos share: reading, running, and what must hold of every case.

use std::collections::BTreeSet;
use std::fs;
use std::path::{Path, PathBuf};

use crestfall::envelope::Outcome;
use crestfall::input::{Study, read_study, read_track};
use crestfall::motion::RunEnd;
use crestfall::report::{Units, check_text};
use crestfall::spine::Spine;
use crestfall::study::{Assessment, Run, Selection, assess};

/// A file of the demos.
pub fn path(relative: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR"))
        .join("demo-tracks")
        .join(relative)
}

pub fn study(relative: &str) -> Study {
    read_study(&path(relative)).unwrap()
}

/// All scenarios and seats of some variants.
pub fn assessed(study: &Study, variants: &[&str]) -> Assessment {
    let selection = Selection {
        variants: variants.iter().map(|&name| name.to_owned()).collect(),
        ..Selection::default()
    };
    assess(study, &selection, &|_, _| ()).unwrap()
}

pub fn spine(relative: &str) -> Spine {
    Spine::from_track(&read_track(&path(relative)).unwrap()).unwrap()
}

/// Runs, by `variant / scenario`.
pub fn runs(assessment: &Assessment) -> Vec<(String, &Run)> {
    let named = |case: &crestfall::study::Case| format!("{} / {}", case.variant, case.scenario);
    let cases = assessment.cases.iter();
    cases
        .map(|case| (named(case), case.run.as_ref().unwrap()))
        .collect()
}

/// Every run completes, and its books close to 1e-6 of the energy turned over (design, 4.3).
pub fn expect_sound_runs(assessment: &Assessment) {
    for (name, run) in runs(assessment) {
        assert_eq!(run.end, RunEnd::Completed, "{name}");
        assert!(run.reversals.is_empty(), "{name}");
        let energy = &run.energy;
        let share = energy.closure_j.abs() / energy.turned_over_j;
        assert!(share <= 1e-6, "{name}: the books are open by {share:e}");
    }
}

/// Conservation of energy: nothing pushes (a tail wind slower than the train holds it back too), so the speed
/// stays below that of a fall from the highest to the lowest rails, plus 2 m for how riders and cars sit.
pub fn expect_speeds_below_free_fall(assessment: &Assessment, drop_m: f64, release_m_s: f64) {
    for (name, run) in runs(assessment) {
        let fastest_m_s = (release_m_s * release_m_s + 2.0 * 9.81 * (drop_m + 2.0)).sqrt();
        let speed_m_s = run.speed_m_s.unwrap().max.value;
        assert!(speed_m_s < fastest_m_s, "{name}: {speed_m_s} m/s");
        assert!(speed_m_s > 0.75 * fastest_m_s, "{name}: {speed_m_s} m/s");
    }
}

/// The largest utilisation of a rule over all cases and seats.
pub fn worst(assessment: &Assessment, rule: &str) -> f64 {
    let seats = assessment.cases.iter().flat_map(|case| &case.seats);
    let judged = seats.flat_map(|seat| &seat.rules).map(|r| &r.judgement);
    let used = judged
        .filter(|j| j.rule == rule)
        .map(|j| j.utilisation.unwrap());
    used.fold(f64::NAN, f64::max)
}

/// Rules that are not kept, each with the landmark where.
pub fn ways_out(assessment: &Assessment) -> BTreeSet<(&str, &str)> {
    let findings = assessment.findings.iter();
    findings
        .map(|f| (f.rule.as_str(), f.landmark.as_deref().unwrap()))
        .collect()
}

/// Every rule is inside in every case and seat; and there are as many seats and rules as the files have.
pub fn expect_all_inside(assessment: &Assessment, cases: usize, seats: usize, rules: usize) {
    assert_eq!(assessment.outcome, Outcome::Inside);
    assert_eq!(assessment.cases.len(), cases);
    for case in &assessment.cases {
        assert_eq!(case.seats.len(), seats);
        for rules_of_seat in case.seats.iter().map(|seat| &seat.rules) {
            assert_eq!(rules_of_seat.len(), rules);
            assert!(
                rules_of_seat
                    .iter()
                    .all(|r| r.judgement.outcome == Outcome::Inside)
            );
        }
    }
}

/// Text for people is at most 100 columns wide.
pub fn expect_narrow(assessment: &Assessment) {
    for units in [Units::Si, Units::Us] {
        for line in check_text(assessment, units).lines() {
            assert!(line.chars().count() <= 100, "{line}");
        }
    }
}

/// The comments of a track file tell its length and its lowest and highest rail height, to 0.1 m.
pub fn expect_told(relative: &str) {
    let spine = spine(relative);
    let heights_m = stations(&spine, 0.1).map(|s| spine.at(s).position_m.z);
    let range = |(low, high): (f64, f64), z: f64| (low.min(z), high.max(z));
    let (low_m, high_m) = heights_m.fold((f64::INFINITY, f64::NEG_INFINITY), range);
    let told = format!(
        "# Length {:.1} m; rails from {low_m:.1} m to {high_m:.1} m above the ground at z = 0.",
        spine.length_m()
    );
    let text = fs::read_to_string(path(relative)).unwrap();
    assert!(text.contains(&told), "{relative} does not say: {told}");
}

/// The spine stays 1 m above the ground, and 3 m from itself wherever more than 15 m of track lie between.
pub fn expect_clear(relative: &str) {
    let spine = spine(relative);
    let length_m = spine.length_m();
    let points: Vec<_> = stations(&spine, 0.5)
        .map(|s| (s, spine.at(s).position_m))
        .collect();
    for (index, (from_m, a)) in points.iter().enumerate() {
        assert!(a.z > 1.0, "{relative}: {} m high at {from_m} m", a.z);
        for (to_m, b) in &points[index + 1..] {
            let along_m = to_m - from_m;
            let round_m = if spine.is_closed() {
                length_m - along_m
            } else {
                f64::INFINITY
            };
            let apart_m = (a - b).norm();
            let elsewhere = along_m.min(round_m) > 15.0;
            assert!(
                !elsewhere || apart_m > 3.0,
                "{relative}: {apart_m} m between {from_m} m and {to_m} m"
            );
        }
    }
}

/// Equal steps from 0 to the end.
fn stations(spine: &Spine, step_m: f64) -> impl Iterator<Item = f64> {
    let length_m = spine.length_m();
    let count = (length_m / step_m).ceil() as usize;
    (0..=count).map(move |i| length_m * i as f64 / count as f64)
}
