//! The books of a run close.

use crestfall::input::{Goal, Scenario};
use crestfall::motion::{History, RunEnd};
use crestfall::train::Poses;

use crate::fixture::*;
use crate::hilly;

/// Design 4.3: end − start is the sum of all works, to 1e-6 of the energy turned over.
#[track_caller]
fn closes(history: &History<'_>) {
    let books = &history.energy;
    let zones_j = books.zones_j.iter().map(|z| z.1).sum::<f64>();
    let closure_j = books.end_j - books.start_j - books.rolling_j - books.air_j - zones_j;
    close(books.closure_j, closure_j, 1e-6);
    assert!(
        books.closure_j.abs() <= 1e-6 * books.turned_over_j,
        "{books:?}"
    );
}

/// A hilly ride with friction, drag, wind and all four kinds of zone.
#[test]
fn exact_books_of_a_hilly_ride() {
    let train = hilly::hilly_train(1.0);
    let poses = Poses::new(&hilly::spine(), &train).unwrap();
    let scenario = hilly::scenario_with_all();
    let history = run(&poses, &train, &scenario, &Goal::TrackEnd);
    assert_eq!(history.end, RunEnd::Completed);
    closes(&history);
    let works = &history.energy.zones_j;
    assert!(
        works.iter().all(|(_, work_j)| work_j.abs() > 100.0),
        "{works:?}"
    );
    assert!(history.energy.air_j.abs() > 100.0 && history.energy.rolling_j < -1000.0);
    // The start is kinetic and potential energy by hand: 3 (640 + 3·80) kg and six axles of 40 kg,
    // rolling masses only in motion, on the level top at 30 m.
    let riders_kg = 3.0 * (640.0 + 240.0);
    let heights_kg_m = 3.0 * (640.0 * 0.45 + 80.0 * (0.9 + 0.9 + 1.1));
    let potential_j = G * ((riders_kg + 240.0) * 30.0 + heights_kg_m);
    let kinetic_j = 0.5 * (riders_kg + 240.0 + 150.0) * 1.5 * 1.5;
    close(history.energy.start_j, potential_j + kinetic_j, 1e-6);
}

/// The same without zones and with so much friction that it rolls back in a valley and rests there.
#[test]
fn exact_books_of_a_rollback() {
    let train = hilly::hilly_train(1.0);
    let poses = Poses::new(&hilly::spine(), &train).unwrap();
    let mut scenario = Scenario {
        zones: vec![],
        ..hilly::scenario_with_all()
    };
    scenario.release.station_m = 42.0;
    scenario.resistance.running = 0.08;
    scenario.resistance.side = 0.1;
    let history = run(&poses, &train, &scenario, &Goal::TrackEnd);
    assert_eq!(history.end, RunEnd::RolledBack);
    assert!(history.reversals.len() >= 2, "{:?}", history.reversals);
    closes(&history);
    close(last(&history).speed_m_s, 0.0, 1e-9);
    assert!(history.energy.rolling_j < 0.0);
}

/// Without any force but weight, energy is kept to 1e-9 of what is turned over (B04).
#[test]
fn exact_books_without_losses() {
    let train = hilly::hilly_train(1.0);
    let poses = Poses::new(&hilly::spine(), &train).unwrap();
    let release = scenario(26.0, 3.0);
    let history = run(&poses, &train, &release, &Goal::TrackEnd);
    let books = &history.energy;
    close(books.rolling_j, 0.0, 0.0);
    close(books.air_j, 0.0, 0.0);
    assert!(
        books.closure_j.abs() <= 1e-8 * books.turned_over_j,
        "{books:?}"
    );
}
