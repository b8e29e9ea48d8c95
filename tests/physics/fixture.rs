//! Tracks, trains and runs made in a line or two.

use std::f64::consts::{FRAC_PI_2, PI};
use std::sync::Arc;

use crestfall::diagnostic::{Place, Source};
use crestfall::input::{
    Air, Car, Change, Columns, Device, Ease, Element, ElementTrack, Extent, Fit, Goal, GravityTerm,
    Inertia, PointTable, Release, Resistance, Riders, Scenario, Seat, Start, Track, TrackSource,
    Train, Zone,
};
use crestfall::loads::car_loads;
use crestfall::motion::{History, Ride, Samples, State, simulate};
use crestfall::spine::{Spine, SpinePoint};
use crestfall::train::Poses;
use nalgebra::Vector3;

/// g₀, m/s² (CGPM 1901).
pub const G: f64 = 9.80665;

/// Fails unless two numbers agree to an absolute tolerance.
#[track_caller]
pub fn close(found: f64, expected: f64, tolerance: f64) {
    let off = found - expected;
    assert!(
        off.abs() <= tolerance,
        "found {found}, expected {expected}: off by {off:e}, more than {tolerance:e}"
    );
}

/// The same for vectors.
#[track_caller]
pub fn close_vectors(found: Vector3<f64>, expected: Vector3<f64>, tolerance: f64) {
    let off = (found - expected).norm();
    assert!(
        off <= tolerance,
        "found {found:?}, expected {expected:?}: off by {off:e}, more than {tolerance:e}"
    );
}

/// The catalogue's bank leans right where it is positive; this is the one place it is turned round.
pub fn left(bank_right_rad: f64) -> f64 {
    -bank_right_rad
}

/// The order of convergence between two errors when the step is halved.
pub fn order(coarse: f64, fine: f64) -> f64 {
    (coarse / fine).log2()
}

pub fn place() -> Place {
    let source = Source {
        name: "test".into(),
        text: String::new(),
    };
    Place {
        source: Arc::new(source),
        span: 0..0,
    }
}

pub fn element(length_m: f64) -> Element {
    Element {
        name: None,
        extent: Extent::Length(length_m),
        grade: None,
        turn_left_rad: 0.0,
        bank: None,
        ease: Ease::Smooth,
        bank_ease: Ease::Smooth,
        place: place(),
    }
}

pub fn element_spine(start: Start, elements: Vec<Element>) -> Spine {
    spine(TrackSource::Elements(ElementTrack { start, elements }))
}

pub fn point_spine(columns: Columns, closed: bool) -> Spine {
    let table = PointTable::new(columns, closed, Fit::Exact, place());
    spine(TrackSource::Points(table))
}

pub fn spine(source: TrackSource) -> Spine {
    Spine::from_track(&Track {
        name: "test".into(),
        source,
        landmarks: vec![],
        place: place(),
    })
    .unwrap()
}

/// A straight track from the origin.
pub fn straight(length_m: f64, grade_rad: f64) -> Spine {
    let start = Start {
        grade_rad,
        ..Start::default()
    };
    element_spine(start, vec![element(length_m)])
}

/// Points of a curve at equal steps of its parameter, ends included.
pub fn curve_points(
    (from, to): (f64, f64),
    count: usize,
    curve: impl Fn(f64) -> Vector3<f64>,
) -> Vec<Vector3<f64>> {
    let at = |i: usize| from + (to - from) * i as f64 / (count - 1) as f64;
    (0..count).map(|i| curve(at(i))).collect()
}

/// Points of a closed curve of period `period`, the first not repeated.
pub fn lap_points(
    period: f64,
    count: usize,
    curve: impl Fn(f64) -> Vector3<f64>,
) -> Vec<Vector3<f64>> {
    (0..count)
        .map(|i| curve(period * i as f64 / count as f64))
        .collect()
}

/// An unbanked track through points.
pub fn level_points(centre_m: Vec<Vector3<f64>>, closed: bool) -> Spine {
    let bank_left_rad = vec![0.0; centre_m.len()];
    let columns = Columns::Bank {
        centre_m,
        bank_left_rad,
    };
    point_spine(columns, closed)
}

/// A track through points in the x-z plane, upright: left is −y whatever the slope, so that it may
/// stand on end.
pub fn plane_points(centre_m: Vec<Vector3<f64>>, tangents: &[Vector3<f64>]) -> Spine {
    let left = Vector3::y();
    let up = tangents.iter().map(|t| t.cross(&left)).collect();
    point_spine(Columns::Up { centre_m, up }, false)
}

/// An arc of a vertical circle, heading east, that is exact but for its ramped ends.
pub struct Arc3 {
    pub spine: Spine,
    pub radius_m: f64,
    from_rad: f64,
    ramp_m: f64,
}

/// Part of an arc taken by each of its ramps.
const ARC_RAMP: f64 = 0.01;

