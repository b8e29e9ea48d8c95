//! Loads after an envelope's filter.

use super::AxesG;
use crate::input::Filter;
use crate::numerics::lowpass::Butterworth;

/// Three axes after a filter.
#[derive(Clone, Debug, PartialEq)]
pub struct Filtered {
    /// Hz.
    pub rate_hz: f64,
    /// The filter's delay at zero frequency, s.
    pub delay_s: f64,
    /// Filtered loads.
    pub axes_g: AxesG,
    /// Error of numerics that any load may have, g.
    pub numerical_g: f64,
    /// Half-widths that the geometry's uncertainty gives each load, g, where there is any.
    pub margin_g: Option<AxesG>,
}

/// The same with the last load held for as long as the filter's delay, so that the end of the record
/// is seen in full.
pub fn filtered_to_the_end(axes_g: &AxesG, rate_hz: f64, filter: Filter) -> Filtered {
    let delay_s = match filter {
        Filter::None => 0.0,
        Filter::Butterworth { poles, corner_hz } => {
            Butterworth::new(poles, corner_hz, rate_hz).delay_s()
        }
    };
    filtered(
        &held_on(axes_g, (delay_s * rate_hz).ceil() as usize),
        rate_hz,
        filter,
    )
}

/// Three axes whose last values go on for `count` samples.
pub fn held_on(axes: &AxesG, count: usize) -> AxesG {
    axes.each_ref().map(|axis| {
        let last = axis.last().copied();
        axis.iter()
            .copied()
            .chain(last.into_iter().flat_map(|v| std::iter::repeat_n(v, count)))
            .collect()
    })
}

/// How long, s, until a filter has lost what it was started with.
pub fn memory_s(filter: Filter, rate_hz: f64) -> f64 {
    match filter {
        Filter::None => 0.0,
        Filter::Butterworth { poles, corner_hz } => {
            Butterworth::new(poles, corner_hz, rate_hz).memory_s()
        }
    }
}

/// Runs an envelope's filter over three axes, whose errors are left to the caller.
///
/// A corner is below half of `rate_hz`.
pub fn filtered(axes_g: &AxesG, rate_hz: f64, filter: Filter) -> Filtered {
    let mut axes_g = axes_g.clone();
    let delay_s = match filter {
        Filter::None => 0.0,
        Filter::Butterworth { poles, corner_hz } => {
            let lowpass = Butterworth::new(poles, corner_hz, rate_hz);
            axes_g
                .iter_mut()
                .for_each(|axis| lowpass.run_from_steady(axis));
            lowpass.delay_s()
        }
    };
    Filtered {
        rate_hz,
        delay_s,
        axes_g,
        numerical_g: 0.0,
        margin_g: None,
    }
}
