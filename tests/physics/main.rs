//! Physics against answers from outside: closed forms, published values, reference libraries.
#![allow(missing_docs, unreachable_pub, clippy::unwrap_used)]

mod fixture;
mod motion;
