//! Booking: every contribution of a switched stage to its account (E60).

use crate::ledger::{Account, Ledger};
use crate::model::{Heated, HeatedRectifier, Unheated};

/// Books every contribution of a switched stage to its account.
#[inline(always)]
pub fn ledger(heated: &Heated, unheated: &Unheated) -> Ledger {
    use Account as A;
    let mut ledger = Ledger::default();
    ledger.book(A::HighSideConduction, heated.high_conduction.watts);
    ledger.book(A::HighSideOverlap, heated.overlap.watts);
    ledger.book(A::HighSideOutputCharge, heated.output_charge.watts);
    ledger.book(A::HighSideRecovery, heated.recovery.map_or(0.0, |recovery| recovery.watts));
    ledger.book(A::HighSideGateDrive, heated.high_gate.watts);
    match &heated.rectifier {
        HeatedRectifier::Synchronous {
            conduction,
            overlap,
            output_charge,
            dead_time,
            gate,
            schottky,
            high_dead_time,
        } => {
            ledger.book(A::HighSideDeadTime, high_dead_time.watts);
            ledger.book(A::LowSideConduction, conduction.watts);
            ledger.book(A::LowSideOverlap, overlap.watts);
            ledger.book(A::LowSideOutputCharge, output_charge.watts);
            ledger.book(A::LowSideGateDrive, gate.watts);
            match schottky {
                Some(leakage) => {
                    ledger.book(A::ParallelSchottkyDeadTime, dead_time.watts);
                    ledger.book(A::ParallelSchottkyLeakage, leakage.map_or(0.0, |leakage| leakage.watts));
                }
                None => ledger.book(A::LowSideDeadTime, dead_time.watts),
            }
        }
        HeatedRectifier::Diode { conduction, leakage } => {
            ledger.book(A::FreewheelDiodeConduction, conduction.watts);
            ledger.book(A::FreewheelDiodeLeakage, leakage.map_or(0.0, |leakage| leakage.watts));
        }
    }
    ledger.book(A::InductorWinding, heated.winding.watts);
    ledger.book(A::InductorAcWinding, heated.ac_winding.map_or(0.0, |ac| ac.watts));
    ledger.book(A::InductorCore, heated.core.map_or(0.0, |core| core.watts));
    ledger.book(A::InductorRinging, heated.ringing.watts);
    ledger.book(A::ControllerGateDrive, heated.drive.watts);
    ledger.book(A::ControllerBias, heated.bias.watts);
    ledger.book(A::InputCapacitorsEsr, unheated.input_esr.watts);
    ledger.book(A::OutputCapacitorsEsr, unheated.output_esr.watts);
    ledger.book(A::BoardCopper, unheated.copper.watts);
    ledger.book(A::BoardSense, unheated.sense.watts);
    ledger.book(A::BoardSnubber, unheated.snubber.watts);
    ledger
}
