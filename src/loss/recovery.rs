//! Reverse recovery of a PN diode that still carries current when the high side turns on (E18).

use crate::near::at_least;
use crate::parts::mosfet::RecoveryLaw;

/// Recovery loss and what it is made of.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Recovery {
    /// Q_rr at the current that is switched off, C.
    pub charge: f64,
    /// V_i Q_rr f, W, burnt in the high side.
    pub watts: f64,
}

/// V_i Q_rr(I_v) f with Q_rr(I_v) = n Q_rr,ref (I_v/(n I_ref))^a, less the output charge that the test counted (E18).
///
/// Source: V_i Q_rr f as in the ADP3162 data sheet, eq. 23, and printed with IRF7832; exponent a = 0.5 from memory. In continuous mode with I_v > 0 only.
#[inline(always)]
pub fn recovery(law: &RecoveryLaw, v_in: f64, valley: f64, frequency: f64) -> Recovery {
    if valley <= 0.0 {
        return Recovery::default();
    }
    let ratio = valley * law.per_current;
    let growth = if law.exponent == 0.5 { ratio.sqrt() } else { ratio.powf(law.exponent) };
    let charge = at_least(0.0, law.charge * growth - law.counted_output_charge);
    Recovery { charge, watts: v_in * charge * frequency }
}
