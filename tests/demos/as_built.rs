//! Saltglass as built: 2 mm of survey noise on the eased spine, and a slip of the pen in one row.

use std::fs;
use std::path::Path;

use crestfall::input::{read_study, read_track};
use crestfall::motion::RunEnd;
use crestfall::spine::{FitMethod, FitReport, Spine};
use crestfall::study::Assessment;

use crate::demo::*;

const STUDY: &str = "saltglass/saltglass.study.yaml";
const EASED: &str = "saltglass/eased.track.yaml";
const AS_BUILT: &str = "saltglass/as-built.track.yaml";

/// Of the middle of two rails, each 2 mm off (and rounded to 1 mm, which hardly adds to it).
const MIDDLE_ERROR_M: f64 = 0.002 * std::f64::consts::FRAC_1_SQRT_2;

const GAUGE_M: f64 = 1.1;

#[test]
fn a_survey_of_the_eased_ride_is_inside_with_its_band() {
    let assessment = assessed(&study(STUDY), &["as-built"]);
    expect_sound_runs(&assessment);
    expect_speeds_below_free_fall(&assessment, 36.1, 1.8);
    expect_all_inside(&assessment, 8, 24, 7);
    expect_narrow(&assessment);
    let seats = assessment.cases.iter().flat_map(|case| &case.seats);
    for found in seats.flat_map(|seat| &seat.rules).map(|r| &r.judgement) {
        assert!((1e-4..0.05).contains(&found.band), "{found:?}");
    }
}

/// The table was made by a program of its own from the eased elements: their utilisations are the truth that the
/// bands must hold, two standard deviations wide.
#[test]
fn exact_bands_of_the_survey_hold_the_eased_ride() {
    let assessment = assessed(&study(STUDY), &["eased", "as-built"]);
    assert_eq!(assessment.cases.len(), 16);
    let (eased, as_built) = assessment.cases.split_at(8);
    let (mut held, mut count) = (0.0, 0.0);
    for (eased, as_built) in eased.iter().zip(as_built) {
        assert_eq!(eased.scenario, as_built.scenario);
        let seats = eased.seats.iter().zip(&as_built.seats);
        for (designed, found) in seats.flat_map(|(e, b)| e.rules.iter().zip(&b.rules)) {
            let (designed, found) = (&designed.judgement, &found.judgement);
            let apart = (designed.utilisation.unwrap() - found.utilisation.unwrap()).abs();
            held += f64::from(apart <= found.band + designed.band);
            count += 1.0;
        }
    }
    assert!(held / count >= 0.95, "{held} of {count}");
}

#[test]
fn it_is_as_its_comments_tell_and_stays_clear_of_itself() {
    expect_told(AS_BUILT);
    expect_clear(AS_BUILT);
}

/// The landmarks are those of the eased track, to 0.1 m: a survey starts where the track does.
#[test]
fn landmarks_lie_where_those_of_the_eased_track_do() {
    let (eased, as_built) = (spine(EASED), spine(AS_BUILT));
    assert_eq!(eased.stretches().len(), as_built.stretches().len());
    for (designed, found) in eased.stretches().iter().zip(as_built.stretches()) {
        assert_eq!(designed.name, found.name);
        assert!((designed.from_m - found.from_m).abs() < 0.06, "{found:?}");
        assert!((designed.to_m - found.to_m).abs() < 0.12, "{found:?}");
    }
}

/// The table was made by a program of its own: its fit lies within its error of Crestfall's eased spine, and the
/// margins hold that spine's loads.
#[test]
fn exact_fit_recovers_the_eased_spine() {
    let (eased, as_built) = (spine(EASED), spine(AS_BUILT));
    let (mut squares_m2, mut worst_m, mut held, mut count) = (0.0, 0.0_f64, 0.0, 0.0);
    for i in 0..2580 {
        let s = 0.25 * f64::from(i);
        let found = as_built.at(s);
        let mut near_m = s;
        for _ in 0..4 {
            let at = eased.at(near_m);
            near_m += (found.position_m - at.position_m).dot(&at.tangent.value);
        }
        let truth = eased.at(near_m);
        let apart_m = (found.position_m - truth.position_m).norm();
        squares_m2 += apart_m * apart_m;
        worst_m = worst_m.max(apart_m);
        let bend_1_m = (found.curvature_1_m() - truth.curvature_1_m()).abs();
        held += f64::from(bend_1_m <= as_built.margin_at(s).bend_1_m);
        count += 1.0;
    }
    assert!((squares_m2 / count).sqrt() < MIDDLE_ERROR_M);
    assert!(worst_m < 3.0 * MIDDLE_ERROR_M);
    assert!(held / count > 0.95);
}

