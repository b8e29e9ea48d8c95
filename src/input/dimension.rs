//! The dimensions of quantities and their units, with exact factors.
//!
//! Factors of US units are exact by definition: NIST SP 811 (2008), appendix B.8.

use std::f64::consts::PI;

/// What a quantity measures.
pub(super) trait Dimension {
    /// In words.
    const NAME: &'static str;
    /// In words, with its article.
    const ARTICLE_NAME: &'static str;
    /// How it may be written.
    const EXAMPLE: &'static str;
    /// The usual unit first.
    const UNITS: &'static [Unit];
}

/// One unit: SI value = (number + offset) × times / over.
///
/// Two factors keep `1 mm` the number nearest to 0.001, which a single rounded factor would not.
#[derive(Debug)]
pub(super) struct Unit {
    pub(super) name: &'static str,
    offset: f64,
    times: f64,
    over: f64,
}

impl Unit {
    /// A number of this unit in SI.
    pub(super) fn to_si(&self, number: f64) -> f64 {
        (number + self.offset) * self.times / self.over
    }
}

const fn unit(name: &'static str, times: f64, over: f64) -> Unit {
    Unit {
        name,
        offset: 0.0,
        times,
        over,
    }
}

const fn degrees(name: &'static str, offset: f64, times: f64, over: f64) -> Unit {
    Unit {
        name,
        offset,
        times,
        over,
    }
}

/// Declares a dimension.
macro_rules! dimension {
    ($(#[$doc:meta])* $type:ident, $name:literal, $article:literal, $example:literal, [$($unit:expr),+ $(,)?]) => {
        $(#[$doc])*
        #[derive(Clone, Copy, Debug, PartialEq)]
        pub(super) struct $type;

        impl Dimension for $type {
            const NAME: &'static str = $name;
            const ARTICLE_NAME: &'static str = concat!($article, " ", $name);
            const EXAMPLE: &'static str = $example;
            const UNITS: &'static [Unit] = &[$($unit),+];
        }
    };
}

dimension!(
    /// m
    Length, "length", "a", "12 m",
    [
        unit("m", 1.0, 1.0), unit("mm", 1.0, 1000.0), unit("cm", 1.0, 100.0),
        unit("km", 1000.0, 1.0), unit("ft", 0.3048, 1.0), unit("in", 0.0254, 1.0),
    ]
);
dimension!(
    /// m/s
    Speed, "speed", "a", "8 m/s",
    [
        unit("m/s", 1.0, 1.0), unit("km/h", 1000.0, 3600.0),
        unit("mph", 0.44704, 1.0), unit("ft/s", 0.3048, 1.0),
    ]
);
dimension!(
    /// kg
    Mass, "mass", "a", "620 kg",
    [unit("kg", 1.0, 1.0), unit("t", 1000.0, 1.0), unit("lb", 0.453_592_37, 1.0)]
);
dimension!(
    /// N
    Force, "force", "a", "18 kN",
    [unit("kN", 1000.0, 1.0), unit("N", 1.0, 1.0), unit("lbf", 4.448_221_615_260_5, 1.0)]
);
dimension!(
    /// rad
    Angle, "angle", "an", "15 deg",
    [unit("deg", PI, 180.0), unit("°", PI, 180.0), unit("rad", 1.0, 1.0)]
);
dimension!(
    /// K
    Temperature, "temperature", "a", "20 degC",
    [
        degrees("degC", 273.15, 1.0, 1.0), degrees("°C", 273.15, 1.0, 1.0),
        degrees("degF", 459.67, 5.0, 9.0), degrees("°F", 459.67, 5.0, 9.0),
        unit("K", 1.0, 1.0),
    ]
);
dimension!(
    /// m²
    Area, "area", "an", "3.4 m2",
    [unit("m2", 1.0, 1.0), unit("ft2", 0.092_903_04, 1.0)]
);
dimension!(
    /// kg/m³
    Density, "density", "a", "1.2 kg/m3",
    [unit("kg/m3", 1.0, 1.0), unit("lb/ft3", 0.453_592_37, 0.028_316_846_592)]
);
dimension!(
    /// kg m²
    MomentOfInertia, "moment of inertia", "a", "180 kg m2",
    [unit("kg m2", 1.0, 1.0), unit("lb ft2", 0.453_592_37 * 0.092_903_04, 1.0)]
);
dimension!(
    /// Hz
    Frequency, "frequency", "a", "5 Hz",
    [unit("Hz", 1.0, 1.0), unit("kHz", 1000.0, 1.0)]
);
dimension!(
    /// s
    Time, "time", "a", "0.2 s",
    [unit("s", 1.0, 1.0), unit("ms", 1.0, 1000.0), unit("min", 60.0, 1.0)]
);
dimension!(
    /// m/s²
    Acceleration, "acceleration", "an", "9.81 m/s2",
    [unit("m/s2", 1.0, 1.0), unit("ft/s2", 0.3048, 1.0)]
);
