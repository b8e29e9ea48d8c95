//! Trains of rigid cars on axles, with mass centres and inertia off the spine.

use std::f64::consts::{FRAC_PI_2, TAU};

use crestfall::input::{Car, Change, Ease, Element, Inertia, Start, Train};
use crestfall::motion::RunEnd;
use crestfall::train::Poses;
use nalgebra::Vector3;

use crate::fixture::*;

/// The catalogue's cars: chord 2.2 m, drawbars 0.8 m, body 1200 kg with its centre 0.6 m above the
/// chord and 900 kg m² in pitch, and 150 kg a bogie on the rail.
fn bogie_train(cars: usize) -> Train {
    let one = Car {
        length_m: 3.0,
        axles_m: [0.4, 2.6],
        mass_centre_m: Vector3::new(0.0, 0.0, 0.6),
        inertia: Some(Inertia {
            roll_kg_m2: 0.0,
            pitch_kg_m2: 900.0,
            yaw_kg_m2: 0.0,
        }),
        ..car(2.2, 1200.0)
    };
    Train {
        axle_mass_kg: 150.0,
        ..train(vec![one; cars])
    }
}

/// Angle between the middles of neighbouring cars on a circle of 20 m.
fn pitch_rad() -> f64 {
    2.0 * (1.1f64 / 20.0).asin() + 2.0 * (0.4f64 / 20.0).asin()
}

/// F01 (Meriam & Kraige, sec. 6/4; DLMF 22.19(i)): a train of rigid cars in a circle of R = 20 m is
/// a compound pendulum. Pinocchio 4.1.0 gives the same accelerations to 1e-15.
#[test]
fn exact_train_as_a_pendulum() {
    for (cars, period_s, bottom_m_s, accel_rad_s2) in [
        (
            1,
            9.5172056869900107,
            14.170128588201146,
            -0.43472861043260123,
        ),
        (2, 9.5306216779221807, 14.150181692492614, -0.4335055611293),
        (5, 9.6254963054154695, 14.010709069529549, -0.4250018989913),
    ] {
        let arc = Arc3::new(20.0, -110.0, 110.0);
        let train = bogie_train(cars);
        let poses = Poses::new(&arc.spine, &train).unwrap();
        let ahead = 0.5 * (cars as f64 - 1.0) * pitch_rad();
        let lead_m = |middle_rad: f64| arc.leading_m(2.2, middle_rad + ahead);
        let release = scenario(lead_m(-60.0 * DEG), 0.0);
        let history = run_for(&poses, &train, &release, 1.01 * period_s);
        let start = history.state_at(0.0).unwrap();
        close(start.acceleration_m_s2, -20.0 * accel_rad_s2, 1e-10);
        close(history.reversals[0].time_s, 0.5 * period_s, 1e-7);
        close(history.reversals[0].station_m, lead_m(60.0 * DEG), 1e-7);
        close(history.reversals[1].time_s, period_s, 2e-7);
        let goal = until(lead_m(0.0));
        let down = run(&poses, &train, &release, &goal);
        close(last(&down).speed_m_s, bottom_m_s, 1e-8);
    }
}

/// F04 (Murray, Li & Sastry, ch. 2: screw motion): a two-bogie car descends a helix a = 12,
/// b = 1.5 with constant acceleration g M b/(√(a² + b²) M_eff); inertia 400, 900, 1000 kg m² about
/// the car's axes.
#[test]
fn exact_car_on_a_helix() {
    let (a, b, turns) = (12.0f64, -1.5, 1.5);
    let start = Start {
        grade_rad: f64::atan(b / a),
        ..Start::default()
    };
    let turn = Element {
        turn_left_rad: TAU * turns,
        ease: Ease::Ramp(0.05),
        ..element(a.hypot(b) * TAU * turns / 0.95)
    };
    let spine = element_spine(start, vec![turn]);
    let body = Car {
        inertia: Some(Inertia {
            roll_kg_m2: 400.0,
            pitch_kg_m2: 900.0,
            yaw_kg_m2: 1000.0,
        }),
        ..car(2.2, 1200.0)
    };
    let train = Train {
        axle_mass_kg: 150.0,
        ..train(vec![body])
    };
    let poses = Poses::new(&spine, &train).unwrap();
    let axle = poses.axle(1, poses.locate(30.0)).station_m;
    close(30.0 - axle.value, 2.202997898863788, 1e-11);
    close(axle.d1, 1.0, 1e-11);
    let pose = poses.car(0, poses.locate(30.0));
    close(-pose.forward.value.z, f64::sin(0.12452533152371823), 1e-11);
    close(
        pose.forward.d1.norm() * a.hypot(b),
        0.12452533152371823f64.cos(),
        1e-9,
    );
    let (release, goal) = (scenario(12.0, 0.0), until(72.0));
    let history = run(&poses, &train, &release, &goal);
    close(last(&history).acceleration_m_s2, 1.218803428843669, 1e-8);
    close(last(&history).speed_m_s, 12.093651700840416, 1e-8);
    close(history.duration_s, 9.9225612716844595, 1e-8);
}

