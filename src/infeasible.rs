//! Why a point cannot be built.

use std::fmt;

use crate::ledger::Slot;

/// Why a stage cannot run at a point; the point keeps its place in the grid and carries this.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Infeasible {
    /// No duty makes the output voltage (E2, E8).
    InputTooLow {
        /// V_IN, V.
        v_in: f64,
        /// V_OUT at the stage, V.
        v_out: f64,
    },
    /// The on-time is shorter than the controller can make (E8).
    OnTime {
        /// D T, s.
        on_time: f64,
        /// Shortest on-time, s.
        least: f64,
    },
    /// The off-time is shorter than the controller or the dead times allow (E8).
    OffTime {
        /// (1 - D) T, s.
        off_time: f64,
        /// Shortest off-time, s.
        least: f64,
    },
    /// The plateau at the peak current is too close to the drive voltage (E13).
    DriveTooLow {
        /// Gate voltage of the high side, V.
        v_drive: f64,
        /// I_p, A.
        peak: f64,
    },
    /// A linear regulator drops out (E43).
    DropOut {
        /// V_IN - V_OUT, V.
        headroom: f64,
        /// Drop-out voltage at the load, V.
        needed: f64,
    },
    /// Loss and temperature feed one another without end (E51).
    NoStableTemperature {
        /// The hottest part.
        slot: Slot,
        /// Thermal loop gain where the search ended.
        gain: f64,
    },
}

/// Temperature above which nothing is believed to be stable, °C (E51).
pub const HOTTEST: f64 = 500.0;

impl fmt::Display for Infeasible {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match *self {
            Infeasible::InputTooLow { v_in, v_out } => {
                write!(f, "no duty cycle makes {v_out:.4} V from {v_in:.4} V with the drops of this stage")
            }
            Infeasible::OnTime { on_time, least } => {
                write!(f, "the on-time of {:.1} ns is below t_on_min, {:.1} ns", on_time * 1e9, least * 1e9)
            }
            Infeasible::OffTime { off_time, least } => write!(
                f,
                "the off-time of {:.1} ns is below {:.1} ns (t_off_min, or both dead times)",
                off_time * 1e9,
                least * 1e9
            ),
            Infeasible::DriveTooLow { v_drive, peak } => {
                write!(
                    f,
                    "the drive voltage cannot carry this current: {v_drive:.3} V at the gate, {peak:.3} A peak"
                )
            }
            Infeasible::DropOut { headroom, needed } => {
                write!(f, "drop-out: {headroom:.3} V between input and output, {needed:.3} V needed")
            }
            Infeasible::NoStableTemperature { slot, gain } => write!(
                f,
                "no stable temperature below {HOTTEST:.0} °C: {} (thermal loop gain {gain:.2})",
                slot.words()
            ),
        }
    }
}

impl std::error::Error for Infeasible {}
