//! Rules held against loads.
