//! Evidence: what the model is checked against from outside, computed now.
//!
//! Every check names its source, the outside value, ours, and how far apart they may be and why. One set of data serves
//! `lossbook evidence`, the README and the tests. The outside values come from data sheets with worked examples, from
//! standards, from measurements, and from numerical solutions that share no code with the model.

mod check;
pub mod converters;
mod copper_and_averages;
pub mod core;
mod currents;
mod discontinuous;
mod freewheel;
mod heat;
mod linear;
mod question;
pub mod recorded;
pub mod rig;
mod statistics;
pub mod switching;
mod synchronous;

pub use check::{ALL_SUBJECTS, Bound, Check, Subject};
pub use question::{Evidence, Request, answer};

/// All checks, by subject, computed now.
pub fn checks() -> Vec<Check> {
    let mut list = Vec::new();
    synchronous::checks(&mut list);
    freewheel::checks(&mut list);
    discontinuous::checks(&mut list);
    linear::checks(&mut list);
    currents::checks(&mut list);
    converters::checks(&mut list);
    switching::checks(&mut list);
    heat::checks(&mut list);
    copper_and_averages::checks(&mut list);
    core::checks(&mut list);
    list
}
