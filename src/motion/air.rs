//! The air's density and the wind as a vector.

use nalgebra::Vector3;

use crate::STANDARD_GRAVITY_M_S2;
use crate::input::{Air, Wind};

/// Temperature at altitude 0, K (ISO 2533:1975, table 1).
const SEA_LEVEL_TEMPERATURE_K: f64 = 288.15;
/// Pressure at altitude 0, Pa.
const SEA_LEVEL_PRESSURE_PA: f64 = 101_325.0;
/// Temperature lost per metre up to 11 km, K/m.
const LAPSE_K_M: f64 = 0.0065;
/// Specific gas constant of dry air, J/(kg K).
const GAS_CONSTANT_J_KG_K: f64 = 287.052_87;

/// Density of the air, kg/m³: given, or the pressure of ISO 2533 at a geopotential altitude
/// (−2 km..11 km) over R T, T given or the standard one there.
pub fn density_kg_m3(air: Air) -> f64 {
    match air {
        Air::Density(density_kg_m3) => density_kg_m3,
        Air::Altitude {
            altitude_m,
            temperature_k,
        } => {
            let standard_k = SEA_LEVEL_TEMPERATURE_K - LAPSE_K_M * altitude_m;
            let exponent = STANDARD_GRAVITY_M_S2 / (GAS_CONSTANT_J_KG_K * LAPSE_K_M);
            let ratio = standard_k / SEA_LEVEL_TEMPERATURE_K;
            let pressure_pa = SEA_LEVEL_PRESSURE_PA * ratio.powf(exponent);
            pressure_pa / (GAS_CONSTANT_J_KG_K * temperature_k.unwrap_or(standard_k))
        }
    }
}

/// Velocity of the air, world axes, m/s; a wind is named by the bearing it blows from.
pub fn wind_m_s(wind: Option<Wind>) -> Vector3<f64> {
    wind.map_or(Vector3::zeros(), |wind| {
        let (sin, cos) = wind.from_bearing_rad.sin_cos();
        Vector3::new(-sin, -cos, 0.0) * wind.speed_m_s
    })
}
