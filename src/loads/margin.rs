//! How far a load may be off because the spine may lie beside the track it stands for.

use super::felt::{AxesG, CarLoads, car_from_rider};
use crate::STANDARD_GRAVITY_M_S2;
use crate::input::Seat;
use crate::motion::Samples;
use crate::train::{CarPose, Margin, Poses};

/// Half-widths (two standard deviations) of the loads of all seats of car `car`, g; none where the
/// spine is not known to be uncertain.
///
/// On car axes, errors of the spine's direction, bend and roll act independently: a bend by v², a
/// roll by turning the load and, with its derivatives, by what it adds at the seat's offset.
pub fn seat_margins(
    poses: &Poses,
    car: usize,
    seats: &[Seat],
    samples: &Samples,
    loads: &CarLoads,
) -> Option<Vec<AxesG>> {
    if !poses.has_margin() {
        return None;
    }
    let count = samples.speed_m_s.len();
    let views = seats
        .iter()
        .map(|seat| SeatMargin::new(poses, car, seat))
        .collect::<Vec<_>>();
    let empty = || std::array::from_fn(|_| Vec::with_capacity(count));
    let mut margins = seats.iter().map(|_| empty()).collect::<Vec<AxesG>>();
    for i in 0..count {
        let at = poses.locate(samples.train_station_m[i]);
        let (pose, margin) = (poses.car(car, at), poses.margin(car, at));
        for ((axes, view), felt) in margins.iter_mut().zip(&views).zip(&loads.seats) {
            let felt_g = std::array::from_fn(|axis| felt[axis][i]);
            let half_widths = view.half_widths_g(&pose, &margin, samples.speed_m_s[i], felt_g);
            axes.iter_mut()
                .zip(half_widths)
                .for_each(|(axis, width)| axis.push(width));
        }
    }
    Some(margins)
}

/// For each sample the largest of the `window` samples that end with it: what a filter that looks
/// back so far may still hold.
pub fn held_back(margin_g: &AxesG, window: usize) -> AxesG {
    margin_g
        .each_ref()
        .map(|axis| running_maximum(axis, window.max(1)))
}

/// Largest of the last `window` values, by a queue of falling values.
fn running_maximum(values: &[f64], window: usize) -> Vec<f64> {
    let mut falling = std::collections::VecDeque::<usize>::new();
    let mut maxima = Vec::with_capacity(values.len());
    for (i, value) in values.iter().enumerate() {
        while falling.pop_back_if(|&mut j| values[j] <= *value).is_some() {}
        falling.push_back(i);
        if falling.front().is_some_and(|&j| j + window <= i) {
            falling.pop_front();
        }
        maxima.push(falling.front().map_or(*value, |&j| values[j]));
    }
    maxima
}

/// What of a seat's place matters.
struct SeatMargin {
    /// Squares of the rider's axes' components on the car's: row by rider axis.
    shares: [[f64; 3]; 3],
    /// The rider's axes on the car's.
    axes: [[f64; 3]; 3],
    /// How much of the errors at the two axles a seat ahead of or behind both adds up.
    leverage: f64,
    left_m: f64,
    up_m: f64,
}

impl SeatMargin {
    fn new(poses: &Poses, car: usize, seat: &Seat) -> Self {
        let layout = poses.layout();
        let [front, rear] = layout.cars[car];
        let wheelbase_m = layout.axles_m[rear] - layout.axles_m[front];
        let matrix = car_from_rider(seat);
        let axes = std::array::from_fn(|rider| std::array::from_fn(|c| matrix[(c, rider)]));
        Self {
            shares: axes.map(|axis: [f64; 3]| axis.map(|component| component * component)),
            axes,
            leverage: (2.0 * seat.position_m.x.abs() / wheelbase_m).max(1.0),
            left_m: seat.position_m.y,
            up_m: seat.position_m.z,
        }
    }

    fn half_widths_g(&self, pose: &CarPose, margin: &Margin, v: f64, felt_g: [f64; 3]) -> [f64; 3] {
        let on_car = |c: usize| {
            (0..3)
                .map(|rider| self.axes[rider][c] * felt_g[rider])
                .sum::<f64>()
        };
        let (forward_g, left_g, up_g) = (on_car(0), on_car(1), on_car(2));
        let per_g = v * v / STANDARD_GRAVITY_M_S2;
        let bend_g = self.leverage * margin.bend_1_m * per_g;
        let roll_rate = pose.left.d1.dot(&pose.up.value);
        let spin_g = 2.0 * roll_rate.abs() * margin.roll_rate_rad_m * per_g;
        let twist_g = margin.roll_bend_rad_m2 * per_g;
        let square = |parts: &[f64]| parts.iter().map(|p| p * p).sum::<f64>();
        let squares = [
            square(&[margin.direction * left_g.hypot(up_g)]),
            square(&[
                bend_g,
                margin.roll_rad * up_g,
                margin.direction * forward_g,
                twist_g * self.up_m,
                spin_g * self.left_m,
            ]),
            square(&[
                bend_g,
                margin.roll_rad * left_g,
                margin.direction * forward_g,
                twist_g * self.left_m,
                spin_g * self.up_m,
            ]),
        ];
        let on_rider =
            |share: &[f64; 3]| share.iter().zip(squares).map(|(s, q)| s * q).sum::<f64>();
        [0, 1, 2].map(|rider| on_rider(&self.shares[rider]).sqrt())
    }
}
