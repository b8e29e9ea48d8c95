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

/// The filtered parts of a seat's load along one rider axis.
pub(super) struct PartSeries<'a> {
    seat: &'a Seat,
    axis: Axis,
    record: &'a Filtered,
    gravity_g: Vec<f64>,
    normal_g: Vec<f64>,
    tangential_g: Vec<f64>,
}

impl<'a> PartSeries<'a> {
    /// Splits the load that `record` holds along an axis.
    pub(super) fn new(
        view_of: &SeatView<'a>,
        view: &View,
        record: &'a Filtered,
        axis: Axis,
    ) -> Self {
        let count = record.axes_g[axis as usize].len();
        let mut parts = [const { Vec::new() }; 3];
        for sample in 0..count {
            let unfiltered_g = unfiltered_parts_g(view_of, view.gravity, axis, sample);
            for (part, value_g) in parts.iter_mut().zip(unfiltered_g) {
                part.push(value_g);
            }
        }
        let [gravity_g, normal_g, tangential_g] =
            loads::filtered(&parts, record.rate_hz, view.filter).axes_g;
        Self {
            seat: view_of.seat,
            axis,
            record,
            gravity_g,
            normal_g,
            tangential_g,
        }
    }

    /// The state of things at a spell's peak.
    pub(super) fn why(&self, spell: &Spell, speed_m_s: f64, spine: &SpinePoint) -> Why {
        let at = spell.peak_sample;
        let (gravity, normal) = (self.gravity_g[at], self.normal_g[at]);
        let tangential = self.tangential_g[at];
        Why {
            speed_m_s,
            radius_m: spine.radius_m(),
            grade_rad: spine.grade_rad(),
            bank_left_rad: spine.bank_left_rad(),
            parts_g: Parts {
                gravity,
                normal,
                tangential,
                offset: self.record.axes_g[self.axis as usize][at] - gravity - normal - tangential,
            },
        }
    }

    /// Changes that would bring the load at a spell's peak to its limit; left out where there is none.
    pub(super) fn remedies(&self, spell: &Spell, why: &Why) -> Vec<Remedy> {
        let remedies = [
            speed_remedy(spell.limit_g, why),
            radius_remedy(spell.limit_g, why),
            self.bank_remedy(spell, why),
        ];
        remedies.into_iter().flatten().collect()
    }

    /// Turning the seat by δ to the left about the car's forward axis leaves f_l cos δ − f_u sin δ of a
    /// load (f_l, f_u) on the left axis; the smaller δ that makes this the limit.
    fn bank_remedy(&self, spell: &Spell, why: &Why) -> Option<Remedy> {
        let sideways = self.seat.faces_left_rad.sin().abs() < 1e-9;
        if self.axis != Axis::Y || !sideways {
            return None;
        }
        let [x_g, y_g, z_g] = self.record.axes_g.each_ref().map(|a| a[spell.peak_sample]);
        let (sin_recline, cos_recline) = self.seat.recline_rad.sin_cos();
        let up_g = sin_recline * x_g + cos_recline * z_g;
        // A rider who looks back has the car's left on the right.
        let facing = self.seat.faces_left_rad.cos().signum();
        let (left_g, limit_g) = (facing * y_g, facing * spell.limit_g);
        let half_rad = (limit_g / left_g.hypot(up_g)).acos();
        let turns_rad = [half_rad, -half_rad].map(|half| wrapped_rad(half - up_g.atan2(left_g)));
        let turn_rad = turns_rad
            .into_iter()
            .min_by(|a, b| a.abs().total_cmp(&b.abs()))?;
        let bank_rad = why.bank_left_rad?;
        remedy(Change::Bank, bank_rad, wrapped_rad(bank_rad + turn_rad))
    }
}

/// Normal and offset parts grow with v²: v √((limit − gravity − tangential)/(normal + offset)).
fn speed_remedy(limit_g: f64, why: &Why) -> Option<Remedy> {
    let parts = &why.parts_g;
    let share = (limit_g - parts.gravity - parts.tangential) / (parts.normal + parts.offset);
    let speed_m_s = why.speed_m_s * share.sqrt();
    remedy(Change::Speed, why.speed_m_s, speed_m_s)
}

/// The normal part goes with 1/ρ.
fn radius_remedy(limit_g: f64, why: &Why) -> Option<Remedy> {
    let parts = &why.parts_g;
    let share = parts.normal / (limit_g - parts.gravity - parts.tangential - parts.offset);
    let radius_m = why.radius_m?;
    remedy(Change::Radius, radius_m, radius_m * share).filter(|_| share > 0.0)
}

fn remedy(change: Change, from: f64, to: f64) -> Option<Remedy> {
    to.is_finite().then_some(Remedy { change, from, to })
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
