//! Numerical tools that know nothing of rides.

pub mod banded;
pub mod bspline;
pub mod jet;
pub mod lowpass;
pub mod quadrature;
pub mod quintic;
pub mod root;
pub mod smoothing;
pub mod symmetric;
