//! The only place where numbers are rounded and converted: nine significant digits for machines, a few for people.

use serde_json::{Number, Value};

use crate::envelope::Unit;

/// Units that people read; files and machines keep to SI.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Units {
    /// Metres and metres a second.
    #[default]
    Si,
    /// Feet and miles an hour.
    Us,
}

/// Metres in a foot (international foot, 1959).
const FOOT_M: f64 = 0.3048;
/// Metres a second in a mile an hour (5280 ft in 3600 s).
const MILE_PER_HOUR_M_S: f64 = 5280.0 * FOOT_M / 3600.0;

/// A number with nine significant digits; one that does not exist is null.
pub(super) fn json(value: f64) -> Value {
    rounded(value)
        .and_then(Number::from_f64)
        .map_or(Value::Null, Value::Number)
}

/// The same for a number that may be missing.
pub(super) fn json_or_null(value: Option<f64>) -> Value {
    value.map_or(Value::Null, json)
}

/// The same as plain text; empty where the number does not exist.
pub(super) fn plain(value: f64) -> String {
    rounded(value).map_or_else(String::new, |v| match v {
        // Written out, rounding errors would make a file a third longer.
        v if v != 0.0 && v.abs() < 1e-5 => format!("{v:e}"),
        v => v.to_string(),
    })
}

/// Nine significant digits, without a negative zero; `None` for what is no number.
fn rounded(value: f64) -> Option<f64> {
    if !value.is_finite() {
        return None;
    }
    let rounded: f64 = format!("{value:.8e}").parse().ok()?;
    Some(if rounded == 0.0 { 0.0 } else { rounded })
}

/// A load with its sign.
pub(super) fn load(value_g: f64) -> String {
    format!("{} g", part(value_g))
}

/// The same without its unit; what rounds to nothing has no sign.
pub(super) fn part(value_g: f64) -> String {
    let text = format!("{value_g:+.2}");
    match text.as_str() {
        "+0.00" | "-0.00" => "0.00".to_owned(),
        _ => text,
    }
}

/// An angle with its sign.
pub(super) fn angle(value_rad: f64) -> String {
    let text = format!("{:.1} deg", value_rad.to_degrees());
    match text.strip_prefix('-') {
        Some(zero) if zero.starts_with("0.0 ") => zero.to_owned(),
        _ => text,
    }
}

/// A bank with its side; what rounds to nothing has none.
pub(super) fn bank(left_rad: f64) -> String {
    let size = angle(left_rad.abs());
    match (size.as_str(), left_rad < 0.0) {
        ("0.0 deg", _) => size,
        (_, true) => format!("{size} right"),
        (_, false) => format!("{size} left"),
    }
}

/// A utilisation, with as many digits as it takes to show on which side of 1 it lies; `-` where there is none.
pub(super) fn utilisation(value: f64) -> String {
    if !value.is_finite() {
        return "-".to_owned();
    }
    (3..=12)
        .map(|digits| format!("{value:.digits$}"))
        .find(|text| value == 1.0 || text.parse::<f64>().is_ok_and(|shown| shown != 1.0))
        .unwrap_or_else(|| value.to_string())
}

/// Whether people read a utilisation as nothing.
pub(super) fn shows_as_zero(value: f64) -> bool {
    value < 0.000_5
}

/// A utilisation and its band to the same place; a band that would show as nothing is left out.
pub(super) fn utilisation_with_band(value: f64, band: f64) -> String {
    let used = utilisation(value);
    let digits = used.split_once('.').map_or(3, |(_, places)| places.len());
    let shown = format!("{band:.digits$}");
    match shown.parse::<f64>() {
        Ok(number) if number > 0.0 && value.is_finite() => format!("{used} ±{shown}"),
        _ => used,
    }
}

/// A length of time.
pub(super) fn seconds(value_s: f64) -> String {
    format!("{value_s:.2} s")
}

impl Units {
    /// A station or a length.
    pub(super) fn station(self, value_m: f64) -> String {
        match self {
            Self::Si => format!("{value_m:.1} m"),
            Self::Us => format!("{:.1} ft", value_m / FOOT_M),
        }
    }

    /// A stretch of stations.
    pub(super) fn stretch(self, from_m: f64, to_m: f64) -> String {
        match self {
            Self::Si => format!("{from_m:.1}..{to_m:.1} m"),
            Self::Us => format!("{:.1}..{:.1} ft", from_m / FOOT_M, to_m / FOOT_M),
        }
    }

    /// What a rule limits.
    pub(super) fn measured(self, unit: Unit, value: f64) -> String {
        match unit {
            Unit::StandardGravity => load(value),
            Unit::MetreASecond => self.speed(value),
        }
    }

    /// A speed.
    pub(super) fn speed(self, value_m_s: f64) -> String {
        match self {
            Self::Si => format!("{value_m_s:.1} m/s"),
            Self::Us => format!("{:.1} mph", value_m_s / MILE_PER_HOUR_M_S),
        }
    }
}

/// A factor or a count of deviations.
pub(super) fn times(value: f64) -> String {
    significant(value, 2)
}

/// A part of a whole.
pub(super) fn percent(part: f64) -> String {
    format!("{:.0}%", 100.0 * part)
}

/// Loads below this are as good as none.
const LEAST_NOISE_G: f64 = 0.001;

/// A load without its sign, such as an error of one.
pub(super) fn noise(value_g: f64) -> String {
    if value_g < LEAST_NOISE_G {
        return format!("less than {LEAST_NOISE_G} g");
    }
    format!("{} g", significant(value_g, 2))
}

