//! The noise floor: what two standard deviations of the points' error make of the load v²κ/g₀, and
//! what points would make it small.

use nalgebra::Vector3;

use super::extremes::Extreme;
use super::points::{Survey, median};
use super::{Finding, FindingKind};
use crate::STANDARD_GRAVITY_M_S2;
use crate::input::{Fit, PointTable};
use crate::spine::Spine;
use crate::spine::fit;
use crate::spine::margin::Noise;
use crate::spine::report::{FitMethod, FitReport};

/// The noise floor that is wanted, g.
pub const WANTED_G: f64 = 0.05;

/// Part of the track that may lie above it: the margins themselves hold nineteen times in twenty.
const ABOVE: f64 = 0.05;

/// Loads that the points' error alone can make.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct NoiseFloor {
    /// At which it is told, m/s.
    pub speed_m_s: f64,
    /// Of the spine.
    pub spine: Floor,
    /// Of the quintic through the same points.
    pub interpolated: Floor,
    /// Points that would bring nineteen twentieths of the track under [`WANTED_G`]; none where they are
    /// already, and where no points would.
    pub remedy: Option<Remedy>,
}

/// Two standard deviations of v²κ/g₀ along a track.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Floor {
    /// The largest, g.
    pub largest_g: Extreme,
    /// What nineteen twentieths of the track lie below, g.
    pub most_g: f64,
    /// What one half lies below, g.
    pub median_g: f64,
    /// Part of the track above [`WANTED_G`].
    pub above: f64,
}

/// Either of two changes of the points, each by itself.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Remedy {
    /// Standard deviation of a point of the centre line, m, at the same spacing; none below a
    /// thousandth of its own, where the law is not to be trusted.
    pub error_m: Option<f64>,
    /// Spacing, m, at the same error; none beyond a thousandth or a thousandfold.
    pub spacing_m: Option<f64>,
    /// Where the numbers come from.
    pub law: Law,
}

/// How noise goes with error and spacing.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Law {
    /// Interpolated: as error/spacing².
    Interpolated,
    /// Smoothed: as a power of error² × spacing, on which alone dense points depend; the power of
    /// the error was measured by fitting this curve anew with points of a quarter of the error.
    Measured {
        /// Power of the error; that of the spacing is half of it.
        power: f64,
    },
}

/// The error that cross-validation finds beside a stated one, m.
pub(super) fn cross_validated(table: &PointTable) -> Option<f64> {
    let stated = matches!(table.fit, Fit::Within { .. });
    stated.then(|| fit::cross_validated_error(table)).flatten()
}

/// The noise floor, where the points' error is known.
pub(super) fn floor(
    spine: &Spine,
    survey: &Survey<'_>,
    report: &FitReport,
    speed_m_s: f64,
) -> Option<NoiseFloor> {
    let error_m = report.error_m?;
    let gain = speed_m_s * speed_m_s / STANDARD_GRAVITY_M_S2;
    let halves = halves(&survey.stations_m, spine);
    let along = halves.iter().map(|&s| gain * spine.margin_at(s).bend_1_m);
    let own = Floor::new(&halves, along.collect());
    let parameters = fit::chords(&survey.centre_m);
    let noise = Noise::Interpolated {
        deviation: error_m,
        parameters: parameters.clone(),
    };
    Some(NoiseFloor {
        speed_m_s,
        spine: own,
        interpolated: Floor::new(&halves, floor_of(&noise, &parameters, gain)),
        remedy: remedy(spine, survey, report, &own, gain),
    })
}

/// The finding, where too much of the track lies above what is wanted, or nothing is known.
pub(super) fn finding(noise: Option<&NoiseFloor>) -> Option<Finding> {
    let Some(noise) = noise else {
        return Some(Finding {
            kind: FindingKind::ErrorUnknown,
            row: None,
            station_m: None,
            size: None,
            against: None,
        });
    };
    (noise.spine.above > ABOVE).then_some(Finding {
        kind: FindingKind::NoiseFloor,
        row: None,
        station_m: Some(noise.spine.largest_g.station_m),
        size: Some(noise.spine.largest_g.value),
        against: Some(WANTED_G),
    })
}

