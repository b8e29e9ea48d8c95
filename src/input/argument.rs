//! Quantities given on the command line, in the words of the files.

use crate::input::dimension::Speed;
use crate::input::quantity::Quantity;

/// A speed above 0 such as `25 m/s`, in m/s.
///
/// # Errors
/// What was found and what was expected.
pub fn speed_m_s(text: &str) -> Result<f64, String> {
    let speed = Quantity::<Speed>::parse(text).map_err(|wrong| wrong.to_string())?;
    if speed.si > 0.0 {
        Ok(speed.si)
    } else {
        Err(format!("found `{text}`, expected a speed above 0"))
    }
}
