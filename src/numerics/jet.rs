//! A quantity with its first and second derivative in one variable.
//!
//! Truncated Taylor arithmetic (Griewank & Walther, *Evaluating Derivatives*,
//! ch. 13): products and compositions carry their derivatives with them.

use std::ops::{Add, Mul, Neg, Sub};

use nalgebra::Vector3;

/// f, f′, f″.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Jet {
    /// f.
    pub value: f64,
    /// f′.
    pub d1: f64,
    /// f″.
    pub d2: f64,
}

impl Jet {
    /// A quantity with its derivatives.
    pub const fn new(value: f64, d1: f64, d2: f64) -> Self {
        Self { value, d1, d2 }
    }

    /// The same with every part multiplied by `factor`.
    pub fn scaled(self, factor: f64) -> Self {
        Self::new(self.value * factor, self.d1 * factor, self.d2 * factor)
    }

    /// Sine and cosine.
    pub fn sin_cos(self) -> (Self, Self) {
        let (s, c) = self.value.sin_cos();
        (self.outer(s, c, -s), self.outer(c, -s, -c))
    }

    /// One over the square root; f above 0.
    pub fn inverse_sqrt(self) -> Self {
        let root = 1.0 / self.value.sqrt();
        let slope = -0.5 * root / self.value;
        self.outer(root, slope, -1.5 * slope / self.value)
    }

    /// h(f) from h and its derivatives at f.
    fn outer(self, h: f64, h1: f64, h2: f64) -> Self {
        Self::new(h, h1 * self.d1, h1 * self.d2 + h2 * self.d1 * self.d1)
    }
}

impl Add for Jet {
    type Output = Self;
    fn add(self, other: Self) -> Self {
        Self::new(
            self.value + other.value,
            self.d1 + other.d1,
            self.d2 + other.d2,
        )
    }
}

impl Sub for Jet {
    type Output = Self;
    fn sub(self, other: Self) -> Self {
        self + -other
    }
}

impl Neg for Jet {
    type Output = Self;
    fn neg(self) -> Self {
        self.scaled(-1.0)
    }
}

impl Mul for Jet {
    type Output = Self;
    fn mul(self, other: Self) -> Self {
        Self::new(
            self.value * other.value,
            self.d1 * other.value + self.value * other.d1,
            self.d2 * other.value + 2.0 * self.d1 * other.d1 + self.value * other.d2,
        )
    }
}

/// A vector with its first and second derivative.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct VectorJet {
    /// The vector.
    pub value: Vector3<f64>,
    /// Its first derivative.
    pub d1: Vector3<f64>,
    /// Its second derivative.
    pub d2: Vector3<f64>,
}

impl VectorJet {
    /// A vector with its derivatives.
    pub const fn new(value: Vector3<f64>, d1: Vector3<f64>, d2: Vector3<f64>) -> Self {
        Self { value, d1, d2 }
    }

    /// From its three components.
    pub fn from_components(x: Jet, y: Jet, z: Jet) -> Self {
        Self::new(
            Vector3::new(x.value, y.value, z.value),
            Vector3::new(x.d1, y.d1, z.d1),
            Vector3::new(x.d2, y.d2, z.d2),
        )
    }

    /// The same with every part multiplied by `factor`.
    pub fn scaled(self, factor: f64) -> Self {
        Self::new(self.value * factor, self.d1 * factor, self.d2 * factor)
    }

    /// Scalar product.
    pub fn dot(self, other: Self) -> Jet {
        Jet::new(
            self.value.dot(&other.value),
            self.d1.dot(&other.value) + self.value.dot(&other.d1),
            self.d2.dot(&other.value) + 2.0 * self.d1.dot(&other.d1) + self.value.dot(&other.d2),
        )
    }

    /// Vector product.
    pub fn cross(self, other: Self) -> Self {
        Self::new(
            self.value.cross(&other.value),
            self.d1.cross(&other.value) + self.value.cross(&other.d1),
            self.d2.cross(&other.value)
                + 2.0 * self.d1.cross(&other.d1)
                + self.value.cross(&other.d2),
        )
    }

    /// Divided by its length, which is above 0.
    pub fn normalized(self) -> Self {
        self * self.dot(self).inverse_sqrt()
    }

