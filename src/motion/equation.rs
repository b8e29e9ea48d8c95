//! The equation of motion while nothing switches: one direction of travel, fixed modes of the zones.

use nalgebra::Vector3;

use super::Ride;
use super::air::{density_kg_m3, wind_m_s};
use super::bodies::{CarBody, car_bodies};
use super::zone::{Mode, Window};
use crate::input::Resistance;

/// What stays the same over a whole run.
#[derive(Clone)]
pub(super) struct Model<'a> {
    pub(super) ride: Ride<'a>,
    cars: Vec<CarBody>,
    wind_m_s: Vector3<f64>,
    /// ½ ρ C_d A of one car, kg/m.
    drag_kg_m: f64,
    /// Force of bearings and seals, N.
    bearings_n: f64,
}

/// Everything that depends on the place and speed, but not on the direction of travel or on zones.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Terms {
    /// M, kg.
    pub(super) mass_kg: f64,
    /// ½ M′, kg/m.
    half_slope_kg_m: f64,
    /// V, J.
    pub(super) potential_j: f64,
    /// V′, N.
    pull_n: f64,
    /// Magnitude of running, side and bearing resistance, N.
    pub(super) rolling_n: f64,
    /// Force of the air, N.
    pub(super) air_n: f64,
}

/// Direction of travel and what the zones do.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Law {
    /// +1 or −1.
    pub(super) direction: f64,
    /// Windows that can act before the next edge.
    pub(super) windows: Vec<Window>,
}

impl<'a> Model<'a> {
    pub(super) fn new(ride: Ride<'a>) -> Self {
        let scenario = ride.scenario;
        let cars = car_bodies(ride.train, &scenario.riders);
        let axles_kg = ride.train.axle_mass_kg * ride.poses.axle_count() as f64;
        let weight_n =
            ride.gravity_m_s2 * (axles_kg + cars.iter().map(|car| car.mass_kg).sum::<f64>());
        let Resistance {
            bearings,
            drag_area_m2,
            ..
        } = scenario.resistance;
        let density = density_kg_m3(scenario.air);
        Self {
            ride,
            wind_m_s: wind_m_s(scenario.wind),
            drag_kg_m: 0.5 * density * drag_area_m2 / cars.len() as f64,
            bearings_n: bearings * weight_n,
            cars,
        }
    }

    /// All terms at a place and speed.
    pub(super) fn terms(&self, q: f64, v: f64) -> Terms {
        let at = self.ride.poses.locate(q);
        let gravity = self.ride.gravity_m_s2;
        let Resistance { running, side, .. } = self.ride.scenario.resistance;
        let mut sum = Terms {
            rolling_n: self.bearings_n,
            ..Terms::default()
        };
        for (index, car) in self.cars.iter().enumerate() {
            let pose = self.ride.poses.car(index, at);
            let inertial = car.inertial(&pose);
            sum.mass_kg += inertial.mass_kg;
            sum.half_slope_kg_m += inertial.half_slope_kg_m;
            let (height_m, climb) = car.height(&pose);
            sum.potential_j += car.mass_kg * gravity * height_m;
            sum.pull_n += car.mass_kg * gravity * climb;
            let mut load = car.centre_bend(&pose) * (v * v);
            load.z += gravity;
            let (normal, lateral) = (load.dot(&pose.up.value), load.dot(&pose.left.value));
            sum.rolling_n += car.mass_kg * (running * normal.abs() + side * lateral.abs());
            let relative = v - self.wind_m_s.dot(&pose.forward.value);
            sum.air_n -= self.drag_kg_m * relative * relative.abs();
        }
        self.add_axles(&mut sum, at);
        sum
    }

