//! Worked examples of data sheets: discontinuous conduction.

use super::check::{Check, Subject};
use super::rig::{Rig, coil};
use crate::stage::LightLoad;
use crate::units::Dimension as D;

pub(super) fn checks(list: &mut Vec<Check>) {
    // the load grows with the square of the peak: ours at the stated peak follows from the peak at the stated load
    let mut rig = Rig::ideal(15.0, 5.0, 0.338, 500e3);
    rig.inductor = coil(2e-6, 0.0);
    rig.light_load = LightLoad::DiodeEmulation;
    let ours = rig.point.load * (1.5 / rig.wave(|w| w.peak)).powi(2);
    list.push(Check::printed(0.338, 1e-3, D::Current, ours * (1.0 + 1e-9)).about(
        Subject::Discontinuous,
        "load at a peak of 1.5 A, 2 µH, 500 kHz, 15 V to 5 V",
        "LT1376 data sheet (Linear Technology), p. 11",
    ));

    let mut rig = Rig::ideal(8.0, 5.0, 3.0, 200e3);
    rig.inductor = coil(20e-6, 0.0);
    list.push(Check::printed(0.234, 1e-3, D::Current, 0.5 * rig.wave(|w| w.ripple())).about(
        Subject::Discontinuous,
        "border load: half the ripple, 20 µH, 200 kHz, 8 V to 5 V",
        "LT1976 data sheet (Linear Technology), p. 15",
    ));
}