/// F05 (Goldstein, *Classical Mechanics*, sec. 1.4; SymPy 1.14.0): a centre of gravity 0.9 m above
/// the spine on a descending helix that rolls by 0.04 rad/m (left side up), seat at (0.2, 0.5, 0.9)
/// m. The source's frame stands at one point of the spine; our car is 5 mm long.
#[test]
fn exact_mass_centre_above_a_rolled_helix() {
    let rows = [
        (
            None,
            [
                (
                    10.0,
                    12.793966046606337,
                    1.0204813447567953,
                    [0.03658381525159, 1.37517836877, 0.4749449520477],
                ),
                (
                    25.0,
                    14.0284258083,
                    1.20400875206,
                    [0.06227529459321, 1.5526412238, -0.6241586593035],
                ),
                (
                    40.0,
                    15.3909482293,
                    1.48215103113,
                    [0.06068859575689, 0.9229585070864, -1.725980770166],
                ),
            ],
        ),
        (
            Some(Inertia {
                roll_kg_m2: 350.0,
                pitch_kg_m2: 800.0,
                yaw_kg_m2: 850.0,
            }),
            [
                (
                    10.0,
                    12.7912442354,
                    1.01726659682,
                    [0.03623052568412, 1.37476209287, 0.4751283233589],
                ),
                (
                    25.0,
                    14.0226023661,
                    1.20072353395,
                    [0.06187337169934, 1.55204969034, -0.6231970927829],
                ),
                (
                    40.0,
                    15.3817196591,
                    1.47711081864,
                    [0.06010469959359, 0.9230493371295, -1.723947102977],
                ),
            ],
        ),
    ];
    let (chord_m, lead_in_m) = (0.005, 10.0);
    let spine = rolled_helix(lead_in_m);
    for (inertia, states) in rows {
        let mut body = car(chord_m, 1000.0);
        body.mass_centre_m.z = 0.9;
        body.inertia = inertia;
        let train = train(vec![body]);
        let poses = Poses::new(&spine, &train).unwrap();
        let lead_m = |s: f64| lead_in_m + s + 0.5 * chord_m;
        let (release, goal) = (scenario(lead_m(0.0), 12.0), until(lead_m(40.1)));
        let history = run(&poses, &train, &release, &goal);
        for (s, speed, accel, felt) in states {
            let at = state_when_at(&history, lead_m(s));
            close(at.speed_m_s, speed, 1e-7);
            close(at.acceleration_m_s2, accel, 1e-7);
            let found = felt_g(&poses, 0, &seat(0.2, 0.5, 0.9), at);
            close_vectors(found, felt.into(), 1e-7);
        }
    }
}

/// a = 15 m, b = −2 m, roll 0 at `lead_in_m` and 0.04 rad/m from a metre before it, where a ramp ends.
fn rolled_helix(lead_in_m: f64) -> crestfall::spine::Spine {
    let (a, b, length_m) = (15.0f64, -2.0f64, 100.0);
    let ramp = (lead_in_m - 1.0) / length_m;
    // Level part: rate Δ/((1 − f) L), reached at f L after half of f L times that rate.
    let by_rate = |rate: f64| rate * (1.0 - ramp) * length_m;
    let bank_rate = left(0.04);
    let turn = Element {
        turn_left_rad: by_rate(1.0 / a.hypot(b)),
        bank: Some(Change::By(by_rate(bank_rate))),
        ease: Ease::Ramp(ramp),
        bank_ease: Ease::Ramp(ramp),
        ..element(length_m)
    };
    let start = Start {
        grade_rad: (b / a).atan(),
        bank_left_rad: -(0.5 * (lead_in_m - 1.0) + 1.0) * bank_rate,
        ..Start::default()
    };
    element_spine(start, vec![turn])
}

/// F03 (Goldstein sec. 2.4; multipliers with SciPy's DOP853, 1e-12; MuJoCo 4.0.0, 4e-8): two cars
/// from rest at x = −25 m on z = x²/80, here through points a tenth of a metre apart.
#[test]
fn published_two_cars_on_a_parabola() {
    let curve = |x: f64| Vector3::new(x, 0.0, x * x / 80.0);
    let spine = level_points(curve_points((-40.0, 30.0), 701, curve), false);
    let speed = |x: f64| (x / 40.0).hypot(1.0);
    let s_of = |x: f64| boole(-40.0, x, 4000, speed);
    let train = bogie_train(2);
    let poses = Poses::new(&spine, &train).unwrap();
    let (release, goal) = (scenario(s_of(-25.0), 0.0), until(s_of(20.5)));
    let history = run(&poses, &train, &release, &goal);
    close(time_at(&history, s_of(0.0)), 3.3045518976369466, 1e-7);
    for (x, v, first, second) in [
        (
            -20.0,
            7.7206903728517612,
            (0.019919861173461533, 0.99017136748058045),
            (-0.023245638923332782, 0.95758080680725702),
        ),
        (
            -10.0,
            12.011513182930592,
            (0.029159949197738906, 1.2884753871686923),
            (-0.033241237071339949, 1.250173988820157),
        ),
        (
            0.0,
            13.480339336397232,
            (0.037306667376426057, 1.4547304643117586),
            (-0.038534765938060919, 1.4435116538267964),
        ),
        (
            5.0,
            13.489005836093369,
            (0.038541574302342428, 1.4451619091600177),
            (-0.037399226413687159, 1.4555954237755278),
        ),
        (
            10.0,
            13.017187086748495,
            (0.037033057350933185, 1.37157934258582),
            (-0.033916336973920828, 1.4003208668873393),
        ),
        (
            20.0,
            10.278825498502819,
            (0.028099370798164923, 1.099523614217361),
            (-0.024098942892689553, 1.1379200836459594),
        ),
    ] {
        let at = state_when_at(&history, s_of(x));
        close(at.speed_m_s, v, 1e-7);
        for (car, (fx, fz)) in [first, second].into_iter().enumerate() {
            let felt = felt_g(&poses, car, &seat(0.0, 0.0, 0.6), at);
            close_vectors(felt, Vector3::new(fx, 0.0, fz), 2e-7);
        }
    }
}

