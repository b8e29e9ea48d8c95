//! A spine station by station as comma-separated values; empty where a value does not exist.
//!
//! Stations are evenly spaced, 0.25 m or a little less apart, from 0 to the end. `…_sd_…` is half of
//! the two-deviation margin (near the ends of a smoothed track with its bias), empty for elements and
//! where nothing is known of the points' error.

use std::io;

use crate::report::number::plain;
use crate::spine::{Margin, Spine, SpinePoint};

const COLUMNS: [&str; 16] = [
    "station_m",
    "x_m",
    "y_m",
    "z_m",
    "radius_m",
    "curvature_1_m",
    "grade_deg",
    "bank_left_deg",
    "roll_rate_rad_m",
    "pitch_rate_rad_m",
    "yaw_rate_rad_m",
    "direction_sd_rad",
    "curvature_sd_1_m",
    "roll_sd_rad",
    "roll_rate_sd_rad_m",
    "roll_acceleration_sd_rad_m2",
];

/// Largest distance of stations, m.
const STEP_M: f64 = 0.25;

/// Curvature below which a radius is left empty, 1/m.
const STRAIGHT_1_M: f64 = 1e-9;

/// Writes a spine, a line a station.
///
/// # Errors
/// Those of the writer.
pub fn write_spine(spine: &Spine, out: impl io::Write) -> io::Result<()> {
    let mut table = csv::Writer::from_writer(out);
    table.write_record(COLUMNS)?;
    let steps = (spine.length_m() / STEP_M).ceil();
    for step in 0..=steps as usize {
        let station_m = spine.length_m() * (step as f64 / steps);
        table.write_record(row(spine, station_m).map(plain))?;
    }
    table.flush()
}

/// NaN where there is no value, which is written as nothing.
fn row(spine: &Spine, station_m: f64) -> [f64; 16] {
    let point = spine.at(station_m);
    let SpinePoint { position_m, .. } = point;
    let curvature_1_m = point.curvature_1_m();
    let radius_m = point.radius_m().filter(|_| curvature_1_m > STRAIGHT_1_M);
    let rates = point.rotation_rad_m();
    let margin = spine.margin_at(station_m);
    let deviation = |of: fn(&Margin) -> f64| {
        let half_width = of(&margin);
        if half_width > 0.0 {
            0.5 * half_width
        } else {
            f64::NAN
        }
    };
    [
        station_m,
        position_m.x,
        position_m.y,
        position_m.z,
        radius_m.unwrap_or(f64::NAN),
        curvature_1_m,
        point.grade_rad().to_degrees(),
        point.bank_left_rad().map_or(f64::NAN, f64::to_degrees),
        rates.x,
        rates.y,
        rates.z,
        deviation(|m| m.direction),
        deviation(|m| m.bend_1_m),
        deviation(|m| m.roll_rad),
        deviation(|m| m.roll_rate_rad_m),
        deviation(|m| m.roll_bend_rad_m2),
    ]
}
