//! A train: its cars, in order from the front.

use nalgebra::Vector3;

use crate::diagnostic::Place;

/// Axles of neighbouring cars closer than this are one axle, m.
pub const SHARED_AXLE_M: f64 = 1e-3;

/// One train, from one train file.
#[derive(Clone, Debug)]
pub struct Train {
    /// The name given in the file.
    pub name: String,
    /// Cars from the front, `count` written out; at least one.
    pub cars: Vec<Car>,
    /// Wheels' inertia over radius squared, per axle, kg.
    pub rolling_mass_kg: f64,
    /// Mass carried by the spine itself, per axle, kg.
    pub axle_mass_kg: f64,
    /// The value of the `train` key.
    pub place: Place,
}

/// One car. Car axes: forward, left, up; origin midway between the axles at rail height.
#[derive(Clone, Debug)]
pub struct Car {
    /// Nose to nose of the next car, m.
    pub length_m: f64,
    /// Front and rear axle, m behind the car's nose; front first.
    pub axles_m: [f64; 2],
    /// Empty, kg.
    pub mass_kg: f64,
    /// Mass centre of the empty car, car axes, m.
    pub mass_centre_m: Vector3<f64>,
    /// About the mass centre, where given.
    pub inertia: Option<Inertia>,
    /// In file order.
    pub seats: Vec<Seat>,
    /// The entry of the file it comes from.
    pub place: Place,
}

/// Moments of inertia of an empty car about its mass centre, kg m².
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Inertia {
    /// About the forward axis.
    pub roll_kg_m2: f64,
    /// About the left axis.
    pub pitch_kg_m2: f64,
    /// About the up axis.
    pub yaw_kg_m2: f64,
}

/// A rider's reference point.
#[derive(Clone, Debug)]
pub struct Seat {
    /// Unique in its car.
    pub name: String,
    /// Car axes, m.
    pub position_m: Vector3<f64>,
    /// Mass of the rider when aboard, kg.
    pub rider_kg: f64,
    /// Turn of the seat about the car's up axis: 0 forward, positive to the left, π backward.
    pub faces_left_rad: f64,
    /// Recline about the rider's left axis.
    pub recline_rad: f64,
    /// The whole entry.
    pub place: Place,
}
