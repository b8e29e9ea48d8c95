//! Why a load is what it is: its parts, each through the same filter, and what would bring it to the limit.
//!
//! With the spine's r(s) at the seat's station, v and v̇ of the train, and e the rider axis of the rule:
//! gravity −g⃗·e, normal v² r″·e, tangential v̇ t·e, all over g₀; the offset is what is left of the load.

use nalgebra::Vector3;

use super::assessment::{Change, Parts, Remedy, Why};
use super::plan::View;
use super::seat::SeatView;
use crate::STANDARD_GRAVITY_M_S2;
use crate::envelope::Spell;
use crate::input::{Axis, GravityTerm, Seat};
use crate::loads::{self, Filtered, car_from_rider};
use crate::spine::SpinePoint;

/// The filtered parts of a seat's load along one rider axis, up to a moment.
pub(super) struct PartsAt<'a> {
    seat: &'a Seat,
    axis: Axis,
    record: &'a Filtered,
    /// Gravity, normal and tangential at that moment, g.
    parts_g: [f64; 3],
}

impl<'a> PartsAt<'a> {
    /// Splits the load that `record` holds along an axis at a position of it.
    ///
    /// The parts are filtered from as far back as the filter remembers, so that they sum to the load.
    pub(super) fn at(
        view_of: &SeatView<'a>,
        view: &View,
        record: &'a Filtered,
        axis: Axis,
        position: f64,
    ) -> Self {
        let memory = (loads::memory_s(view.filter, record.rate_hz) * record.rate_hz).ceil();
        let first = (position.floor() - memory).max(0.0) as usize;
        let mut parts = [const { Vec::new() }; 3];
        let last = view_of.station_m.len() - 1;
        for sample in (first..=position.ceil() as usize).map(|sample| sample.min(last)) {
            let unfiltered_g = unfiltered_parts_g(view_of, view.gravity, axis, sample);
            for (part, value_g) in parts.iter_mut().zip(unfiltered_g) {
                part.push(value_g);
            }
        }
        let filtered = loads::filtered(&parts, record.rate_hz, view.filter);
        let read = |part_g: Vec<f64>| read_at(&part_g, position - first as f64);
        Self {
            seat: view_of.seat,
            axis,
            record,
            parts_g: filtered.axes_g.map(read),
        }
    }

    /// The state of things at a spell's peak.
    pub(super) fn why(&self, spell: &Spell, speed_m_s: f64, spine: &SpinePoint) -> Why {
        let [gravity, normal, tangential] = self.parts_g;
        let load_g = read_at(&self.record.axes_g[self.axis as usize], spell.peak_position);
        Why {
            speed_m_s,
            radius_m: spine.radius_m(),
            grade_rad: spine.grade_rad(),
            bank_left_rad: spine.bank_left_rad(),
            parts_g: Some(Parts {
                gravity,
                normal,
                tangential,
                offset: load_g - gravity - normal - tangential,
            }),
        }
    }

    /// Changes that would bring the load at a spell's peak to its limit; left out where there is none.
    pub(super) fn remedies(&self, spell: &Spell, why: &Why) -> Vec<Remedy> {
        let remedies = [
            speed_remedy(spell.limit, why),
            radius_remedy(spell.limit, why),
            self.bank_remedy(spell, why),
        ];
        remedies.into_iter().flatten().collect()
    }

    /// For a lateral load on a seat that looks along the track.
    fn bank_remedy(&self, spell: &Spell, why: &Why) -> Option<Remedy> {
        let sideways = self.seat.faces_left_rad.sin().abs() > 1e-9;
        if self.axis != Axis::Y || sideways {
            return None;
        }
        let [x_g, y_g, z_g] = self
            .record
            .axes_g
            .each_ref()
            .map(|a| read_at(a, spell.peak_position));
        let (sin_recline, cos_recline) = self.seat.recline_rad.sin_cos();
        let up_g = sin_recline * x_g + cos_recline * z_g;
        // A rider who looks back has the car's left on the right.
        let facing = self.seat.faces_left_rad.cos().signum();
        let turn_rad = bank_turn_rad(facing * y_g, up_g, facing * spell.limit);
        let bank_rad = why.bank_left_rad?;
        remedy(Change::Bank, bank_rad, wrapped_rad(bank_rad + turn_rad))
    }
}

