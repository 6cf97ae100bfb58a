//! The `cantle` program.
fn main() {}
