//! Data sheets as they are meant: numbers with unit, tolerance, conditions and source; no curves yet.
//!
//! One file a kind of part. Each sheet is a [`form::Form`]: it lists its keys once, for the reader, the templates and
//! the access by key path alike. [`crate::parts`] fits the curves of the model to a sheet.

pub mod board;
pub mod capacitor;
pub mod common;
pub mod controller;
pub mod datum;
pub mod diode;
pub mod edge_times;
pub mod form;
pub mod inductor;
pub mod linear_regulator;
pub mod mosfet;

pub use board::BoardSheet;
pub use capacitor::CapacitorSheet;
pub use controller::ControllerSheet;
pub use datum::Datum;
pub use diode::DiodeSheet;
pub use inductor::InductorSheet;
pub use linear_regulator::LinearRegulatorSheet;
pub use mosfet::MosfetSheet;
