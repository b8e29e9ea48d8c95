//! The masses of a loaded train, gathered per car.

use nalgebra::{Matrix3, Vector3};

use crate::input::{Car, Riders, Train};
use crate::numerics::jet::VectorJet;
use crate::train::{CarPose, occupied};

/// A car with its riders. Each empty car is a point mass at its mass centre with its inertia about
/// it, each rider a point mass at the seat.
#[derive(Clone, Debug)]
pub(super) struct CarBody {
    /// Car and riders, kg.
    pub(super) mass_kg: f64,
    /// Their joint centre, car axes, m.
    pub(super) centre_m: Vector3<f64>,
    /// Σ m d dᵀ, car axes, kg m².
    second_kg_m2: Matrix3<f64>,
    /// About the forward, left and up axes through the empty car's centre, kg m².
    inertia_kg_m2: Vector3<f64>,
}

/// What a body adds to the equation of motion.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Inertial {
    /// M: twice the kinetic energy at unit speed, kg.
    pub(super) mass_kg: f64,
    /// ½ M′, kg/m.
    pub(super) half_slope_kg_m: f64,
}

/// Σ wᵢ bᵢ′ over the axes of a car.
fn weighted_rates(w: Vector3<f64>, axes: &[VectorJet; 3]) -> Vector3<f64> {
    axes[0].d1 * w.x + axes[1].d1 * w.y + axes[2].d1 * w.z
}

/// All cars of a train with the riders of a scenario.
pub(super) fn car_bodies(train: &Train, riders: &Riders) -> Vec<CarBody> {
    let taken = occupied(train, riders);
    train
        .cars
        .iter()
        .zip(&taken)
        .map(|(car, taken)| CarBody::new(car, taken))
        .collect()
}

impl CarBody {
    fn new(car: &Car, taken: &[bool]) -> Self {
        let riders = car.seats.iter().zip(taken).filter(|(_, taken)| **taken);
        let riders = riders.map(|(seat, _)| (seat.rider_kg, seat.position_m));
        let points = std::iter::once((car.mass_kg, car.mass_centre_m)).chain(riders);
        let (mut mass_kg, mut first, mut second) = (0.0, Vector3::zeros(), Matrix3::zeros());
        for (mass, place) in points {
            mass_kg += mass;
            first += place * mass;
            second += place * place.transpose() * mass;
        }
        let inertia = car.inertia.map_or(Vector3::zeros(), |inertia| {
            Vector3::new(inertia.roll_kg_m2, inertia.pitch_kg_m2, inertia.yaw_kg_m2)
        });
        let centre_m = first / mass_kg;
        Self {
            mass_kg,
            centre_m,
            second_kg_m2: second,
            inertia_kg_m2: inertia,
        }
    }

    /// M and ½ M′ of the car: Σ m |p′|² + Σ J ω², with p = O + d_x x + d_y l + d_z u.
    pub(super) fn inertial(&self, pose: &CarPose) -> Inertial {
        let axes = [pose.forward, pose.left, pose.up];
        let (o1, o2) = (pose.origin.d1, pose.origin.d2);
        let centre = |part: [Vector3<f64>; 3]| {
            part[0] * self.centre_m.x + part[1] * self.centre_m.y + part[2] * self.centre_m.z
        };
        let (c1, c2) = (centre(axes.map(|a| a.d1)), centre(axes.map(|a| a.d2)));
        let mut mass_kg = self.mass_kg * (o1.dot(&o1) + 2.0 * o1.dot(&c1));
        let mut half_slope = self.mass_kg * (o1.dot(&o2) + o1.dot(&c2) + c1.dot(&o2));
        for (j, b) in axes.iter().enumerate() {
            let moment = weighted_rates(self.second_kg_m2.column(j).into_owned(), &axes);
            mass_kg += moment.dot(&b.d1);
            half_slope += moment.dot(&b.d2);
        }
        let spin = self.spin(pose);
        Inertial {
            mass_kg: mass_kg + spin.mass_kg,
            half_slope_kg_m: half_slope + spin.half_slope_kg_m,
        }
    }

    /// Rotation about the car's own axes: ω_x = l′·u, ω_y = u′·x, ω_z = x′·l per metre.
    fn spin(&self, pose: &CarPose) -> Inertial {
        let pairs = [
            (pose.left, pose.up),
            (pose.up, pose.forward),
            (pose.forward, pose.left),
        ];
        let mut sum = Inertial::default();
        for (&(turned, toward), inertia) in pairs.iter().zip(self.inertia_kg_m2.iter()) {
            let rate = turned.d1.dot(&toward.value);
            let bend = turned.d2.dot(&toward.value) + turned.d1.dot(&toward.d1);
            sum.mass_kg += inertia * rate * rate;
            sum.half_slope_kg_m += inertia * rate * bend;
        }
        sum
    }

    /// Height of the joint centre and its derivative in q.
    pub(super) fn height(&self, pose: &CarPose) -> (f64, f64) {
        let c = self.centre_m;
        let at = |o: Vector3<f64>, x: Vector3<f64>, l: Vector3<f64>, u: Vector3<f64>| {
            o.z + c.x * x.z + c.y * l.z + c.z * u.z
        };
        (
            at(
                pose.origin.value,
                pose.forward.value,
                pose.left.value,
                pose.up.value,
            ),
            at(pose.origin.d1, pose.forward.d1, pose.left.d1, pose.up.d1),
        )
    }

    /// Second derivative of the joint centre's path in q.
    pub(super) fn centre_bend(&self, pose: &CarPose) -> Vector3<f64> {
        let c = self.centre_m;
        pose.origin.d2 + pose.forward.d2 * c.x + pose.left.d2 * c.y + pose.up.d2 * c.z
    }
}
