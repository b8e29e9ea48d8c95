//! A train of seven cars over a crest.

use crestfall::train::Poses;

use crate::fixture::*;

/// B11 (Meriam & Kraige, *Statics*, sec. 5/3): seven cars, 2.5 m of arc apart, over a crest of
/// R = 20 m, no friction. On a circle equal chords are equal arcs, so the chained train coincides.
#[test]
fn exact_train_over_a_crest() {
    let (radius_m, chord_m, pitch) = (20.0f64, 0.8, 2.5 / 20.0);
    let arc = Arc3::new(radius_m, 85.0, -85.0);
    let own = 2.0 * (0.5 * chord_m / radius_m).asin();
    let link_m = 2.0 * radius_m * (0.5 * (pitch - own)).sin();
    let mut cars = vec![car_on_circle(chord_m, 700.0, -radius_m); 7];
    cars.iter_mut()
        .for_each(|car| car.length_m = chord_m + link_m);
    let train = train(cars);
    let poses = Poses::new(&arc.spine, &train).unwrap();
    let front_at = |grade_rad: f64| arc.leading_m(chord_m, grade_rad);
    // The leading car is three pitches ahead of the middle.
    let (release, goal) = (
        scenario(front_at(-3.0 * pitch), 6.0),
        until(front_at(-6.0 * pitch)),
    );
    let history = run(&poses, &train, &release, &goal);
    let rider = seat(0.0, 0.0, height_of_rail_m(chord_m, -radius_m));
    // When the rear car is on the crest, six pitches behind the leading one.
    let end = last(&history);
    close(end.speed_m_s, 7.900339837800855, 1e-9);
    close(end.acceleration_m_s2, 3.4806781977649456, 1e-9);
    let felt = |car: usize, state| felt_g(&poses, car, &rider, state);
    close(felt(6, end).z, 0.68177017864029388, 1e-9);
    close(felt(6, end).x, 0.35493039904197107, 1e-9);
    close(felt(0, end).x, -0.32670836098136309, 1e-9);
    close((0..7).map(|car| felt(car, end).x).sum::<f64>(), 0.0, 1e-9);
    let start = history.state_at(0.0).unwrap();
    close(felt(3, start).z, 0.81645108166397292, 1e-9);
}

/// B11: a train that climbs over the crest: when the front car is on it, the train is still climbing.
#[test]
fn exact_train_climbing_a_crest() {
    let arc = Arc3::new(20.0, 85.0, -85.0);
    let (chord_m, pitch) = (0.8f64, 2.5 / 20.0);
    let own = 2.0 * (0.5 * chord_m / 20.0).asin();
    let mut cars = vec![car_on_circle(chord_m, 700.0, -20.0); 7];
    let link_m = 40.0 * (0.5 * (pitch - own)).sin();
    cars.iter_mut()
        .for_each(|car| car.length_m = chord_m + link_m);
    let train = train(cars);
    let poses = Poses::new(&arc.spine, &train).unwrap();
    let front_m = arc.leading_m(chord_m, 0.0);
    let (release, goal) = (
        scenario(front_m, 7.900339837800855),
        until(arc.leading_m(chord_m, -3.0 * pitch)),
    );
    let history = run(&poses, &train, &release, &goal);
    let start = history.state_at(0.0).unwrap();
    close(start.acceleration_m_s2, -3.4806781977649456, 1e-9);
    let rider = seat(0.0, 0.0, height_of_rail_m(chord_m, -20.0));
    close(
        felt_g(&poses, 0, &rider, start).x,
        -0.35493039904197107,
        1e-9,
    );
    close(last(&history).speed_m_s, 6.0, 1e-9);
}

/// B11: time of a single mass from the crest to 30° past, by quadrature: 1.478846844929870 s for the
/// seven-car train at 6 m/s centred; its centre's height factor is 0.96903363167208232.
#[test]
fn exact_time_over_a_crest() {
    let factor = 0.96903363167208232;
    let time = boole(0.0, 30.0 * DEG, 2000, |a| {
        20.0 / (36.0 + 2.0 * G * 20.0 * factor * (1.0 - a.cos())).sqrt()
    });
    let arc = Arc3::new(20.0, 85.0, -85.0);
    let (chord_m, pitch) = (0.8f64, 2.5 / 20.0);
    let own = 2.0 * (0.5 * chord_m / 20.0).asin();
    let mut cars = vec![car_on_circle(chord_m, 700.0, -20.0); 7];
    let link_m = 40.0 * (0.5 * (pitch - own)).sin();
    cars.iter_mut()
        .for_each(|car| car.length_m = chord_m + link_m);
    let train = train(cars);
    let poses = Poses::new(&arc.spine, &train).unwrap();
    let release = scenario(arc.leading_m(chord_m, -3.0 * pitch), 6.0);
    let goal = until(arc.leading_m(chord_m, -3.0 * pitch - 30.0 * DEG));
    let history = run(&poses, &train, &release, &goal);
    close(history.duration_s, time, 1e-9);
    close(history.duration_s, 1.4788468449298698, 1e-9);
}
