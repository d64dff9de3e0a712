//! The linear stage (E43): its two contributions and when it drops out.

use crate::grid::OperatingPoint;
use crate::infeasible::Infeasible;
use crate::ledger::{Account, Ledger};
use crate::loss::ground_current::{self, GroundCurrent};
use crate::loss::pass::{self, Pass};
use crate::parts::linear_regulator::LinearRegulator;

/// Contributions of a linear stage.
#[derive(Clone, Copy, Debug)]
#[allow(missing_docs)] // named as the accounts of the ledger
pub struct LinearContributions {
    pub pass: Pass,
    pub ground_current: GroundCurrent,
}

/// Contributions of a linear regulator (E43), or why it cannot run here.
pub fn contributions(
    regulator: &LinearRegulator,
    output_voltage: f64,
    point: &OperatingPoint,
) -> Result<LinearContributions, Infeasible> {
    let (v_in, load) = (point.input_voltage, point.load);
    let (headroom, needed) = (v_in - output_voltage, regulator.dropout(load));
    if headroom < needed || headroom < 0.0 {
        return Err(Infeasible::DropOut { headroom, needed });
    }
    Ok(LinearContributions {
        pass: pass::pass(v_in, output_voltage, load),
        ground_current: ground_current::ground_current(v_in, regulator.ground_current(load)),
    })
}

impl LinearContributions {
    /// Books both contributions.
    pub fn ledger(&self) -> Ledger {
        let mut ledger = Ledger::default();
        ledger.book(Account::RegulatorPass, self.pass.watts);
        ledger.book(Account::RegulatorGroundCurrent, self.ground_current.watts);
        ledger
    }
}
