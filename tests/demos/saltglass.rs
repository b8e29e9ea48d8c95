//! Saltglass: `as-drawn` leaves the envelopes in three ways, `eased` in none. For `as-built` see `as_built.rs`.

use std::collections::BTreeSet;

use approx::assert_relative_eq;
use crestfall::envelope::Outcome;
use crestfall::study::Assessment;

use crate::demo::*;

const STUDY: &str = "saltglass/saltglass.study.yaml";
const AS_DRAWN: &str = "saltglass/as-drawn.track.yaml";
const EASED: &str = "saltglass/eased.track.yaml";

#[test]
fn as_drawn_is_outside_in_the_three_ways_its_comments_tell() {
    let assessment = assessed(&study(STUDY), &["as-drawn"]);
    expect_sound_runs(&assessment);
    expect_speeds_below_free_fall(&assessment, 36.6, 1.8);
    assert_eq!(assessment.outcome, Outcome::Outside);
    let told = [
        ("y-left", "helix"),
        ("z-down", "pull-out"),
        ("z-floor", "drop"),
    ];
    assert_eq!(ways_out(&assessment), BTreeSet::from(told));
    expect_held_too_long(&assessment);
    expect_narrow(&assessment);
}

/// The pull-out's peak alone is within the limit for a peak (5 g at 0.2 s in the envelope file): it is the
/// time that is too long.
fn expect_held_too_long(assessment: &Assessment) {
    let held = assessment.findings.iter();
    let held = held.filter(|f| f.rule == "z-down" && f.outcome == Outcome::Outside);
    for spell in held.map(|f| f.breach.worst) {
        assert!(spell.peak < 5.0, "{spell:?}");
        assert!(spell.duration_s > 0.4, "{spell:?}");
        assert!(spell.load > spell.limit && spell.limit < 5.0, "{spell:?}");
    }
}

#[test]
fn eased_is_inside_with_a_few_per_cent_to_spare() {
    let assessment = assessed(&study(STUDY), &["eased"]);
    expect_sound_runs(&assessment);
    expect_speeds_below_free_fall(&assessment, 36.1, 1.8);
    expect_all_inside(&assessment, 8, 24, 7);
    for rule in [
        "z-down",
        "z-up",
        "y-left",
        "y-right",
        "z-floor",
        "x-braking",
        "x-back",
    ] {
        let used = worst(&assessment, rule);
        assert!((0.2..0.97).contains(&used), "{rule}: {used}");
    }
    expect_narrow(&assessment);
}

#[test]
fn both_variants_are_as_their_comments_tell_and_stay_clear_of_themselves() {
    for track in [AS_DRAWN, EASED] {
        expect_told(track);
        expect_clear(track);
    }
}

/// Stated lengths add up; an element given by its radius r that changes only grade by Δ is 15/8 r Δ long
/// (the largest rate of 10x³ − 15x⁴ + 6x⁵ is 15/8, at x = 1/2).
#[test]
fn exact_length_of_the_elements() {
    let drop_m = |radius_m: f64, degrees: f64| 15.0 / 8.0 * radius_m * degrees.to_radians();
    let drawn_m = 12.0
        + drop_m(17.0, 66.0)
        + 6.0
        + 31.0
        + 88.0
        + 35.0
        + 16.0
        + 42.0
        + 25.0
        + 46.0
        + 31.0
        + 32.0
        + 34.0
        + 38.0
        + 21.0
        + 82.0
        + 22.0
        + 49.0;
    let eased_m = 12.0
        + drop_m(19.0, 54.0)
        + 48.0
        + 115.0
        + 34.0
        + 12.0
        + 42.0
        + 25.0
        + 46.0
        + 31.0
        + 32.0
        + 34.0
        + 9.0
        + 21.0
        + 82.0
        + 22.0
        + 47.0;
    assert_relative_eq!(spine(AS_DRAWN).length_m(), drawn_m, epsilon = 1e-7);
    assert_relative_eq!(spine(EASED).length_m(), eased_m, epsilon = 1e-7);
}

/// The words of the comments: a loop stands on its head, an over-banked turn leans beyond 90 deg.
#[test]
fn the_loop_goes_over_and_the_turn_leans_beyond_a_right_angle() {
    for track in [AS_DRAWN, EASED] {
        let spine = spine(track);
        let find = |name: &str| spine.stretches().iter().find(|s| s.name == name).unwrap();
        let top = find("loop");
        assert!(spine.at(0.5 * (top.from_m + top.to_m)).up.value.z < -0.8);
        let turn = find("over-bank");
        let lean = spine.at(turn.to_m).bank_left_rad().unwrap().to_degrees();
        assert_relative_eq!(lean, 93.0, epsilon = 1e-6);
    }
}
