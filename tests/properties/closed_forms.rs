//! Sustained levels of pulses whose form is known.

use crestfall::input::Between;

use crate::fixture::{assert_close, judged, limit_for};

/// Levels a pulse of 5 g is sustained for, from `d_signal.py` of the catalogue of closed forms (case D05, mpmath).
#[test]
fn exact_sustained_levels_of_pulses() {
    let half_sine = |d: f64| move |t: f64| 5.0 * (std::f64::consts::PI * t / d).sin();
    let triangle = |d: f64| move |t: f64| 5.0 * (1.0 - (2.0 * t / d - 1.0).abs());
    let sin_squared = |d: f64| move |t: f64| 5.0 * (std::f64::consts::PI * t / d).sin().powi(2);
    let trapezoid = |rise: f64, hold: f64, fall: f64| {
        move |t: f64| 5.0 * (t / rise).min((rise + hold + fall - t) / fall).min(1.0)
    };
    let skewed = |t: f64| 5.0 * (t / 0.3) * (1.0 - t / 0.3).exp();
    check_level(half_sine(1.0), 1.0, 0.2, 4.755_282_581_475_768);
    check_level(half_sine(1.0), 1.0, 0.5, 3.535_533_905_932_738);
    check_level(half_sine(2.0), 2.0, 1.0, 3.535_533_905_932_738);
    check_level(half_sine(0.5), 0.5, 0.2, 4.045_084_971_874_737);
    check_level(triangle(1.0), 1.0, 0.2, 4.0);
    check_level(triangle(2.0), 2.0, 1.0, 2.5);
    check_level(triangle(0.5), 0.5, 0.2, 3.0);
    check_level(sin_squared(1.0), 1.0, 0.2, 4.522_542_485_937_369);
    check_level(sin_squared(0.5), 0.5, 0.2, 3.272_542_485_937_369);
    check_level(trapezoid(0.2, 0.5, 0.3), 1.0, 0.4, 5.0);
    check_level(trapezoid(0.2, 0.5, 0.3), 1.0, 0.8, 2.0);
    check_level(trapezoid(0.1, 0.0, 0.4), 0.5, 0.25, 2.5);
    check_level(skewed, 5.0, 0.2, 4.731_403_782_701_557);
    check_level(skewed, 5.0, 0.5, 3.578_116_419_034_256);
    check_level(skewed, 5.0, 1.0, 1.481_553_039_333_876);
}

/// Two 4 g rectangles of 0.3 s with a gap at 1 g are no spell of 0.6 s (catalogue, case D05).
#[test]
fn exact_two_rectangles_do_not_join() {
    let mut signal = vec![1.0; 1];
    signal.extend([4.0; 301]);
    signal.extend([1.0; 49]);
    signal.extend([4.0; 301]);
    signal.push(1.0);
    assert_close(level_for(&signal, 1000.0, 0.3), 4.0, 1e-12);
    assert_close(level_for(&signal, 1000.0, 0.5), 1.0, 1e-12);
}

/// Half sine of 5 g and 1 s at 100 Hz: time above 4 g with interpolated crossings (catalogue, case D06).
#[test]
fn exact_crossings_are_interpolated() {
    let signal = half_sine_at_100_hz();
    let expected_s = 0.409_561_025_320_989_6;
    // The level for exactly that duration must be 4 g again.
    assert_close(level_for(&signal, 100.0, expected_s), 4.0, 1e-12);
}

/// A window of k intervals has both its ends inside (catalogue, case D05, SciPy on samples).
#[test]
fn exact_level_of_sampled_half_sine() {
    let signal = half_sine_at_100_hz();
    assert_close(
        level_for(&signal, 100.0, 0.20),
        4.755_282_581_475_767,
        1e-12,
    );
    assert_close(
        level_for(&signal, 100.0, 0.50),
        3.535_533_905_932_737_3,
        1e-12,
    );
}

/// The ratio (5 − T)/limit(T), limit falling with ln T from 4 at 0.5 s to 1 at 8 s, has its maximum between the points.
#[test]
fn exact_log_time_interior_maximum() {
    let signal = [0.0, 5.0, 0.0];
    let mut demand = limit_for(0.5);
    demand.curve = vec![(0.5, 4.0), (8.0, 1.0)];
    demand.between = Between::LogTime;
    let spell = judged(&demand, &signal, 0.4).governing.expect("a load");
    // Base of the triangle 5 s, so that S(T) = 5 − T; maximum by a scan of the closed form.
    let ratio = |t: f64| (5.0 - t) / (4.0 - 3.0 * (t / 0.5).ln() / 16f64.ln());
    let best = (0..=2_000_000)
        .map(|i| ratio(0.5 + 7.5 * f64::from(i) / 2e6))
        .fold(0.0, f64::max);
    assert!(
        best > 1.05 * ratio(0.5),
        "the case would not show an interior maximum"
    );
    assert_close(spell.utilisation, best, 1e-11);
    assert_close(ratio(spell.duration_s), best, 1e-11);
}

/// The level a pulse keeps for `duration_s`, against a closed form: sampled so finely that only its chords differ.
fn check_level(pulse: impl Fn(f64) -> f64, length_s: f64, duration_s: f64, expected_g: f64) {
    let rate_hz = 20_000.0;
    let count = (length_s * rate_hz).round() as usize;
    let signal: Vec<f64> = (0..=count).map(|i| pulse(i as f64 / rate_hz)).collect();
    assert_close(level_for(&signal, rate_hz, duration_s), expected_g, 1e-6);
}

/// S(T), read off a limit of 1 g for all durations that are judged from T on.
fn level_for(signal: &[f64], rate_hz: f64, duration_s: f64) -> f64 {
    let judgement = judged(&limit_for(duration_s), signal, rate_hz);
    judgement.utilisation.expect("long enough to be judged")
}

fn half_sine_at_100_hz() -> Vec<f64> {
    (0..=100)
        .map(|i| 5.0 * (std::f64::consts::PI * f64::from(i) / 100.0).sin())
        .collect()
}
