//! Filters.

use std::f64::consts::{PI, TAU};

use crestfall::input::Filter;
use crestfall::loads::filtered;
use crestfall::numerics::lowpass::Butterworth;
use nalgebra::Complex;

use crate::fixture::*;

/// D01 (Oppenheim & Schafer, *Discrete-Time Signal Processing*, sec. 7.2; SciPy 1.17.1
/// `signal.butter(output="sos")`): the sections of the 4-pole filter, least damped first.
#[test]
fn published_butterworth_sections() {
    let cases = [
        (
            (5.0, 200.0),
            [
                (
                    0.005808126894364892,
                    -1.8638004920752352,
                    0.8870329996526948,
                ),
                (
                    0.005378494217712605,
                    -1.7259333950369407,
                    0.7474473719077911,
                ),
            ],
        ),
        (
            (10.0, 1000.0),
            [
                (
                    0.00096348432551229066,
                    -1.9492159580258414,
                    0.95306989532789058,
                ),
                (
                    0.00093253841562947442,
                    -1.8866095826215064,
                    0.89033973628402429,
                ),
            ],
        ),
    ];
    for ((corner_hz, rate_hz), sections) in cases {
        let filter = Butterworth::new(4, corner_hz, rate_hz);
        assert_eq!(filter.sections().len(), 2);
        for (section, (b0, a1, a2)) in filter.sections().iter().zip(sections) {
            close(section.b[0], b0, 1e-15);
            close(section.b[1], 2.0 * b0, 1e-15);
            close(section.b[2], b0, 1e-15);
            close(section.a[0], a1, 1e-14);
            close(section.a[1], a2, 1e-14);
        }
    }
}

/// Response at a frequency, from the sections.
fn response(filter: &Butterworth, f_hz: f64, rate_hz: f64) -> Complex<f64> {
    let z = Complex::new(0.0, -TAU * f_hz / rate_hz).exp();
    let section = |s: &crestfall::numerics::lowpass::Section| {
        (s.b[0] + z * s.b[1] + z * z * s.b[2]) / (z * s.a[0] + z * z * s.a[1] + 1.0)
    };
    filter.sections().iter().map(section).product()
}

/// D02: |H| = 1/√(1 + W⁸), W = tan(πf/fs)/tan(πfc/fs); phase; delay at zero frequency.
#[test]
#[allow(clippy::approx_constant)]
fn exact_butterworth_response() {
    let filter = Butterworth::new(4, 5.0, 200.0);
    for (f_hz, gain) in [
        (1.0, 0.99999874008640661),
        (2.0, 0.99967698061233432),
        (3.0, 0.99179220837324503),
        (5.0, 0.70710678118654752),
        (8.0, 0.14895226779675374),
        (10.0, 0.060852852872560273),
        (15.0, 0.011547625634048028),
        (20.0, 0.0034421506785915033),
    ] {
        close(response(&filter, f_hz, 200.0).norm(), gain, 1e-12);
    }
    close(
        response(&filter, 1.0, 200.0).arg(),
        -0.524535506894251,
        1e-10,
    );
    close(
        response(&filter, 2.0, 200.0).arg(),
        -1.0691372936033319,
        1e-10,
    );
    close(filter.delay_s(), 0.083007282662113399, 1e-15);
    close(
        Butterworth::new(4, 10.0, 1000.0).delay_s(),
        0.041575507668458943,
        1e-15,
    );
}

/// Any number of poles: |H|² = 1/(1 + W^(2n)), and the delay is minus the slope of the phase at 0.
#[test]
fn exact_butterworth_of_any_order() {
    for poles in 1..=8 {
        let filter = Butterworth::new(poles, 7.0, 300.0);
        for f_hz in [0.5, 3.0, 7.0, 20.0, 70.0] {
            let w = (PI * f_hz / 300.0).tan() / (PI * 7.0 / 300.0).tan();
            let gain = 1.0 / (1.0 + w.powi(2 * poles as i32)).sqrt();
            close(response(&filter, f_hz, 300.0).norm(), gain, 1e-12);
        }
        let slope = -response(&filter, 1e-3, 300.0).arg() / (TAU * 1e-3);
        close(slope, filter.delay_s(), 1e-7);
    }
}

/// D03 (SciPy 1.17.1 `sosfilt`, zero state): unit step; ours starts steady at the zero before it.
#[test]
fn published_step_response() {
    type Case<'a> = ((f64, f64), usize, f64, &'a [(usize, f64)]);
    let cases: [Case<'_>; 2] = [
        (
            (5.0, 200.0),
            35,
            1.1090978824047286,
            &[
                (4, 0.007883714556324344),
                (10, 0.12340737200634742),
                (20, 0.6522873212586835),
                (30, 1.0632275615454423),
                (40, 1.082259182409989),
                (60, 0.9740838395770425),
                (100, 0.9977082769051813),
            ],
        ),
        (
            (10.0, 1000.0),
            89,
            1.1083910143492468,
            &[
                (20, 0.05647389982598985),
                (50, 0.6339537968135853),
                (100, 1.0847238260002656),
                (150, 0.9736457453977746),
                (200, 1.008008205217272),
                (500, 0.9999999944597998),
            ],
        ),
    ];
    for ((corner_hz, rate_hz), peak_at, peak, samples) in cases {
        let mut signal = vec![1.0; 700];
        signal[0] = 0.0;
        Butterworth::new(4, corner_hz, rate_hz).run_from_steady(&mut signal);
        for &(k, value) in samples {
            close(signal[k + 1], value, 1e-11);
        }
        let largest = (0..700)
            .max_by(|&a, &b| signal[a].total_cmp(&signal[b]))
            .unwrap();
        assert_eq!(largest, peak_at + 1);
        close(signal[largest], peak, 1e-11);
    }
}

/// D03: 5 g half sines of 0.05 to 0.5 s, starting at sample 20: filtered peak and its sample (SciPy 1.17.1).
#[test]
fn published_half_sines() {
    for (intervals, peak, at) in [
        (10, 1.82772336184, 44),
        (20, 3.34174360949, 49),
        (40, 4.82098492485, 59),
        (100, 4.98874431746, 86),
    ] {
        let half_sine = |k: usize| match k.checked_sub(20) {
            Some(i) if i <= intervals => 5.0 * (PI * i as f64 / intervals as f64).sin(),
            _ => 0.0,
        };
        let signal = (0..400).map(half_sine).collect::<Vec<_>>();
        let lowpass = Filter::Butterworth {
            poles: 4,
            corner_hz: 5.0,
        };
        let out = filtered(&[signal.clone(), signal.clone(), signal], 200.0, lowpass);
        close(out.delay_s, 0.083007282662113399, 1e-15);
        for axis in &out.axes_g {
            let largest = (0..400)
                .max_by(|&a, &b| axis[a].total_cmp(&axis[b]))
                .unwrap();
            assert_eq!(largest, at);
            close(axis[largest], peak, 1e-10);
        }
    }
}

/// A constant load passes from its first sample on; no filter passes everything.
#[test]
fn exact_steady_start() {
    let level = vec![3.7; 200];
    let axes = [level.clone(), level.clone(), level];
    for filter in [
        Filter::None,
        Filter::Butterworth {
            poles: 4,
            corner_hz: 5.0,
        },
    ] {
        let out = filtered(&axes, 500.0, filter);
        out.axes_g
            .iter()
            .flatten()
            .for_each(|&v| close(v, 3.7, 1e-10));
    }
}