    /// The part at right angles to the unit vector `axis`.
    pub fn orthogonal_to(self, axis: Self) -> Self {
        self - axis * self.dot(axis)
    }

    /// The derivatives in x of this function of s, where `s` is a function of x.
    pub fn along(self, s: Jet) -> Self {
        Self::new(
            self.value,
            self.d1 * s.d1,
            self.d1 * s.d2 + self.d2 * (s.d1 * s.d1),
        )
    }
}

impl Add for VectorJet {
    type Output = Self;
    fn add(self, other: Self) -> Self {
        Self::new(
            self.value + other.value,
            self.d1 + other.d1,
            self.d2 + other.d2,
        )
    }
}

impl Sub for VectorJet {
    type Output = Self;
    fn sub(self, other: Self) -> Self {
        self + other.scaled(-1.0)
    }
}

impl Mul<Jet> for VectorJet {
    type Output = Self;
    fn mul(self, k: Jet) -> Self {
        Self::new(
            self.value * k.value,
            self.d1 * k.value + self.value * k.d1,
            self.d2 * k.value + 2.0 * k.d1 * self.d1 + self.value * k.d2,
        )
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// f, f′, f″ of sin² x/√(2 + x²) and of a composition, against central differences.
    #[test]
    fn exact_derivatives() {
        let f = |x: Jet| {
            let (sin, _) = x.sin_cos();
            let two = Jet::new(2.0, 0.0, 0.0);
            sin * sin * (two + x * x).inverse_sqrt() - x.scaled(0.3)
        };
        let value = |x: f64| f(Jet::new(x, 1.0, 0.0)).value;
        let (x, h) = (0.8, 1e-4);
        let jet = f(Jet::new(x, 1.0, 0.0));
        let slope = (value(x + h) - value(x - h)) / (2.0 * h);
        let bend = (value(x + h) - 2.0 * value(x) + value(x - h)) / (h * h);
        assert!((jet.d1 - slope).abs() < 1e-8, "{jet:?} {slope}");
        assert!((jet.d2 - bend).abs() < 1e-6, "{jet:?} {bend}");
        // As a function of t with x = t³ at t = 0.9: d/dt = 3t² d/dx.
        let t = 0.9f64;
        let cube = f(Jet::new(t.powi(3), 3.0 * t * t, 6.0 * t));
        let by_t = |t: f64| value(t.powi(3));
        let slope = (by_t(t + h) - by_t(t - h)) / (2.0 * h);
        let bend = (by_t(t + h) - 2.0 * by_t(t) + by_t(t - h)) / (h * h);
        assert!((cube.d1 - slope).abs() < 1e-7, "{cube:?} {slope}");
        assert!((cube.d2 - bend).abs() < 1e-5, "{cube:?} {bend}");
    }

    /// A unit vector on a helix (a = 2, b = 1): tangent of constant length, at right angles to its derivative,
    /// which is κ = a/(a² + b²) long by arc length (do Carmo, sec. 1-5).
    #[test]
    fn exact_vectors() {
        let t = Jet::new(0.4, 1.0, 0.0);
        let (sin, cos) = t.sin_cos();
        let velocity =
            VectorJet::from_components(-sin.scaled(2.0), cos.scaled(2.0), Jet::new(1.0, 0.0, 0.0));
        let tangent = velocity.normalized();
        let by_arc = tangent.along(Jet::new(0.4, 1.0 / 5f64.sqrt(), 0.0));
        assert!((by_arc.d1.norm() - 2.0 / 5.0).abs() < 1e-15);
        assert!(tangent.dot(tangent).d1.abs() < 1e-15 && tangent.dot(tangent).d2.abs() < 1e-15);
        let across = VectorJet::new(Vector3::x(), Vector3::zeros(), Vector3::zeros());
        let across = across.orthogonal_to(tangent).normalized();
        let zero = across.dot(tangent);
        assert!(zero.value.abs() + zero.d1.abs() + zero.d2.abs() < 1e-14);
        let binormal = tangent.cross(across);
        assert!((binormal.dot(binormal).value - 1.0).abs() < 1e-14);
        assert!(binormal.dot(binormal).d2.abs() < 1e-14);
    }
}
