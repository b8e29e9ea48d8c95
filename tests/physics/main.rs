//! Physics against answers from outside: closed forms, published values, reference libraries.
//!
//! Each test names its source beside the number. `exact_` means a closed form, `published_` a
//! number printed elsewhere, `converges_` an order of convergence. Case numbers (A01 to F05) are those of
//! the catalogue of closed forms the values were worked out for, to 17 digits with mpmath.
#![allow(
    missing_docs,
    unreachable_pub,
    clippy::unwrap_used,
    clippy::excessive_precision
)]

mod air;
mod bodies;
mod brakes;
mod circles;
mod convergence;
mod crest;
mod drives;
mod fits;
mod fixture;
mod geometry;
mod hilly;
mod invariance;
mod ledger;
mod loops;
mod noise;
mod runs;
mod seats;
mod signals;
mod slopes;
mod splines;
mod turns;
mod valley;
mod zones;