/// The study's folder again, with another `fit` of the survey, with or without the row that is left out.
fn refitted_folder(fit: &str, except: bool) -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    let (saltglass, envelopes) = ("demo-tracks/saltglass", "envelopes");
    for part in [saltglass, envelopes] {
        let from = Path::new(env!("CARGO_MANIFEST_DIR")).join(part);
        fs::create_dir_all(folder.path().join(part)).unwrap();
        for file in fs::read_dir(from).unwrap().map(Result::unwrap) {
            let to = folder.path().join(part).join(file.file_name());
            fs::copy(file.path(), to).unwrap();
        }
    }
    let track = folder.path().join("demo-tracks").join(AS_BUILT);
    let mut text = fs::read_to_string(&track).unwrap();
    text = text.replace("fit: {within: 2 mm}", &format!("fit: {fit}"));
    if !except {
        text = text.replace("  except: [701]\n", "");
    }
    fs::write(track, text).unwrap();
    folder
}

fn refitted(fit: &str, except: bool) -> FitReport {
    let folder = refitted_folder(fit, except);
    let track = read_track(&folder.path().join("demo-tracks").join(AS_BUILT)).unwrap();
    let spine = Spine::from_track(&track).unwrap();
    spine.fit().unwrap().clone()
}

/// The words of the track's comment. Side friction grows with the load across: interpolated noise brakes.
#[test]
fn through_every_point_the_train_is_braked_by_noise() {
    let folder = refitted_folder("exact", true);
    let rough = read_study(&folder.path().join("demo-tracks").join(STUDY)).unwrap();
    let (rough, smooth) = (
        assessed(&rough, &["as-built"]),
        assessed(&study(STUDY), &["as-built"]),
    );
    for ((name, rough), (_, smooth)) in runs(&rough).into_iter().zip(runs(&smooth)) {
        let fastest = |run: &crestfall::study::Run| run.speed_m_s.unwrap().max.value;
        assert!(fastest(rough) < fastest(smooth), "{name}");
        assert_eq!(
            name.contains("cold"),
            rough.end != RunEnd::Completed,
            "{name}"
        );
    }
    assert!(worst_of(&rough, "no-trim") < worst_of(&smooth, "no-trim") - 0.03);
}

/// The largest utilisation of `z-down` in a scenario.
fn worst_of(assessment: &Assessment, scenario: &str) -> f64 {
    let case = assessment
        .cases
        .iter()
        .find(|c| c.scenario == scenario)
        .unwrap();
    let rules = case.seats.iter().flat_map(|seat| &seat.rules);
    let used = rules
        .filter(|r| r.judgement.rule == "z-down")
        .map(|r| r.judgement.utilisation.unwrap());
    used.fold(f64::NAN, f64::max)
}

/// The slip lifts the right rail by 36 mm and the middle by 18 mm; the track climbs there by less than 12 deg,
/// and the curve follows a single point by no more than a third.
#[test]
fn exact_slip_shows_as_the_only_blunder_where_it_is_not_left_out() {
    for fit in ["{within: 2 mm}", "auto"] {
        let report = refitted(fit, false);
        let [slip] = report.blunders[..] else {
            panic!("{fit}: {:?}", report.blunders)
        };
        assert_eq!((slip.row, slip.point), (701, 700));
        assert!((0.012..0.0195).contains(&slip.residual_m), "{slip:?}");
        assert_eq!(report.worst[0], slip);
        assert_eq!(refitted(fit, true).blunders, []);
    }
}

/// What went into the table: 2 mm a coordinate of each rail.
#[test]
fn exact_errors_are_found_as_they_were_made() {
    let [stated, found] = ["{within: 2 mm}", "auto"].map(|fit| refitted(fit, true));
    assert_eq!(stated.method, FitMethod::Within);
    approx::assert_relative_eq!(stated.error_m.unwrap(), MIDDLE_ERROR_M, epsilon = 1e-12);
    assert_eq!(found.method, FitMethod::CrossValidated);
    approx::assert_relative_eq!(found.error_m.unwrap(), MIDDLE_ERROR_M, max_relative = 0.05);
    let roll_rad = 0.002 * std::f64::consts::SQRT_2 / GAUGE_M;
    for report in [stated, found] {
        approx::assert_relative_eq!(
            report.roll_error_rad.unwrap(),
            roll_rad,
            max_relative = 0.05
        );
    }
}
