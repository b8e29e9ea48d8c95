//! The command `crestfall`.

fn main() {}
