//! Tinderbox: a closed circuit from a table of two rails, a lap and a little more.

use approx::assert_relative_eq;

use crate::demo::*;

const STUDY: &str = "tinderbox/tinderbox.study.yaml";
const RAILS: &str = "tinderbox/rails.track.yaml";

#[test]
fn every_case_runs_a_lap_inside_the_envelope() {
    let assessment = assessed(&study(STUDY), &[]);
    expect_sound_runs(&assessment);
    expect_all_inside(&assessment, 4, 4, 4);
    let lap_m = spine(RAILS).length_m();
    for (name, run) in runs(&assessment) {
        assert_relative_eq!(run.end_station_m, 250.0, epsilon = 1e-6);
        assert!(run.end_station_m > lap_m, "{name}");
    }
    expect_narrow(&assessment);
}

/// Who looks backward feels on the left what who looks forward in the same place feels on the right.
#[test]
fn backward_seats_swap_left_and_right() {
    let assessment = assessed(&study(STUDY), &[]);
    let case = &assessment.cases[0];
    let extremes = |name: &str| {
        let seat = case.seats.iter().find(|s| s.seat == name).unwrap();
        seat.felt_g[1].unwrap()
    };
    // Front and rear seats sit 0.35 m to either side of the middle, so the turns reach them a little differently.
    let (front, rear) = (extremes("front-left"), extremes("rear-left"));
    assert_relative_eq!(front.max.value, -rear.min.value, epsilon = 0.05);
    assert_relative_eq!(front.min.value, -rear.max.value, epsilon = 0.05);
    // Tight and nearly flat, but below the 1.8 g that a ride of this kind is kept to (common practice).
    assert!((0.5..1.8).contains(&front.max.value), "{front:?}");
}

/// Rails 0.9 m apart everywhere, as the head of the table says; the middle of the first pair is station 0.
#[test]
fn rails_are_a_gauge_apart_and_clear_of_themselves() {
    expect_told(RAILS);
    expect_clear(RAILS);
    let mut rows = csv::ReaderBuilder::new()
        .comment(Some(b'#'))
        .from_path(path("tinderbox/rails.csv"))
        .unwrap();
    for row in rows.records() {
        let at: Vec<f64> = row
            .unwrap()
            .iter()
            .map(|cell| cell.parse().unwrap())
            .collect();
        let gauge_m = (0..3)
            .map(|i| (at[i] - at[i + 3]).powi(2))
            .sum::<f64>()
            .sqrt();
        assert_relative_eq!(gauge_m, 0.9, epsilon = 1e-6);
    }
}
