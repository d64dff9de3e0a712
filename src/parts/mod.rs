//! Parts as the model sees them: the curves of a data sheet fitted once, in SI units, for n devices in parallel.

pub mod capacitor;
pub mod controller;
pub mod copper;
pub mod core;
pub mod curve;
pub mod diode;
pub mod inductor;
pub mod junction;
pub mod linear_regulator;
pub mod mosfet;
