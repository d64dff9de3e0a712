//! Speed of one solved point.
fn main() {}
