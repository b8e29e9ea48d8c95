//! Orders of convergence of the tables and of the motion.

use crestfall::input::Goal;
use crestfall::motion::{Settings, simulate_with};
use crestfall::train::{CarPose, Poses, PosesSettings};
use nalgebra::Vector3;

use crate::fixture::*;
use crate::hilly;

fn poses(step_m: f64) -> Poses {
    let train = hilly::hilly_train(1.0);
    Poses::with_settings(&hilly::spine(), &train, PosesSettings { step_m }).unwrap()
}

/// Largest differences of value, first and second derivative of the last car's pose.
fn pose_errors(step_m: f64, exact: &Poses) -> [f64; 3] {
    let coarse = poses(step_m);
    let mut worst = [0.0; 3];
    for i in 0..3000 {
        let q = 10.0 + 0.0857 * f64::from(i);
        let pair = [&coarse, exact].map(|p| p.car(2, p.locate(q)));
        let parts = |pose: &CarPose| -> [[Vector3<f64>; 3]; 3] {
            [pose.origin, pose.forward, pose.up].map(|j| [j.value, j.d1, j.d2])
        };
        let (a, b) = (parts(&pair[0]), parts(&pair[1]));
        for part in 0..3 {
            for k in 0..3 {
                worst[k] = f64::max(worst[k], (a[part][k] - b[part][k]).norm());
            }
        }
    }
    worst
}

/// Two-point Hermite quintics (Davis, *Interpolation and Approximation*, sec. 2.5): orders 6, 5 and
/// 4. Nodes lie at every break, whatever the step, so nothing is lost there.
#[test]
fn converges_poses_in_the_grid_step() {
    let exact = poses(0.1);
    let (coarse, fine) = (pose_errors(1.6, &exact), pose_errors(0.8, &exact));
    for k in 0..3 {
        close(order(coarse[k], fine[k]), 6.0 - k as f64, 0.6);
    }
    // At the step that is used, loads at 25 m/s err by less than 1e-6 g.
    let default = pose_errors(0.1, &poses(0.05));
    assert!(default[2] * 25.0 * 25.0 / G < 1e-6, "{default:?}");
}

/// Dormand–Prince 5(4) (Hairer, Nørsett & Wanner, sec. II.5): the error of a run follows the
/// tolerance, less well than on a smooth problem: joints of elements and changes of sign of the side
/// load are corners in the force, which long steps cross.
#[test]
fn converges_motion_in_the_tolerance() {
    let train = hilly::hilly_train(1.0);
    let poses = poses(0.1);
    let mut scenario = hilly::scenario_with_all();
    scenario.zones.clear();
    scenario.release.station_m = 28.0;
    let base = ride(&poses, &train, &scenario, &Goal::TrackEnd);
    let end = |tolerance: f64| {
        let settings = Settings {
            tolerance,
            longest_step_s: 10.0,
            books: true,
        };
        let history = simulate_with(&base, settings).unwrap();
        (history.duration_s, last(&history).speed_m_s)
    };
    let best = end(1e-12);
    for tolerance in [1e-4, 1e-6, 1e-8, 1e-10] {
        let (duration_s, speed) = end(tolerance);
        let off = (duration_s - best.0).abs().max((speed - best.1).abs());
        assert!(off < 3000.0 * tolerance, "{off:e} at {tolerance:e}");
    }
    // As it is steered by default.
    let history = simulate_with(&base, Settings::default()).unwrap();
    close(history.duration_s, best.0, 2e-6);
    close(last(&history).speed_m_s, best.1, 2e-6);
}

/// The event times of a run with all zones do not move by more than 1e-6 s with the tolerance.
#[test]
fn converges_run_with_zones() {
    let train = hilly::hilly_train(1.0);
    let poses = poses(0.1);
    let scenario = hilly::scenario_with_all();
    let base = ride(&poses, &train, &scenario, &Goal::TrackEnd);
    let best = Settings {
        tolerance: 1e-12,
        longest_step_s: 0.01,
        books: true,
    };
    let exact = simulate_with(&base, best).unwrap();
    let default = simulate_with(&base, Settings::default()).unwrap();
    close(default.duration_s, exact.duration_s, 1e-6);
    close(last(&default).speed_m_s, last(&exact).speed_m_s, 1e-6);
    for station_m in [40.0, 100.0, 160.0, 250.0] {
        close(
            time_at(&default, station_m),
            time_at(&exact, station_m),
            1e-6,
        );
    }
}