impl Arc3 {
    /// From one grade to another, rising in a valley, falling over a crest.
    pub fn new(radius_m: f64, from_deg: f64, to_deg: f64) -> Self {
        let (from_rad, by_rad) = (from_deg.to_radians(), (to_deg - from_deg).to_radians());
        let length_m = radius_m * by_rad.abs() / (1.0 - ARC_RAMP);
        let arc = Element {
            grade: Some(Change::By(by_rad)),
            ease: Ease::Ramp(ARC_RAMP),
            ..element(length_m)
        };
        let start = Start {
            bearing_rad: FRAC_PI_2,
            grade_rad: from_rad,
            ..Start::default()
        };
        Self {
            spine: element_spine(start, vec![arc]),
            radius_m: radius_m.copysign(by_rad),
            from_rad,
            ramp_m: ARC_RAMP * length_m,
        }
    }

    /// Station at which the grade is this many radians.
    pub fn station_m(&self, grade_rad: f64) -> f64 {
        0.5 * self.ramp_m + (grade_rad - self.from_rad) * self.radius_m
    }

    /// Grade at a station, rad.
    pub fn grade_rad(&self, station_m: f64) -> f64 {
        self.from_rad + (station_m - 0.5 * self.ramp_m) / self.radius_m
    }

    /// Station of the leading axle when the middle of a car stands at this grade.
    pub fn leading_m(&self, wheelbase_m: f64, grade_rad: f64) -> f64 {
        self.station_m(grade_rad) + half_arc_m(self.radius_m.abs(), wheelbase_m)
    }
}

/// Arc from the middle of a chord to its end, m.
pub fn half_arc_m(radius_m: f64, chord_m: f64) -> f64 {
    radius_m * (0.5 * chord_m / radius_m).asin()
}

/// A car that moves on a circle as a point of its spine would: its mass is raised or sunk from the
/// chord to the rail circle. `radius_m` is negative on a crest.
pub fn car_on_circle(wheelbase_m: f64, mass_kg: f64, radius_m: f64) -> Car {
    let mut car = car(wheelbase_m, mass_kg);
    car.mass_centre_m.z = height_of_rail_m(wheelbase_m, radius_m);
    car
}

/// Height of the rail circle over the middle of a chord, in the car's up direction, m.
pub fn height_of_rail_m(wheelbase_m: f64, radius_m: f64) -> f64 {
    let depth_m = radius_m.abs() - (radius_m * radius_m - 0.25 * wheelbase_m * wheelbase_m).sqrt();
    -depth_m * radius_m.signum()
}

/// One car without seats whose axles lie `wheelbase_m` apart, all its mass at the origin of its axes.
pub fn point_train(wheelbase_m: f64, mass_kg: f64) -> Train {
    train(vec![car(wheelbase_m, mass_kg)])
}

pub fn car(wheelbase_m: f64, mass_kg: f64) -> Car {
    Car {
        length_m: 2.0 * wheelbase_m,
        axles_m: [0.0, wheelbase_m],
        mass_kg,
        mass_centre_m: Vector3::zeros(),
        inertia: None::<Inertia>,
        seats: vec![],
        place: place(),
    }
}

pub fn train(cars: Vec<Car>) -> Train {
    Train {
        name: "test".into(),
        cars,
        rolling_mass_kg: 0.0,
        axle_mass_kg: 0.0,
        place: place(),
    }
}

pub fn seat(forward_m: f64, left_m: f64, up_m: f64) -> Seat {
    Seat {
        name: "seat".into(),
        position_m: Vector3::new(forward_m, left_m, up_m),
        rider_kg: 80.0,
        faces_left_rad: 0.0,
        recline_rad: 0.0,
        place: place(),
    }
}

pub fn zone(name: &str, from_m: f64, to_m: f64, device: Device) -> Zone {
    Zone {
        name: name.into(),
        from_m,
        to_m,
        device,
        place: place(),
    }
}

pub fn push(thrust_n: f64, cap_m_s: f64) -> Device {
    Device::Push { thrust_n, cap_m_s }
}

pub fn hold(speed_m_s: f64, force_n: f64) -> Device {
    Device::Hold { speed_m_s, force_n }
}

pub fn eddy(peak_force_n: f64, critical_speed_m_s: f64) -> Device {
    Device::Eddy {
        peak_force_n,
        critical_speed_m_s,
    }
}

pub fn clamp(force_n: f64, release_speed_m_s: f64) -> Device {
    Device::Clamp {
        force_n,
        release_speed_m_s,
    }
}

pub const NO_RESISTANCE: Resistance = Resistance {
    running: 0.0,
    side: 0.0,
    bearings: 0.0,
    drag_area_m2: 0.0,
};

/// A release without any resistance.
pub fn scenario(station_m: f64, speed_m_s: f64) -> Scenario {
    Scenario {
        name: "test".into(),
        riders: Riders::None,
        resistance: NO_RESISTANCE,
        air: Air::Density(1.225),
        wind: None,
        zones: vec![],
        release: Release {
            station_m,
            speed_m_s,
            place: place(),
        },
        place: place(),
    }
}

