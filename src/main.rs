//! The lossbook command.
fn main() {}