    /// Axle masses ride on the spine; rolling masses have inertia only.
    fn add_axles(&self, sum: &mut Terms, at: crate::train::Instant) {
        let (rolling_kg, axle_kg) = (
            self.ride.train.rolling_mass_kg,
            self.ride.train.axle_mass_kg,
        );
        if rolling_kg + axle_kg == 0.0 {
            return;
        }
        for axle in 0..self.ride.poses.axle_count() {
            let pose = self.ride.poses.axle(axle, at);
            let (d1, d2) = (pose.station_m.d1, pose.station_m.d2);
            sum.mass_kg += (rolling_kg + axle_kg) * d1 * d1;
            sum.half_slope_kg_m += (rolling_kg + axle_kg) * d1 * d2;
            sum.potential_j += axle_kg * self.ride.gravity_m_s2 * pose.height_m.value;
            sum.pull_n += axle_kg * self.ride.gravity_m_s2 * pose.height_m.d1;
        }
    }
}

impl Terms {
    /// Force along q that zones would have to add to keep the speed, N.
    fn needed_n(&self, v: f64, law: &Law, q: f64) -> f64 {
        let zones_n = law
            .windows
            .iter()
            .map(|w| w.force_n(q, v, law.direction))
            .sum::<f64>();
        self.half_slope_kg_m * v * v + self.pull_n + law.direction * self.rolling_n
            - self.air_n
            - zones_n
    }

    /// Kinetic energy, J.
    pub(super) fn kinetic_j(&self, v: f64) -> f64 {
        0.5 * self.mass_kg * v * v
    }

    /// Force along q of a train at rest before friction acts, N.
    pub(super) fn drive_at_rest_n(&self, law: &Law, q: f64) -> f64 {
        let pushing = law.windows.iter().filter(|w| w.grip_n(q) == 0.0);
        self.air_n - self.pull_n
            + pushing
                .map(|w| w.force_n(q, 0.0, law.direction))
                .sum::<f64>()
    }

    /// Largest force that friction and clamps can set against it, N.
    pub(super) fn hold_at_rest_n(&self, law: &Law, q: f64) -> f64 {
        self.rolling_n + law.windows.iter().map(|w| w.grip_n(q)).sum::<f64>()
    }

    /// q̈, m/s²; 0 while a zone keeps the speed. That its force suffices is for the run to see
    /// ([`Self::beyond_keeping_n`]): a force cut off here would bend the step in which it gives out.
    pub(super) fn acceleration_m_s2(&self, q: f64, v: f64, law: &Law) -> f64 {
        if law.keeps_speed() {
            0.0
        } else {
            -self.needed_n(v, law, q) / self.mass_kg
        }
    }

    /// How far the force needed to keep a speed lies beyond what the zones that keep it can give,
    /// N: positive above their range, negative below it, 0 within.
    pub(super) fn beyond_keeping_n(&self, q: f64, v: f64, law: &Law) -> f64 {
        let needed_n = self.needed_n(v, law, q);
        needed_n - law.kept_n(q, needed_n)
    }

    /// Force of each window, N, in the law's order.
    pub(super) fn zone_forces_n(&self, q: f64, v: f64, law: &Law) -> Vec<f64> {
        let mut left_n = self.needed_n(v, law, q);
        let force = |window: &Window| match window.mode {
            Mode::Keeping => {
                let (low, high) = window.keeping_range_n(q);
                let force_n = left_n.clamp(low, high);
                left_n -= force_n;
                force_n
            }
            Mode::Working | Mode::Past => window.force_n(q, v, law.direction),
        };
        law.windows.iter().map(force).collect()
    }
}

impl Law {
    /// What the zones that keep a speed give when `needed_n` is asked of them, N.
    fn kept_n(&self, q: f64, needed_n: f64) -> f64 {
        let keeping = self.windows.iter().filter(|w| w.mode == Mode::Keeping);
        let (low, high) = keeping.fold((0.0, 0.0), |(low, high), window| {
            let (l, h) = window.keeping_range_n(q);
            (low + l, high + h)
        });
        needed_n.clamp(low, high)
    }

    /// Whether any zone keeps a speed.
    pub(super) fn keeps_speed(&self) -> bool {
        self.windows.iter().any(|w| w.mode == Mode::Keeping)
    }
}