impl Floor {
    fn new(stations_m: &[f64], along_g: Vec<f64>) -> Self {
        let mut largest_g = Extreme {
            value: 0.0,
            station_m: 0.0,
        };
        for (&station_m, &value) in stations_m.iter().zip(&along_g) {
            if value > largest_g.value {
                largest_g = Extreme { value, station_m };
            }
        }
        let above = along_g.iter().filter(|&&g| g > WANTED_G).count();
        Self {
            largest_g,
            most_g: most(along_g.clone()),
            above: above as f64 / along_g.len() as f64,
            median_g: median(along_g),
        }
    }
}

/// What nineteen twentieths lie at or below.
fn most(mut values: Vec<f64>) -> f64 {
    values.sort_by(f64::total_cmp);
    values[((1.0 - ABOVE) * (values.len() - 1) as f64).ceil() as usize]
}

/// Every point and half-way to the next, up to the end.
fn halves(stations_m: &[f64], spine: &Spine) -> Vec<f64> {
    let end = spine.is_closed().then(|| spine.length_m());
    let stations = stations_m.iter().copied().chain(end).collect::<Vec<_>>();
    midway(&stations)
}

fn midway(places: &[f64]) -> Vec<f64> {
    let pairs = places.windows(2).flat_map(|p| [p[0], 0.5 * (p[0] + p[1])]);
    pairs.chain(places.last().copied()).collect()
}

fn floor_of(noise: &Noise, parameters: &[f64], gain: f64) -> Vec<f64> {
    let half_width = |p: &f64| gain * noise.half_width(*p, 2);
    midway(parameters).iter().map(half_width).collect()
}

/// Part of the error that is tried to see how the noise goes with it.
const TRIED: f64 = 0.25;

/// Powers of the error outside of these are no law of noise: below, less error is no way to less
/// noise; above, something else than the points' error makes the margin.
const POWERS: std::ops::RangeInclusive<f64> = 0.02..=2.0;

fn remedy(
    spine: &Spine,
    survey: &Survey<'_>,
    report: &FitReport,
    own: &Floor,
    gain: f64,
) -> Option<Remedy> {
    let error_m = report.error_m?;
    if own.most_g <= WANTED_G {
        return None;
    }
    let part = WANTED_G / own.most_g;
    let (power, spacing_power, law) = match report.method {
        // What is interpolated gets worse as points come closer.
        FitMethod::Exact => (1.0, -2.0, Law::Interpolated),
        FitMethod::Within | FitMethod::Grid | FitMethod::CrossValidated => {
            let power = measured_power(spine, survey, error_m, own, gain)?;
            (power, 0.5 * power, Law::Measured { power })
        }
    };
    let trusted = |factor: &f64| (1e-3..=1e3).contains(factor);
    let factor = |power: f64| Some(part.powf(1.0 / power)).filter(trusted);
    Some(Remedy {
        error_m: factor(power).map(|f| f * error_m),
        spacing_m: factor(spacing_power).map(|f| f * survey.median_m()),
        law,
    })
}

/// The curve is taken for the truth, its points are spoilt with a part of the error and fitted anew.
fn measured_power(
    spine: &Spine,
    survey: &Survey<'_>,
    error_m: f64,
    own: &Floor,
    gain: f64,
) -> Option<f64> {
    let tried_m = TRIED * error_m;
    let mut random = SplitMix(1);
    let mut spoilt = |s: &f64| spine.at(*s).position_m + random.vector() * tried_m;
    let centre_m = survey
        .stations_m
        .iter()
        .map(&mut spoilt)
        .collect::<Vec<_>>();
    let noise = fit::path_noise(&centre_m, spine.is_closed(), tried_m)?;
    let tried_g = most(floor_of(&noise, &fit::chords(&centre_m), gain));
    let power = (tried_g / own.most_g).ln() / TRIED.ln();
    POWERS.contains(&power).then_some(power)
}

/// SplitMix64 (Steele, Lea & Flood 2014): the same numbers on every run.
struct SplitMix(u64);

impl SplitMix {
    /// Uniform, of standard deviation 1.
    fn next(&mut self) -> f64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        let unit = ((z ^ (z >> 31)) >> 11) as f64 / (1u64 << 53) as f64;
        (unit - 0.5) * 12f64.sqrt()
    }

    fn vector(&mut self) -> Vector3<f64> {
        Vector3::new(self.next(), self.next(), self.next())
    }
}
