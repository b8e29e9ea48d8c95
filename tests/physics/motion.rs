//! Motion along the track.

use approx::assert_relative_eq;
use crestfall::input::{Resistance, Start};
use crestfall::motion::RunEnd;
use crestfall::train::Poses;

use crate::fixture::*;

/// Meriam & Kraige, *Dynamics*, sec. 3/4: a = g (sin − μ cos) on a 30° slope, μ = 0.02; 40 m from rest.
#[test]
fn exact_incline_with_rolling_resistance() {
    let start = Start {
        z_m: 40.0,
        grade_rad: -30f64.to_radians(),
        ..Start::default()
    };
    let spine = element_spine(start, vec![element(60.0)]);
    let train = point_train(1.0, 5000.0);
    let poses = Poses::new(&spine, &train).unwrap();
    let mut scenario = scenario(10.0, 0.0);
    scenario.resistance = Resistance {
        running: 0.02,
        ..scenario.resistance
    };
    let goal = until(50.0);
    let history = run(&poses, &train, &scenario, &goal);
    assert_eq!(history.end, RunEnd::Completed);
    assert_relative_eq!(history.duration_s, 4.1110734133601087, epsilon = 1e-9);
    let state = history.state_at(history.duration_s).unwrap();
    assert_relative_eq!(state.speed_m_s, 19.459637898952892, epsilon = 1e-9);
    assert_relative_eq!(state.acceleration_m_s2, 4.7334688394795467, epsilon = 1e-11);
    println!("{:?}", history.energy);
}
