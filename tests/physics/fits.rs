//! Long tables: fits stay linear in time and find the error of their points.

use std::time::{Duration, Instant};

use crestfall::input::{Columns, Fit, PointTable, Track, TrackSource};
use crestfall::spine::Spine;
use nalgebra::Vector3;

use crate::fixture::place;

/// Points every 0.25 m along a wavy line.
fn track(count: usize, error_m: f64) -> Track {
    let mut state = 7_u64;
    let mut unit = || {
        state ^= state >> 12;
        state ^= state << 25;
        state ^= state >> 27;
        (state.wrapping_mul(0x2545_F491_4F6C_DD1D) >> 11) as f64 / (1u64 << 53) as f64
    };
    // A uniform deviate of width √12 has the standard deviation 1.
    let mut spoilt = |x: f64| x + error_m * 12f64.sqrt() * (unit() - 0.5);
    let middle = |s: f64| Vector3::new(s, 10.0 * (0.09 * s).sin(), 8.0 * (0.07 * s).cos());
    let centre_m = (0..count).map(|i| middle(0.25 * i as f64).map(&mut spoilt));
    let columns = Columns::Bank {
        centre_m: centre_m.collect(),
        bank_left_rad: vec![0.0; count],
    };
    let mut table = PointTable::new(columns, false, Fit::Auto, place());
    table.grids.attitude = Some(1e-12);
    Track {
        name: "long".into(),
        source: TrackSource::Points(table),
        landmarks: vec![],
        place: place(),
    }
}

/// A wavy line is known to about a part in √(2n) (the relative deviation of a standard deviation); four of those.
#[test]
fn exact_error_of_forty_thousand_points() {
    let spine = Spine::from_track(&track(40_000, 0.002)).unwrap();
    let found_m = spine.fit().unwrap().error_m.unwrap();
    approx::assert_relative_eq!(found_m, 0.002, max_relative = 4.0 / 80_000_f64.sqrt());
}

fn shortest(count: usize) -> Duration {
    let track = track(count, 0.002);
    let one = || {
        let start = Instant::now();
        assert!(Spine::from_track(&track).unwrap().fit().is_some());
        start.elapsed()
    };
    (0..3).map(|_| one()).min().unwrap()
}

/// Eight times the points take eight times as long, not 64: halfway between on a logarithmic scale is the bound, and
/// any machine does the larger one in a minute.
#[test]
fn converges_time_of_a_fit_is_linear() {
    let (short, long) = (shortest(5_000), shortest(40_000));
    assert!(long < Duration::from_secs(60), "{long:?}");
    let growth = long.as_secs_f64() / short.as_secs_f64();
    assert!(growth < 22.6, "{short:?}, {long:?}: {growth}");
}
