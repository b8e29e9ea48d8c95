//! Numerical tools that know nothing of rides.

pub mod lowpass;
