//! Conversion factors against their definitions, and texts that are no quantities.

use proptest::prelude::*;

use crate::input::dimension::{
    Acceleration, Angle, Area, Density, Dimension, Force, Frequency, Length, Mass, MomentOfInertia,
    Speed, Temperature, Time,
};
use crate::input::quantity::{Quantity, SidedAngle};

fn si<D: Dimension>(text: &str) -> f64 {
    match Quantity::<D>::parse(text) {
        Ok(quantity) => quantity.si,
        Err(error) => panic!("{text}: {error}"),
    }
}

fn refusal<D: Dimension>(text: &str) -> String {
    match Quantity::<D>::parse(text) {
        Ok(quantity) => panic!("{text} was read as {}", quantity.si),
        Err(error) => error.to_string(),
    }
}

/// Factors that are exact by definition: NIST SP 811 (2008), appendix B.8 and section B.6.
#[test]
fn published_factors_of_us_units() {
    assert_eq!(si::<Length>("1 ft"), 0.3048);
    assert_eq!(si::<Length>("1 in"), 0.0254);
    assert_eq!(si::<Mass>("1 lb"), 0.453_592_37);
    assert_eq!(si::<Speed>("1 mph"), 0.447_04);
    assert_eq!(si::<Speed>("1 ft/s"), 0.3048);
    assert_eq!(si::<Force>("1 lbf"), 4.448_221_615_260_5);
    assert_eq!(si::<Area>("1 ft2"), 0.092_903_04);
    assert_eq!(si::<Acceleration>("1 ft/s2"), 0.3048);
}

/// NIST SP 811 (2008), section B.8 gives these to seven digits.
#[test]
fn published_factors_of_us_densities_and_inertias() {
    assert!((si::<Density>("1 lb/ft3") - 16.018_46).abs() < 5e-6);
    assert!((si::<MomentOfInertia>("1 lb ft2") - 0.042_140_11).abs() < 5e-9);
}

/// Prefixes and derived units of the SI brochure (9th edition), tables 4 and 7.
#[test]
fn exact_factors_of_si_units() {
    assert_eq!(si::<Length>("2 mm"), 0.002);
    assert_eq!(si::<Length>("3 cm"), 0.03);
    assert_eq!(si::<Length>("1.2 km"), 1200.0);
    assert_eq!(si::<Speed>("36 km/h"), 10.0);
    assert_eq!(si::<Mass>("1.5 t"), 1500.0);
    assert_eq!(si::<Force>("18 kN"), 18_000.0);
    assert_eq!(si::<Time>("200 ms"), 0.2);
    assert_eq!(si::<Time>("2 min"), 120.0);
    assert_eq!(si::<Frequency>("0.5 kHz"), 500.0);
    assert_eq!(si::<Angle>("180 deg"), std::f64::consts::PI);
    assert_eq!(si::<Angle>("180°"), std::f64::consts::PI);
    assert_eq!(si::<MomentOfInertia>("180 kg m2"), 180.0);
}

/// Freezing and boiling point of water as the scales are defined: NIST SP 811 (2008), section B.8.
#[test]
fn exact_temperatures() {
    assert_eq!(si::<Temperature>("0 degC"), 273.15);
    assert!((si::<Temperature>("32 degF") - 273.15).abs() < 1e-12);
    assert!((si::<Temperature>("212 degF") - 373.15).abs() < 1e-12);
    assert_eq!(si::<Temperature>("291.15 K"), 291.15);
}

#[test]
fn spaces_signs_and_exponents_are_read() {
    for text in ["12m", "12 m", " +12.0   m ", "1.2e1 m", "12.m", "0.12e+2m"] {
        assert_eq!(si::<Length>(text), 12.0, "{text}");
    }
    assert_eq!(si::<Length>("-.5 m"), -0.5);
}

#[test]
fn what_is_no_quantity_is_refused_with_the_way_out() {
    let expected = "`12` has no unit, expected a length\nwrite `12 m`";
    assert_eq!(refusal::<Length>("12"), expected);
    let units = "`mm`, `cm`, `km`, `ft`, `in`";
    let expected = format!("`kg` is not a unit of length, expected one of `m`, {units}");
    assert_eq!(refusal::<Length>("12 kg"), expected);
    assert!(refusal::<Length>("NaN m").starts_with("`NaN m` is not finite"));
    assert!(refusal::<Length>("-inf m").starts_with("`-inf m` is not finite"));
    assert_eq!(
        refusal::<Length>("1e999 m"),
        "`1e999 m` is too large for a number"
    );
    assert_eq!(
        refusal::<Length>("1e308 km"),
        "`1e308 km` is too large for a number"
    );
    assert_eq!(
        refusal::<Length>("1e-999 m"),
        "`1e-999 m` is too small for a number"
    );
    assert!(refusal::<Length>("1,5 m").ends_with("decimals are written with a point"));
    for text in [
        "", "m", "12 m m", "0x10 m", "1_000 m", "1e m", "−5 m", "5 M",
    ] {
        refusal::<Length>(text);
    }
}

#[test]
fn sides_are_words() {
    let left = |text: &str| SidedAngle::parse(text).map(|angle| angle.left_rad.to_degrees());
    assert_eq!(left("90 deg left"), Ok(90.0));
    assert_eq!(left("90deg right"), Ok(-90.0));
    assert_eq!(left("0 deg"), Ok(0.0));
    let no_side = left("90 deg").expect_err("a side is missing").to_string();
    assert!(no_side.ends_with("write `90 deg left`"), "{no_side}");
    let both = left("-10 deg left").expect_err("sign and side").to_string();
    assert!(both.ends_with("write `10 deg right`"), "{both}");
}

proptest! {
    #[test]
    fn any_text_is_read_or_refused(text in "\\PC{0,12}") {
        if let Ok(length) = Quantity::<Length>::parse(&text) {
            prop_assert!(length.si.is_finite());
        }
        if let Ok(angle) = SidedAngle::parse(&text) {
            prop_assert!(angle.left_rad.is_finite());
        }
    }

    #[test]
    fn a_number_of_metres_is_itself(number in -1e6..1e6_f64) {
        let text = format!("{number} m");
        prop_assert_eq!(si::<Length>(&text), number);
    }
}
