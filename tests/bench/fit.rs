//! Time of fits by the number of points: `cargo bench --bench fit [POINTS …]`.
#![allow(missing_docs, clippy::unwrap_used, clippy::print_stdout)]

use std::sync::Arc;
use std::time::{Duration, Instant};

use crestfall::diagnostic::{Place, Source};
use crestfall::input::{Columns, Fit, PointTable, Track, TrackSource};
use crestfall::spine::Spine;
use nalgebra::Vector3;

fn main() {
    let asked = std::env::args().skip(1).filter_map(|a| a.parse().ok());
    let mut counts = asked.collect::<Vec<usize>>();
    if counts.is_empty() {
        counts = vec![2_500, 5_000, 10_000, 20_000, 40_000];
    }
    let within = Fit::Within {
        error_m: 0.002,
        bank_error_rad: Some(1e-3),
    };
    println!("points  fit     rails   time, ms   µs per point");
    for count in counts {
        for (name, fit) in [
            ("exact", Fit::Exact),
            ("within", within),
            ("auto", Fit::Auto),
        ] {
            for closed in [false, true] {
                let shape = if closed { "closed" } else { "open" };
                let time = shortest(&track(count, fit, closed));
                let (ms, each) = (
                    time.as_secs_f64() * 1e3,
                    time.as_secs_f64() * 1e6 / count as f64,
                );
                println!("{count:6}  {name:6}  {shape:6}  {ms:8.1}   {each:.2}");
            }
        }
    }
}

/// Of three fits.
fn shortest(track: &Track) -> Duration {
    let one = || {
        let start = Instant::now();
        assert!(Spine::from_track(track).unwrap().length_m() > 0.0);
        start.elapsed()
    };
    (0..3).map(|_| one()).min().unwrap()
}

/// Rails every 0.25 m round a circle with hills, or on along a wavy line, 2 mm off.
fn track(count: usize, fit: Fit, closed: bool) -> Track {
    let mut random = Random(7);
    let (mut left_m, mut right_m) = (vec![], vec![]);
    let radius_m = 0.25 * count as f64 / std::f64::consts::TAU;
    for i in 0..count {
        let s = 0.25 * i as f64;
        let (middle, left) = if closed {
            let (sin, cos) = (s / radius_m).sin_cos();
            let hills = 3.0 * (s / radius_m * (radius_m / 12.0).round()).sin();
            (
                Vector3::new(radius_m * cos, radius_m * sin, hills),
                Vector3::new(-cos, -sin, 0.0),
            )
        } else {
            (
                Vector3::new(s, 10.0 * (0.09 * s).sin(), 8.0 * (0.07 * s).cos()),
                Vector3::y(),
            )
        };
        left_m.push((middle + 0.5 * left).map(|x| x + 0.002 * random.gaussian()));
        right_m.push((middle - 0.5 * left).map(|x| x + 0.002 * random.gaussian()));
    }
    let source = Arc::new(Source {
        name: "bench".into(),
        text: String::new(),
    });
    let place = Place { source, span: 0..0 };
    let table = PointTable::new(
        Columns::Rails { left_m, right_m },
        closed,
        fit,
        place.clone(),
    );
    Track {
        name: "bench".into(),
        source: TrackSource::Points(table),
        landmarks: vec![],
        place,
    }
}

/// xorshift64* (Vigna 2016); a sum of twelve is nearly Gaussian.
struct Random(u64);

impl Random {
    fn unit(&mut self) -> f64 {
        self.0 ^= self.0 >> 12;
        self.0 ^= self.0 << 25;
        self.0 ^= self.0 >> 27;
        (self.0.wrapping_mul(0x2545_F491_4F6C_DD1D) >> 11) as f64 / (1u64 << 53) as f64
    }

    fn gaussian(&mut self) -> f64 {
        (0..12).map(|_| self.unit()).sum::<f64>() - 6.0
    }
}
