//! Where axles, cars and seats of a train stand when it is laid out straight.

use crate::input::{Riders, SHARED_AXLE_M, Seat, Train};

/// Nominal places, m behind the first axle.
#[derive(Clone, Debug, PartialEq)]
pub struct Layout {
    /// Every axle once, the first at 0, increasing.
    pub axles_m: Vec<f64>,
    /// Front and rear axle of each car, as indices into `axles_m`.
    pub cars: Vec<[usize; 2]>,
}

impl Layout {
    /// Lays a train out straight; axles shared by neighbouring cars are merged.
    pub fn new(train: &Train) -> Self {
        let (mut axles_m, mut cars) = (Vec::<f64>::new(), Vec::new());
        let mut nose_m = -train.cars.first().map_or(0.0, |car| car.axles_m[0]);
        for car in &train.cars {
            let indices = car.axles_m.map(|behind_nose_m| {
                let at_m = nose_m + behind_nose_m;
                if axles_m
                    .last()
                    .is_none_or(|last| at_m - last > SHARED_AXLE_M)
                {
                    axles_m.push(at_m);
                }
                axles_m.len() - 1
            });
            cars.push(indices);
            nose_m += car.length_m;
        }
        Self { axles_m, cars }
    }

    /// First to last axle, m.
    pub fn length_m(&self) -> f64 {
        self.axles_m.last().copied().unwrap_or(0.0)
    }

    /// Place of a seat, m behind the first axle.
    pub fn seat_m(&self, car: usize, seat: &Seat) -> f64 {
        let [front, rear] = self.cars[car];
        0.5 * (self.axles_m[front] + self.axles_m[rear]) - seat.position_m.x
    }
}

/// Whether each seat of each car is taken, by car and seat.
///
/// The train's middle is midway between the first and the last axle; a seat at the middle belongs
/// to the rear half. Names that no seat has take no seat.
pub fn occupied(train: &Train, riders: &Riders) -> Vec<Vec<bool>> {
    let layout = Layout::new(train);
    let middle_m = 0.5 * layout.length_m();
    let taken = |car: usize, seat: &Seat| match riders {
        Riders::All => true,
        Riders::None => false,
        Riders::FrontHalf => layout.seat_m(car, seat) < middle_m,
        Riders::RearHalf => layout.seat_m(car, seat) >= middle_m,
        Riders::Left => seat.position_m.y > 0.0,
        Riders::Right => seat.position_m.y < 0.0,
        Riders::Seats(names) => names
            .iter()
            .any(|n| n.car == car + 1 && n.seat == seat.name),
    };
    let car_row = |(car, its): (usize, &crate::input::Car)| {
        its.seats.iter().map(|seat| taken(car, seat)).collect()
    };
    train.cars.iter().enumerate().map(car_row).collect()
}
