//! How far the numerics may be off: from a second, coarser solution of the same case, and from a closer
//! look between samples that lie far apart.

use super::plan::{CaseId, Design, Plan};
use crate::input::GravityTerm;
use crate::loads::{CarLoads, car_loads};
use crate::motion::{History, Samples, Settings, simulate_with};

/// Times a second at which the two solutions are compared.
const COMPARED_HZ: f64 = 25.0;

/// A difference beyond this is looked at closely: at a jump of the load, such as a brake letting go
/// or the end of a ramp, it is one of time and not of load, g.
const CLOSE_LOOK_G: f64 = 1e-4;

/// A load that changes over two samples by so many times what it does over the two on either side jumps.
const JUMP: f64 = 3.0;

/// Samples closer than this leave no load between them unseen, Hz.
const CLOSE_RATE_HZ: f64 = 500.0;

/// Steps of the coarser solution over those of the finer.
pub(super) const COARSER: f64 = 2.0;

/// Local error of the coarser solution over that of the finer: steps four times as long at order 5.
const COARSER_TOLERANCE: f64 = 1024.0;

/// Differences between a solution and a coarser one, which are larger than the solution's own error.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub(super) struct Numerics {
    /// Of any load, g.
    pub(super) load_g: f64,
    /// Of any speed at the same time, m/s.
    pub(super) speed_m_s: f64,
}

/// Compares a case with its coarser solution.
///
/// # Errors
/// Why nothing can be said: the coarser run could not be made, or ends otherwise.
pub(super) fn estimate(
    plan: &Plan<'_>,
    id: CaseId,
    history: &History<'_>,
    samples: &Samples,
) -> Result<Numerics, String> {
    let design = &plan.variants[id.variant];
    let mut ride = plan.ride(id);
    ride.poses = &design.coarse;
    let fine = Settings::default();
    let settings = Settings {
        tolerance: COARSER_TOLERANCE * fine.tolerance,
        longest_step_s: COARSER * fine.longest_step_s,
        books: false,
    };
    let coarse = simulate_with(&ride, settings)
        .map_err(|error| format!("its coarser solution could not be made: {error}"))?;
    if coarse.end != history.end {
        return Err(
            "a coarser solution ends otherwise: the run hangs on the last digits".to_owned(),
        );
    }
    let stride = (samples.rate_hz / COMPARED_HZ).round().max(1.0) as usize;
    let coarse = coarse.samples(samples.rate_hz / stride as f64);
    let solved = compared(plan, design, samples, &coarse, stride);
    let sampled = between_samples(plan, design, history, samples);
    Ok(Numerics {
        load_g: solved.load_g + sampled.load_g,
        speed_m_s: solved.speed_m_s + sampled.speed_m_s,
    })
}

/// How far loads and the speed go between two samples beyond both of them.
///
/// At [`CLOSE_RATE_HZ`] and above that is nothing that tells.
fn between_samples(
    plan: &Plan<'_>,
    design: &Design<'_>,
    history: &History<'_>,
    samples: &Samples,
) -> Numerics {
    let parts = (CLOSE_RATE_HZ / samples.rate_hz).ceil() as usize;
    let mut beyond = Numerics::default();
    if parts <= 1 {
        return beyond;
    }
    let close = history.samples(samples.rate_hz * parts as f64);
    beyond.speed_m_s = overshoot(&close.speed_m_s, parts);
    for car in 0..design.seats.len() {
        let loads = loads_of(plan, design, &design.poses, car, &close);
        let axes = loads.seats.iter().flatten();
        beyond.load_g = axes
            .map(|axis_g| overshoot(axis_g, parts))
            .fold(beyond.load_g, f64::max);
    }
    beyond
}

/// The furthest that a series goes beyond those of its values, one in `parts`, between which it lies.
fn overshoot(values: &[f64], parts: usize) -> f64 {
    let beyond = |(i, value): (usize, &f64)| {
        let before = values[i - i % parts];
        let after = *values.get(i - i % parts + parts).unwrap_or(&before);
        (value - before.max(after)).max(before.min(after) - value)
    };
    values.iter().enumerate().map(beyond).fold(0.0, f64::max)
}

fn compared(
    plan: &Plan<'_>,
    design: &Design<'_>,
    fine: &Samples,
    coarse: &Samples,
    stride: usize,
) -> Numerics {
    // The last samples of the finer run have no neighbours to look at.
    let count = coarse
        .speed_m_s
        .len()
        .min(fine.speed_m_s.len().saturating_sub(2) / stride);
    let picked = fine.picked((0..count).map(|i| i * stride));
    let coarse = coarse.picked(0..count);
    let speeds = picked.speed_m_s.iter().zip(&coarse.speed_m_s);
    let mut numerics = Numerics {
        load_g: 0.0,
        speed_m_s: speeds.map(|(a, b)| (a - b).abs()).fold(0.0, f64::max),
    };
    for car in 0..design.seats.len() {
        let of = |poses, samples: &Samples| loads_of(plan, design, poses, car, samples);
        let (a, b) = (of(&design.poses, &picked), of(&design.coarse, &coarse));
        for (seat, (a, b)) in a.seats.iter().zip(&b.seats).enumerate() {
            for axis in 0..3 {
                for i in 0..count {
                    let difference_g = (a[axis][i] - b[axis][i]).abs();
                    if !difference_g.is_finite() {
                        numerics.load_g = f64::INFINITY;
                    }
                    if difference_g <= numerics.load_g {
                        continue;
                    }
                    let at_jump = difference_g > CLOSE_LOOK_G && i * stride >= 2 && {
                        let around = fine.picked(i * stride - 2..=i * stride + 2);
                        jumps(&of(&design.poses, &around).seats[seat][axis])
                    };
                    if !at_jump {
                        numerics.load_g = difference_g;
                    }
                }
            }
        }
    }
    numerics
}

/// Whether a load jumps at the middle one of five samples.
fn jumps(load_g: &[f64]) -> bool {
    let change = |from: usize, to: usize| (load_g[to] - load_g[from]).abs();
    change(1, 3) > JUMP * (change(0, 1) + change(3, 4))
}

fn loads_of(
    plan: &Plan<'_>,
    design: &Design<'_>,
    poses: &crate::train::Poses,
    car: usize,
    samples: &Samples,
) -> CarLoads {
    let gravity_m_s2 = plan.study.gravity_m_s2;
    car_loads(
        poses,
        car,
        &design.seats[car],
        samples,
        gravity_m_s2,
        GravityTerm::Included,
    )
}