/// The turn to the left about the forward axis that makes the left part of a load the limit.
///
/// A turn by δ leaves f_l cos δ − f_u sin δ = R cos(δ + φ) on the left axis and R sin(δ + φ) on the up axis, with
/// R, φ the polar form of (f_l, f_u). Of the two solutions the one that presses the rider into the
/// seat; no number where the whole load is below the limit.
fn bank_turn_rad(left_g: f64, up_g: f64, limit_g: f64) -> f64 {
    (limit_g / left_g.hypot(up_g)).acos() - up_g.atan2(left_g)
}

/// Normal and offset parts grow with v²: v √((limit − gravity − tangential)/(normal + offset)).
fn speed_remedy(limit_g: f64, why: &Why) -> Option<Remedy> {
    let parts = why.parts_g?;
    let share = (limit_g - parts.gravity - parts.tangential) / (parts.normal + parts.offset);
    let speed_m_s = why.speed_m_s * share.sqrt();
    remedy(Change::Speed, why.speed_m_s, speed_m_s)
}

/// The normal part goes with 1/ρ.
fn radius_remedy(limit_g: f64, why: &Why) -> Option<Remedy> {
    let parts = why.parts_g?;
    let share = parts.normal / (limit_g - parts.gravity - parts.tangential - parts.offset);
    let radius_m = why.radius_m?;
    remedy(Change::Radius, radius_m, radius_m * share).filter(|_| share > 0.0)
}

fn remedy(change: Change, from: f64, to: f64) -> Option<Remedy> {
    to.is_finite().then_some(Remedy { change, from, to })
}

/// A series read straight between its samples, at a position within it.
pub(super) fn read_at(values: &[f64], position: f64) -> f64 {
    let (before, after) = (position.floor() as usize, position.ceil() as usize);
    values[before] + (values[after] - values[before]) * (position - before as f64)
}

/// Gravity, normal and tangential part along a rider axis at a sample, g.
fn unfiltered_parts_g(
    view_of: &SeatView<'_>,
    gravity: GravityTerm,
    axis: Axis,
    sample: usize,
) -> [f64; 3] {
    let judging = view_of.judging;
    let (samples, design) = (&judging.samples, judging.design);
    let instant = design.poses.locate(samples.train_station_m[sample]);
    let pose = design.poses.car(view_of.car, instant);
    let on_car = car_from_rider(view_of.seat)
        .column(axis as usize)
        .into_owned();
    let axis =
        pose.forward.value * on_car.x + pose.left.value * on_car.y + pose.up.value * on_car.z;
    let spine = design.spine.at(view_of.station_m[sample]);
    let speed_m_s = samples.speed_m_s[sample];
    let against_fall_m_s2 = match gravity {
        GravityTerm::Included => Vector3::z() * judging.plan.study.gravity_m_s2,
        GravityTerm::Excluded => Vector3::zeros(),
    };
    let normal_m_s2 = spine.tangent.d1 * speed_m_s.powi(2);
    let tangential_m_s2 = spine.tangent.value * samples.acceleration_m_s2[sample];
    [against_fall_m_s2, normal_m_s2, tangential_m_s2]
        .map(|part_m_s2| part_m_s2.dot(&axis) / STANDARD_GRAVITY_M_S2)
}

/// An angle brought into (−π, π].
fn wrapped_rad(angle_rad: f64) -> f64 {
    angle_rad.sin().atan2(angle_rad.cos())
}

#[cfg(test)]
mod tests {
    use super::bank_turn_rad;

    /// Without any lateral load left, the bank is that of the coordinated turn, tan = v²/(r g): 45° at 1 g (common practice).
    #[test]
    fn exact_bank_of_a_coordinated_turn() {
        let turn_rad = bank_turn_rad(1.0, 1.0, 0.0);
        assert!((turn_rad.to_degrees() - 45.0).abs() < 1e-12, "{turn_rad}");
    }

    #[test]
    fn the_turned_load_is_the_limit_and_presses_into_the_seat() {
        for (left_g, up_g, limit_g) in [(4.2, -0.2, 2.0), (1.8, 1.0, 1.5), (-2.0, 1.2, -0.7)] {
            let turn_rad: f64 = bank_turn_rad(left_g, up_g, limit_g);
            let left_after_g = left_g * turn_rad.cos() - up_g * turn_rad.sin();
            let up_after_g = up_g * turn_rad.cos() + left_g * turn_rad.sin();
            assert!((left_after_g - limit_g).abs() < 1e-12, "{left_after_g}");
            assert!(up_after_g > 0.0);
        }
        assert!(bank_turn_rad(0.1, 0.1, 1.0).is_nan());
    }
}