/// A release with running resistance only.
pub fn running(station_m: f64, speed_m_s: f64, running: f64) -> Scenario {
    let mut scenario = scenario(station_m, speed_m_s);
    scenario.resistance.running = running;
    scenario
}

/// A release with zones only.
pub fn zoned(station_m: f64, speed_m_s: f64, zones: Vec<Zone>) -> Scenario {
    Scenario {
        zones,
        ..scenario(station_m, speed_m_s)
    }
}

pub fn until(station_m: f64) -> Goal {
    Goal::Until {
        station_m,
        place: place(),
    }
}

pub fn finish(zone: &str) -> Goal {
    Goal::Finish {
        zone: zone.into(),
        place: place(),
    }
}

pub fn ride<'a>(
    poses: &'a Poses,
    train: &'a Train,
    scenario: &'a Scenario,
    goal: &'a Goal,
) -> Ride<'a> {
    Ride {
        poses,
        train,
        scenario,
        goal,
        time_limit_s: 600.0,
        gravity_m_s2: G,
    }
}

pub fn run<'a>(
    poses: &'a Poses,
    train: &'a Train,
    scenario: &'a Scenario,
    goal: &'a Goal,
) -> History<'a> {
    simulate(&ride(poses, train, scenario, goal)).unwrap()
}

/// A run that must end at a time limit.
pub fn run_for<'a>(
    poses: &'a Poses,
    train: &'a Train,
    scenario: &'a Scenario,
    time_limit_s: f64,
) -> History<'a> {
    let ride = Ride {
        time_limit_s,
        ..ride(poses, train, scenario, &Goal::TrackEnd)
    };
    simulate(&ride).unwrap()
}

/// The state at the end of a run.
pub fn last(history: &History<'_>) -> State {
    history.state_at(history.duration_s).unwrap()
}

/// Time at which a run that only moves forward has its leading axle at a station.
pub fn time_at(history: &History<'_>, station_m: f64) -> f64 {
    let (mut low, mut high) = (0.0, history.duration_s);
    for _ in 0..200 {
        let middle = 0.5 * (low + high);
        if history.state_at(middle).unwrap().station_m < station_m {
            low = middle;
        } else {
            high = middle;
        }
    }
    0.5 * (low + high)
}

/// The state when the leading axle is at a station.
pub fn state_when_at(history: &History<'_>, station_m: f64) -> State {
    history.state_at(time_at(history, station_m)).unwrap()
}

/// What a seat of a car feels in a state, g.
pub fn felt_g(poses: &Poses, car: usize, seat: &Seat, state: State) -> Vector3<f64> {
    let samples = Samples {
        rate_hz: 1.0,
        train_station_m: vec![state.station_m],
        speed_m_s: vec![state.speed_m_s],
        acceleration_m_s2: vec![state.acceleration_m_s2],
    };
    let loads = car_loads(
        poses,
        car,
        std::slice::from_ref(seat),
        &samples,
        G,
        GravityTerm::Included,
    );
    let axes = &loads.seats[0];
    Vector3::new(axes[0][0], axes[1][0], axes[2][0])
}

pub fn state(station_m: f64, speed_m_s: f64, acceleration_m_s2: f64) -> State {
    State {
        station_m,
        speed_m_s,
        acceleration_m_s2,
    }
}

/// Unit principal normal.
pub fn normal(point: &SpinePoint) -> Vector3<f64> {
    point.tangent.d1.normalize()
}

/// ∫ f by Simpson's rule over `panels` panels, carried one step further by Richardson
/// (Abramowitz & Stegun 25.4.14, Boole's rule).
pub fn boole(from: f64, to: f64, panels: usize, f: impl Fn(f64) -> f64) -> f64 {
    let h = (to - from) / panels as f64;
    (0..panels)
        .map(|i| {
            let x = from + i as f64 * h;
            let at = |k: f64| f(x + 0.25 * k * h);
            h / 90.0
                * (7.0 * at(0.0) + 32.0 * at(1.0) + 12.0 * at(2.0) + 32.0 * at(3.0) + 7.0 * at(4.0))
        })
        .sum()
}

/// Degrees as radians.
pub const DEG: f64 = PI / 180.0;

/// Axle distance of the short car that stands for a point on curves that are no circles, m.
pub const SHORT_M: f64 = 0.01;

/// At the origin, level, heading east.
pub fn east() -> Start {
    Start {
        bearing_rad: FRAC_PI_2,
        ..Start::default()
    }
}

/// A straight slope with a train of one car, 1 m from axle to axle.
pub fn slope(length_m: f64, grade_deg: f64, mass_kg: f64) -> (Poses, Train) {
    let train = point_train(1.0, mass_kg);
    let poses = Poses::new(&straight(length_m, grade_deg * DEG), &train).unwrap();
    (poses, train)
}

/// The catalogue's train of B09: four cars of 1250 kg, 3 m apart.
pub fn four_cars() -> Train {
    let mut cars = vec![car(1.0, 1250.0); 4];
    cars.iter_mut().for_each(|car| car.length_m = 3.0);
    train(cars)
}