/// An angle.
pub(super) fn degrees(value_rad: f64) -> String {
    format!("{:.1} deg", clean(value_rad.to_degrees(), 10.0))
}

/// An angle that may be far below a degree.
pub(super) fn fine_degrees(value_rad: f64) -> String {
    format!("{} deg", significant(value_rad.to_degrees(), 2))
}

impl Units {
    /// A height or a radius.
    pub(super) fn length(self, value_m: f64) -> String {
        match self {
            Self::Si => format!("{:.2} m", clean(value_m, 100.0)),
            Self::Us => format!("{:.2} ft", clean(value_m / FOOT_M, 100.0)),
        }
    }

    /// A length that may be far below a metre, to two digits.
    pub(super) fn fine(self, value_m: f64) -> String {
        match self {
            Self::Si if value_m < 1e-7 => format!("{value_m:.1e} m"),
            Self::Us if value_m < 1e-7 => format!("{:.1e} ft", value_m / FOOT_M),
            Self::Si if value_m < 0.1 => format!("{} mm", significant(1e3 * value_m, 2)),
            Self::Si => format!("{} m", significant(value_m, 2)),
            Self::Us if value_m < 0.1 => format!("{} in", significant(12.0 * value_m / FOOT_M, 2)),
            Self::Us => format!("{} ft", significant(value_m / FOOT_M, 2)),
        }
    }

    /// A rotation over a length.
    pub(super) fn rate(self, value_rad_m: f64) -> String {
        match self {
            Self::Si => format!("{:.2} deg/m", clean(value_rad_m.to_degrees(), 100.0)),
            Self::Us => format!(
                "{:.2} deg/ft",
                clean(value_rad_m.to_degrees() * FOOT_M, 100.0)
            ),
        }
    }

    /// A curvature or a jump of one.
    pub(super) fn curvature(self, value_1_m: f64) -> String {
        match self {
            Self::Si => format!("{} 1/m", significant(value_1_m, 3)),
            Self::Us => format!("{} 1/ft", significant(value_1_m * FOOT_M, 3)),
        }
    }

    /// How fast a curvature changes.
    pub(super) fn curvature_rate(self, value_1_m2: f64) -> String {
        match self {
            Self::Si => format!("{} 1/m2", significant(value_1_m2, 3)),
            Self::Us => format!("{} 1/ft2", significant(value_1_m2 * FOOT_M * FOOT_M, 3)),
        }
    }
}

/// A number to at most so many digits, without an exponent or zeros at its end.
fn significant(value: f64, digits: i32) -> String {
    if value == 0.0 || !value.is_finite() {
        return value.to_string();
    }
    let exponent = value.abs().log10().floor() as i32;
    let scale = 10f64.powi(digits - 1 - exponent);
    let decimals = (digits - 1 - exponent).max(0) as usize;
    let text = format!("{:.decimals$}", (value * scale).round() / scale);
    match text.contains('.') {
        true => text.trim_end_matches('0').trim_end_matches('.').to_owned(),
        false => text,
    }
}

/// Without a sign before nothing.
fn clean(value: f64, scale: f64) -> f64 {
    if (value * scale).round() == 0.0 {
        0.0
    } else {
        value
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn machines_get_nine_digits_or_null() {
        assert_eq!(json(1.0 / 3.0).to_string(), "0.333333333");
        assert_eq!(json(-123_456_789.123).to_string(), "-123456789.0");
        assert_eq!(json(-0.0).to_string(), "0.0");
        assert_eq!(json(f64::NAN), Value::Null);
        assert_eq!(json(f64::INFINITY), Value::Null);
    }

    #[test]
    fn plain_numbers_stay_short() {
        assert_eq!(plain(1.0 / 3.0), "0.333333333");
        assert_eq!(plain(-6.186_817_211e-15), "-6.18681721e-15");
        assert_eq!(plain(-0.0), "0");
        assert_eq!(plain(f64::NAN), "");
    }

    #[test]
    fn a_utilisation_beyond_one_never_reads_as_one() {
        assert_eq!(utilisation(1.000_04), "1.00004");
        assert_eq!(utilisation(0.999_96), "0.99996");
        assert_eq!(utilisation(1.0), "1.000");
        assert_eq!(utilisation(1.234_56), "1.235");
        assert_ne!(utilisation(1.0 + f64::EPSILON), "1.000");
    }

    #[test]
    fn a_band_shows_where_it_counts() {
        assert_eq!(utilisation_with_band(0.333_7, 0.446_9), "0.334 ±0.447");
        assert_eq!(utilisation_with_band(1.000_04, 0.000_1), "1.00004 ±0.00010");
        assert_eq!(utilisation_with_band(0.642, 5.6e-6), "0.642");
        assert_eq!(utilisation_with_band(f64::NAN, 0.1), "-");
    }

    #[test]
    fn what_rounds_to_nothing_has_no_sign_and_no_side() {
        assert_eq!(load(-0.001), "0.00 g");
        assert_eq!(load(-0.006), "-0.01 g");
        assert_eq!(angle(-1e-9), "0.0 deg");
        assert_eq!(bank(-1e-9), "0.0 deg");
        assert_eq!(bank(-0.5_f64.to_radians()), "0.5 deg right");
        assert_eq!(bank(36_f64.to_radians()), "36.0 deg left");
    }

    /// 26.8224 m/s are 60 mph and 30.48 m are 100 ft by the definition of the foot.
    #[test]
    fn people_may_read_feet_and_miles() {
        assert_eq!(Units::Us.station(30.48), "100.0 ft");
        assert_eq!(Units::Us.speed(26.8224), "60.0 mph");
    }
}