/// F02: the same cars through straight −30°, a circle of R = 20 m, straight +30°, from 10 m/s with
/// the leading axle at s = −15 m. The jumps of curvature are ramps of a millionth of the arc (20 µm).
#[test]
fn published_two_cars_through_jumps_of_curvature() {
    let ramp = 1e-6;
    let arc_m = 20.0 * 60.0 * DEG / (1.0 - ramp);
    let arc = Element {
        grade: Some(Change::By(60.0 * DEG)),
        ease: Ease::Ramp(ramp),
        ..element(arc_m)
    };
    let start = Start {
        bearing_rad: FRAC_PI_2,
        grade_rad: -30.0 * DEG,
        ..Start::default()
    };
    let spine = element_spine(start, vec![element(20.0), arc, element(30.0)]);
    let bottom_m = 20.0 + 0.5 * arc_m;
    let train = bogie_train(2);
    let poses = Poses::new(&spine, &train).unwrap();
    let (release, goal) = (scenario(bottom_m - 15.0, 10.0), until(bottom_m + 15.5));
    let history = run(&poses, &train, &release, &goal);
    for (s, v, first, second) in [
        (
            -10.4,
            12.050946358643704,
            (-0.12285918278579625, 1.2372636124019157),
            (0.07964251942913096, 0.86602540378443865),
        ),
        (
            -9.0,
            12.7025884553,
            (-0.1555580784592, 1.28494278921),
            (0.07910886174026, 0.8660254037844),
        ),
        (
            -8.0,
            13.1135073855,
            (0.02402000316162, 1.74739130009),
            (-0.02728344051322, 0.8660254037844),
        ),
        (
            0.0,
            15.0745667572,
            (0.07322571603899, 2.12058881212),
            (-0.07542561111637, 2.1011459383),
        ),
        (
            11.0,
            13.9436558483,
            (0.2554664825152, 1.36512484886),
            (-0.1652746687652, 1.90276888917),
        ),
        (
            13.0,
            13.1833667531,
            (0.03014145287299, 0.8660254037844),
            (-0.02700310023248, 1.76103298159),
        ),
    ] {
        let at = state_when_at(&history, bottom_m + s);
        close(at.speed_m_s, v, 2e-5);
        for (car, (fx, fz)) in [first, second].into_iter().enumerate() {
            let felt = felt_g(&poses, car, &seat(0.0, 0.0, 0.6), at);
            close_vectors(felt, Vector3::new(fx, 0.0, fz), 2e-5);
        }
    }
}

/// Riders weigh where they sit: a train with a rider of 80 kg at a seat runs as one whose car is a
/// point mass there (joint centre and mass), whether the seat is full or the car heavier.
#[test]
fn exact_riders_as_point_masses() {
    let arc = Arc3::new(15.0, -80.0, 80.0);
    let mut with_rider = car(1.4, 500.0);
    with_rider.mass_centre_m = Vector3::new(0.1, 0.0, 0.3);
    with_rider.seats = vec![seat(0.1, 0.0, 0.3)];
    let mut heavier = with_rider.clone();
    heavier.mass_kg = 580.0;
    heavier.seats.clear();
    let ends = [with_rider, heavier].map(|car| {
        let train = train(vec![car]);
        let poses = Poses::new(&arc.spine, &train).unwrap();
        let mut scenario = running(arc.leading_m(1.4, -1.0), 0.5, 0.02);
        scenario.riders = crestfall::input::Riders::All;
        scenario.resistance.bearings = 0.003;
        let goal = until(arc.leading_m(1.4, 0.5));
        let history = run(&poses, &train, &scenario, &goal);
        assert_eq!(history.end, RunEnd::Completed);
        (history.duration_s, last(&history).speed_m_s)
    });
    close(ends[0].0, ends[1].0, 1e-9);
    close(ends[0].1, ends[1].1, 1e-9);
}
