//! Felt loads of all seats of one car.

use nalgebra::{Matrix3, Matrix3x4, Vector3, Vector4};

use crate::STANDARD_GRAVITY_M_S2;
use crate::input::{GravityTerm, Seat};
use crate::motion::Samples;
use crate::train::{CarPose, Poses};

/// Three axes (x, y, z) of equally many samples, g.
pub type AxesG = [Vec<f64>; 3];

/// What the seats of one car feel during a run.
#[derive(Clone, Debug, PartialEq)]
pub struct CarLoads {
    /// Mean station of the car's axles at each sample, m (q, not wrapped).
    pub station_m: Vec<f64>,
    /// By seat, in file order.
    pub seats: Vec<AxesG>,
}

/// Loads of all seats of car `car` (from 0), occupied or not.
///
/// With [`GravityTerm::Included`] (acceleration − gravity)/g₀, else acceleration/g₀. Local gravity
/// in m/s².
pub fn car_loads(
    poses: &Poses,
    car: usize,
    seats: &[Seat],
    samples: &Samples,
    gravity_m_s2: f64,
    term: GravityTerm,
) -> CarLoads {
    let count = samples.speed_m_s.len();
    let against_fall = match term {
        GravityTerm::Included => gravity_m_s2,
        GravityTerm::Excluded => 0.0,
    };
    let seats_from_car = seats.iter().map(RiderLoad::new).collect::<Vec<_>>();
    let empty = || std::array::from_fn(|_| Vec::with_capacity(count));
    let mut loads = CarLoads {
        station_m: Vec::with_capacity(count),
        seats: seats.iter().map(|_| empty()).collect(),
    };
    for i in 0..count {
        let at = poses.locate(samples.train_station_m[i]);
        let pose = poses.car(car, at);
        let (v, a) = (samples.speed_m_s[i], samples.acceleration_m_s2[i]);
        let by_offset = acceleration_by_offset(&pose, v, a, against_fall);
        loads.station_m.push(poses.car_station_m(car, at));
        for (axes, seat) in loads.seats.iter_mut().zip(&seats_from_car) {
            let felt = seat.felt_g(&by_offset);
            for (axis, value) in axes.iter_mut().zip(felt.iter()) {
                axis.push(*value);
            }
        }
    }
    loads
}

/// Positions of a seat's reference point at each sample, world axes, m.
pub fn seat_positions(
    poses: &Poses,
    car: usize,
    seat: &Seat,
    samples: &Samples,
) -> Vec<Vector3<f64>> {
    let d = seat.position_m;
    let position = |&q: &f64| {
        let pose = poses.car(car, poses.locate(q));
        pose.origin.value + pose.forward.value * d.x + pose.left.value * d.y + pose.up.value * d.z
    };
    samples.train_station_m.iter().map(position).collect()
}

/// Rider axes of a seat as columns on car axes: turned about up, then reclined about the rider's left.
pub fn car_from_rider(seat: &Seat) -> Matrix3<f64> {
    let (sin_f, cos_f) = seat.faces_left_rad.sin_cos();
    let (sin_r, cos_r) = seat.recline_rad.sin_cos();
    let forward = Vector3::new(cos_f, sin_f, 0.0);
    let left = Vector3::new(-sin_f, cos_f, 0.0);
    let up = Vector3::z();
    let x = forward * cos_r + up * sin_r;
    let z = up * cos_r - forward * sin_r;
    Matrix3::from_columns(&[x, left, z])
}

/// A seat's offset and axes, ready for many samples.
struct RiderLoad {
    rider_from_car: Matrix3<f64>,
    /// 1, d_x, d_y, d_z.
    offset: Vector4<f64>,
}

impl RiderLoad {
    fn new(seat: &Seat) -> Self {
        let d = seat.position_m;
        let rider_from_car = car_from_rider(seat).transpose() / STANDARD_GRAVITY_M_S2;
        Self {
            rider_from_car,
            offset: Vector4::new(1.0, d.x, d.y, d.z),
        }
    }

    fn felt_g(&self, by_offset: &Matrix3x4<f64>) -> Vector3<f64> {
        self.rider_from_car * (by_offset * self.offset)
    }
}

/// Acceleration less gravity on car axes, m/s²: of the origin (first column), and what each metre
/// forward, left and up adds.
fn acceleration_by_offset(pose: &CarPose, v: f64, a: f64, against_fall: f64) -> Matrix3x4<f64> {
    let part = |jet: crate::numerics::jet::VectorJet| jet.d2 * (v * v) + jet.d1 * a;
    let origin = part(pose.origin) + Vector3::new(0.0, 0.0, against_fall);
    let columns = [origin, part(pose.forward), part(pose.left), part(pose.up)];
    let (x, l, u) = (pose.forward.value, pose.left.value, pose.up.value);
    let on_car = |w: Vector3<f64>| Vector3::new(w.dot(&x), w.dot(&l), w.dot(&u));
    Matrix3x4::from_columns(&columns.map(on_car))
}
