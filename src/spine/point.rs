//! One point of a spine: position, tangent and up vector with their derivatives by station.

use nalgebra::Vector3;

use crate::numerics::jet::{Jet, VectorJet};

/// Beyond this |t_z| the level frame, and with it the bank, is not defined.
const STEEPEST_WITH_BANK: f64 = 0.9999;

/// Position and attitude at a station, with derivatives in the station.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SpinePoint {
    /// r, world axes, m.
    pub position_m: Vector3<f64>,
    /// Unit tangent t = r′ with t′ = r″ (1/m) and t″ = r‴ (1/m²).
    pub tangent: VectorJet,
    /// Unit up vector u at right angles to t, with u′ and u″.
    pub up: VectorJet,
}

impl SpinePoint {
    /// Position with first and second derivative.
    pub fn position(&self) -> VectorJet {
        VectorJet::new(self.position_m, self.tangent.value, self.tangent.d1)
    }

    /// Unit left vector u × t, so that (t, l, u) is right-handed.
    pub fn left(&self) -> VectorJet {
        self.up.cross(self.tangent)
    }

    /// Curvature κ = |r″|, 1/m.
    pub fn curvature_1_m(&self) -> f64 {
        self.tangent.d1.norm()
    }

    /// Radius 1/κ, m; none where κ is 0.
    pub fn radius_m(&self) -> Option<f64> {
        let curvature = self.curvature_1_m();
        (curvature > 0.0).then(|| 1.0 / curvature)
    }

    /// Torsion (r′ × r″)·r‴/κ², 1/m (do Carmo, *Differential Geometry*, sec. 1-5); none where κ is 0.
    pub fn torsion_1_m(&self) -> Option<f64> {
        let t = &self.tangent;
        let squared = t.d1.norm_squared();
        (squared > 0.0).then(|| t.value.cross(&t.d1).dot(&t.d2) / squared)
    }

    /// Inclination of the tangent above horizontal, rad.
    pub fn grade_rad(&self) -> f64 {
        self.tangent.value.z.clamp(-1.0, 1.0).asin()
    }

    /// Bank to the left, rad in (−π, π]; none where the track stands on end.
    pub fn bank_left_rad(&self) -> Option<f64> {
        if self.tangent.value.z.abs() > STEEPEST_WITH_BANK {
            return None;
        }
        let level_left = level_left(self.tangent).value;
        let level_up = self.tangent.value.cross(&level_left);
        let up = &self.up.value;
        Some(up.dot(&level_left).atan2(up.dot(&level_up)))
    }

    /// Rotation of the frame per metre on (t, l, u): roll, pitch and yaw rate, rad/m.
    pub fn rotation_rad_m(&self) -> Vector3<f64> {
        let (t, l, u) = (self.tangent, self.left(), self.up);
        Vector3::new(l.d1.dot(&u.value), u.d1.dot(&t.value), t.d1.dot(&l.value))
    }
}

/// Level left of a tangent that does not stand on end: h = (−t_y, t_x, 0)/|…|.
pub(super) fn level_left(tangent: VectorJet) -> VectorJet {
    let component = |i: usize| Jet::new(tangent.value[i], tangent.d1[i], tangent.d2[i]);
    VectorJet::from_components(-component(1), component(0), Jet::default()).normalized()
}
