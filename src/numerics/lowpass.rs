//! Butterworth low-pass filters as second-order sections.
//!
//! Bilinear transform with the corner pre-warped (Oppenheim & Schafer,
//! *Discrete-Time Signal Processing*, sec. 7.2), run in transposed direct form II.

use std::f64::consts::PI;

/// Time constants of the slowest pole after which e⁻ᵗ is below 1e-16.
const TRANSIENT: f64 = 37.0;

/// One section: b0 + b1 z⁻¹ + b2 z⁻² over 1 + a1 z⁻¹ + a2 z⁻², gain 1 at zero frequency.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Section {
    /// Numerator.
    pub b: [f64; 3],
    /// Denominator after the leading 1.
    pub a: [f64; 2],
}

/// A Butterworth low-pass filter of 1 or more poles.
#[derive(Clone, Debug, PartialEq)]
pub struct Butterworth {
    sections: Vec<Section>,
    delay_s: f64,
    memory_s: f64,
}

impl Butterworth {
    /// A filter with `poles` ≥ 1 and the −3 dB point at `corner_hz`, below half of `rate_hz`.
    pub fn new(poles: u32, corner_hz: f64, rate_hz: f64) -> Self {
        let k = (PI * corner_hz / rate_hz).tan();
        let dampings = (0..poles / 2)
            .map(|i| 2.0 * (PI * f64::from(2 * i + 1) / f64::from(2 * poles)).sin())
            .collect::<Vec<_>>();
        let mut sections = dampings
            .iter()
            .map(|&d| second_order(d, k))
            .collect::<Vec<_>>();
        let mut damping_sum = dampings.iter().sum::<f64>();
        if poles % 2 == 1 {
            sections.push(first_order(k));
            damping_sum += 1.0;
        }
        let corner_rad_s = 2.0 * rate_hz * k;
        // Poles lie at −d/2 of the corner; the real one at −1.
        let slowest = dampings.iter().map(|d| 0.5 * d).fold(1.0, f64::min);
        Self {
            sections,
            delay_s: damping_sum / corner_rad_s,
            memory_s: TRANSIENT / (slowest * corner_rad_s),
        }
    }

    /// The sections, least damped first.
    pub fn sections(&self) -> &[Section] {
        &self.sections
    }

    /// Group delay at zero frequency, s.
    pub fn delay_s(&self) -> f64 {
        self.delay_s
    }

    /// How long, s, until what the filter was started with is lost below rounding.
    pub fn memory_s(&self) -> f64 {
        self.memory_s
    }

    /// Filters a signal in place, one pass, started in the steady state of its first sample.
    pub fn run_from_steady(&self, signal: &mut [f64]) {
        let Some(&first) = signal.first() else { return };
        for section in &self.sections {
            section.run_from_steady(signal, first);
        }
    }
}

impl Section {
    /// State of the transposed form when input and output have long been `level`.
    fn run_from_steady(&self, signal: &mut [f64], level: f64) {
        let ([b0, b1, b2], [a1, a2]) = (self.b, self.a);
        let mut z2 = (b2 - a2) * level;
        let mut z1 = (b1 - a1) * level + z2;
        for value in signal {
            let x = *value;
            let y = b0 * x + z1;
            z1 = b1 * x - a1 * y + z2;
            z2 = b2 * x - a2 * y;
            *value = y;
        }
    }
}

/// Section of damping `d` (denominator s² + d s + 1 of the prototype), `k` the pre-warped corner.
fn second_order(d: f64, k: f64) -> Section {
    let scale = 1.0 / (1.0 + d * k + k * k);
    let b0 = k * k * scale;
    Section {
        b: [b0, 2.0 * b0, b0],
        a: [2.0 * (k * k - 1.0) * scale, (1.0 - d * k + k * k) * scale],
    }
}

/// Section of the real pole.
fn first_order(k: f64) -> Section {
    let scale = 1.0 / (1.0 + k);
    Section {
        b: [k * scale, k * scale, 0.0],
        a: [(k - 1.0) * scale, 0.0],
    }
}
