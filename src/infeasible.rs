//! Why a point cannot be built.

use std::fmt;

use crate::ledger::Slot;
use crate::report::number::quantity;
use crate::units::Dimension as D;

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
        let show = |value, dimension| quantity(value, dimension);
        match *self {
            Infeasible::InputTooLow { v_in, v_out } => write!(
                f,
                "no duty cycle makes {} from {} with the drops of this stage",
                show(v_out, D::Voltage),
                show(v_in, D::Voltage)
            ),
            Infeasible::OnTime { on_time, least } => {
                write!(
                    f,
                    "the on-time of {} is below t_on_min, {}",
                    show(on_time, D::Time),
                    show(least, D::Time)
                )
            }
            Infeasible::OffTime { off_time, least } => write!(
                f,
                "the off-time of {} is below {} (t_off_min, or both dead times)",
                show(off_time, D::Time),
                show(least, D::Time)
            ),
            Infeasible::DriveTooLow { v_drive, peak } => write!(
                f,
                "the drive voltage cannot carry this current: {} at the gate, {} peak",
                show(v_drive, D::Voltage),
                show(peak, D::Current)
            ),
            Infeasible::DropOut { headroom, needed } => write!(
                f,
                "drop-out: {} between input and output, {} needed",
                show(headroom, D::Voltage),
                show(needed, D::Voltage)
            ),
            Infeasible::NoStableTemperature { slot, gain } => {
                write!(f, "no stable temperature below {}: {}", show(HOTTEST, D::Temperature), slot.words())?;
                // without feedback the part is simply overloaded; beyond 10 the number says no more
                match gain {
                    gain if gain < 0.01 => write!(f, " is overloaded"),
                    gain if gain < 10.0 => write!(f, " (thermal loop gain {})", show(gain, D::Number)),
                    _ => write!(f, " (thermal loop gain above 10)"),
                }
            }
        }
    }
}

impl std::error::Error for Infeasible {}
