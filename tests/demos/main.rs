//! The demo studies do what their comments say, through the library.
#![allow(missing_docs, unreachable_pub, clippy::unwrap_used)]

mod as_built;
mod demo;
mod saltglass;
mod tinderbox;
