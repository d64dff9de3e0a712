//! The ledger (E60): every watt is booked once, to one slot and one mechanism.
//!
//! A fixed-size table without allocation. Totals and subtotals are folds over its entries, never second formulas.

/// A place of a stage that a part sits in, or the board.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Slot {
    /// Switch between input and switch node.
    HighSide,
    /// Synchronous rectifier.
    LowSide,
    /// Schottky diode across the low side.
    ParallelSchottky,
    /// Rectifier of a diode stage.
    FreewheelDiode,
    /// Inductor.
    Inductor,
    /// Bank at the input.
    InputCapacitors,
    /// Bank at the output.
    OutputCapacitors,
    /// Controller with its drivers.
    Controller,
    /// Copper, sense resistor, snubber.
    Board,
    /// Linear regulator.
    Regulator,
}

/// Number of slots.
pub const SLOTS: usize = 10;

/// All slots in the order of the ledger.
pub const ALL_SLOTS: [Slot; SLOTS] = [
    Slot::HighSide,
    Slot::LowSide,
    Slot::ParallelSchottky,
    Slot::FreewheelDiode,
    Slot::Inductor,
    Slot::InputCapacitors,
    Slot::OutputCapacitors,
    Slot::Controller,
    Slot::Board,
    Slot::Regulator,
];

impl Slot {
    /// Name in files and outputs.
    pub const fn name(self) -> &'static str {
        match self {
            Slot::HighSide => "high_side",
            Slot::LowSide => "low_side",
            Slot::ParallelSchottky => "parallel_schottky",
            Slot::FreewheelDiode => "freewheel_diode",
            Slot::Inductor => "inductor",
            Slot::InputCapacitors => "input_capacitors",
            Slot::OutputCapacitors => "output_capacitors",
            Slot::Controller => "controller",
            Slot::Board => "board",
            Slot::Regulator => "regulator",
        }
    }

    /// Name in prose: "high side".
    pub fn words(self) -> String {
        self.name().replace('_', " ")
    }

    /// The slot of a name.
    pub fn from_name(name: &str) -> Option<Slot> {
        ALL_SLOTS.into_iter().find(|slot| slot.name() == name)
    }

    /// Place in tables indexed by slot.
    pub const fn index(self) -> usize {
        self as usize
    }
}

/// What burns the watts.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Mechanism {
    /// Channel or diode carrying current.
    Conduction,
    /// Voltage and current together during an edge.
    Overlap,
    /// Energy of the switch node's capacitance.
    OutputCharge,
    /// Reverse recovery of a PN diode.
    Recovery,
    /// Body diode (or the Schottky across it) during dead time.
    DeadTime,
    /// Charging and discharging the gates.
    GateDrive,
    /// Reverse leakage of a diode.
    Leakage,
    /// Winding resistance with its DC value.
    Winding,
    /// What the ripple adds in the winding.
    AcWinding,
    /// Core of the inductor.
    Core,
    /// Idle node ringing out in discontinuous mode.
    Ringing,
    /// Series resistance of capacitors.
    Esr,
    /// Controller's own supply.
    Bias,
    /// Board copper.
    Copper,
    /// Sense resistor.
    Sense,
    /// RC snubber.
    Snubber,
    /// Voltage across a linear regulator times load.
    Pass,
    /// Ground current of a linear regulator.
    GroundCurrent,
}

/// All mechanisms in the order of the ledger.
pub const ALL_MECHANISMS: [Mechanism; 18] = [
    Mechanism::Conduction,
    Mechanism::Overlap,
    Mechanism::OutputCharge,
    Mechanism::Recovery,
    Mechanism::DeadTime,
    Mechanism::GateDrive,
    Mechanism::Leakage,
    Mechanism::Winding,
    Mechanism::AcWinding,
    Mechanism::Core,
    Mechanism::Ringing,
    Mechanism::Esr,
    Mechanism::Bias,
    Mechanism::Copper,
    Mechanism::Sense,
    Mechanism::Snubber,
    Mechanism::Pass,
    Mechanism::GroundCurrent,
];

/// Kinds of mechanism, for subtotals.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Family {
    /// Resistances and forward voltages.
    Conduction,
    /// What each edge costs.
    Switching,
    /// Gates and controller supply.
    Drive,
    /// Inductor.
    Magnetics,
    /// Capacitors and snubber.
    Other,
}

/// All families in the order of the tables.
pub const ALL_FAMILIES: [Family; 5] =
    [Family::Conduction, Family::Switching, Family::Drive, Family::Magnetics, Family::Other];

impl Family {
    /// Name in tables.
    pub const fn name(self) -> &'static str {
        match self {
            Family::Conduction => "conduction",
            Family::Switching => "switching",
            Family::Drive => "drive",
            Family::Magnetics => "magnetics",
            Family::Other => "other",
        }
    }
}

impl Mechanism {
    /// Name in files and outputs.
    pub const fn name(self) -> &'static str {
        match self {
            Mechanism::Conduction => "conduction",
            Mechanism::Overlap => "overlap",
            Mechanism::OutputCharge => "output_charge",
            Mechanism::Recovery => "recovery",
            Mechanism::DeadTime => "dead_time",
            Mechanism::GateDrive => "gate_drive",
            Mechanism::Leakage => "leakage",
            Mechanism::Winding => "winding",
            Mechanism::AcWinding => "ac_winding",
            Mechanism::Core => "core",
            Mechanism::Ringing => "ringing",
            Mechanism::Esr => "esr",
            Mechanism::Bias => "bias",
            Mechanism::Copper => "copper",
            Mechanism::Sense => "sense",
            Mechanism::Snubber => "snubber",
            Mechanism::Pass => "pass",
            Mechanism::GroundCurrent => "ground_current",
        }
    }

    /// Name in prose: "output charge", "ESR".
    pub fn words(self) -> String {
        match self {
            Mechanism::Esr => "ESR".into(),
            Mechanism::AcWinding => "AC winding".into(),
            other => other.name().replace('_', " "),
        }
    }

    /// The mechanism of a name.
    pub fn from_name(name: &str) -> Option<Mechanism> {
        ALL_MECHANISMS.into_iter().find(|mechanism| mechanism.name() == name)
    }

    /// The kind of mechanism it counts to.
    pub const fn family(self) -> Family {
        match self {
            Mechanism::Conduction
            | Mechanism::Copper
            | Mechanism::Sense
            | Mechanism::Pass
            | Mechanism::Leakage => Family::Conduction,
            Mechanism::Overlap | Mechanism::OutputCharge | Mechanism::Recovery | Mechanism::DeadTime => {
                Family::Switching
            }
            Mechanism::GateDrive | Mechanism::Bias | Mechanism::GroundCurrent => Family::Drive,
            Mechanism::Winding | Mechanism::AcWinding | Mechanism::Core | Mechanism::Ringing => {
                Family::Magnetics
            }
            Mechanism::Esr | Mechanism::Snubber => Family::Other,
        }
    }
}

/// A valid pair of slot and mechanism: one line of the ledger.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
#[repr(usize)]
#[allow(missing_docs)] // the two halves of each name say it
pub enum Account {
    HighSideConduction,
    HighSideOverlap,
    HighSideOutputCharge,
    HighSideRecovery,
    HighSideDeadTime,
    HighSideGateDrive,
    LowSideConduction,
    LowSideOverlap,
    LowSideOutputCharge,
    LowSideDeadTime,
    LowSideGateDrive,
    ParallelSchottkyDeadTime,
    ParallelSchottkyLeakage,
    FreewheelDiodeConduction,
    FreewheelDiodeLeakage,
    InductorWinding,
    InductorAcWinding,
    InductorCore,
    InductorRinging,
    InputCapacitorsEsr,
    OutputCapacitorsEsr,
    ControllerGateDrive,
    ControllerBias,
    BoardCopper,
    BoardSense,
    BoardSnubber,
    RegulatorPass,
    RegulatorGroundCurrent,
}

/// Number of accounts.
pub const ACCOUNTS: usize = 28;

/// All accounts with their two halves, in the order of the ledger.
pub const ALL_ACCOUNTS: [(Account, Slot, Mechanism); ACCOUNTS] = {
    use Account as A;
    use Mechanism as M;
    use Slot as S;
    [
        (A::HighSideConduction, S::HighSide, M::Conduction),
        (A::HighSideOverlap, S::HighSide, M::Overlap),
        (A::HighSideOutputCharge, S::HighSide, M::OutputCharge),
        (A::HighSideRecovery, S::HighSide, M::Recovery),
        (A::HighSideDeadTime, S::HighSide, M::DeadTime),
        (A::HighSideGateDrive, S::HighSide, M::GateDrive),
        (A::LowSideConduction, S::LowSide, M::Conduction),
        (A::LowSideOverlap, S::LowSide, M::Overlap),
        (A::LowSideOutputCharge, S::LowSide, M::OutputCharge),
        (A::LowSideDeadTime, S::LowSide, M::DeadTime),
        (A::LowSideGateDrive, S::LowSide, M::GateDrive),
        (A::ParallelSchottkyDeadTime, S::ParallelSchottky, M::DeadTime),
        (A::ParallelSchottkyLeakage, S::ParallelSchottky, M::Leakage),
        (A::FreewheelDiodeConduction, S::FreewheelDiode, M::Conduction),
        (A::FreewheelDiodeLeakage, S::FreewheelDiode, M::Leakage),
        (A::InductorWinding, S::Inductor, M::Winding),
        (A::InductorAcWinding, S::Inductor, M::AcWinding),
        (A::InductorCore, S::Inductor, M::Core),
        (A::InductorRinging, S::Inductor, M::Ringing),
        (A::InputCapacitorsEsr, S::InputCapacitors, M::Esr),
        (A::OutputCapacitorsEsr, S::OutputCapacitors, M::Esr),
        (A::ControllerGateDrive, S::Controller, M::GateDrive),
        (A::ControllerBias, S::Controller, M::Bias),
        (A::BoardCopper, S::Board, M::Copper),
        (A::BoardSense, S::Board, M::Sense),
        (A::BoardSnubber, S::Board, M::Snubber),
        (A::RegulatorPass, S::Regulator, M::Pass),
        (A::RegulatorGroundCurrent, S::Regulator, M::GroundCurrent),
    ]
};

impl Account {
    /// Where the watts are burnt.
    pub const fn slot(self) -> Slot {
        ALL_ACCOUNTS[self as usize].1
    }

    /// What burns them.
    pub const fn mechanism(self) -> Mechanism {
        ALL_ACCOUNTS[self as usize].2
    }

    /// The account of a slot and a mechanism, if the pair is valid.
    pub fn of(slot: Slot, mechanism: Mechanism) -> Option<Account> {
        ALL_ACCOUNTS.iter().find(|row| row.1 == slot && row.2 == mechanism).map(|row| row.0)
    }
}

/// Watts of every account.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Ledger {
    watts: [f64; ACCOUNTS],
}

impl Default for Ledger {
    fn default() -> Self {
        Ledger { watts: [0.0; ACCOUNTS] }
    }
}

impl Ledger {
    /// Books watts to an account that is still empty.
    #[inline]
    pub fn book(&mut self, account: Account, watts: f64) {
        self.watts[account as usize] = watts;
    }

    /// Watts of one account.
    #[inline]
    pub fn get(&self, account: Account) -> f64 {
        self.watts[account as usize]
    }

    /// All accounts with their watts, in the order of the ledger.
    pub fn entries(&self) -> impl Iterator<Item = (Account, f64)> + '_ {
        ALL_ACCOUNTS.iter().map(|row| (row.0, self.watts[row.0 as usize]))
    }

    /// Loss of the stage: the sum of all entries, W.
    #[inline]
    pub fn loss(&self) -> f64 {
        self.watts.iter().sum()
    }

    /// Loss in one slot, W.
    pub fn slot(&self, slot: Slot) -> f64 {
        self.entries().filter(|(account, _)| account.slot() == slot).map(|(_, watts)| watts).sum()
    }

    /// Loss by one mechanism over all slots, W.
    pub fn mechanism(&self, mechanism: Mechanism) -> f64 {
        self.entries().filter(|(account, _)| account.mechanism() == mechanism).map(|(_, watts)| watts).sum()
    }

    /// Loss by one kind of mechanism, W.
    pub fn family(&self, family: Family) -> f64 {
        self.entries()
            .filter(|(account, _)| account.mechanism().family() == family)
            .map(|(_, watts)| watts)
            .sum()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn accounts_stand_in_their_own_order() {
        for (index, (account, slot, mechanism)) in ALL_ACCOUNTS.iter().enumerate() {
            assert_eq!(*account as usize, index);
            assert_eq!(Account::of(*slot, *mechanism), Some(*account));
        }
    }

    #[test]
    fn subtotals_add_up_to_the_loss() {
        let mut ledger = Ledger::default();
        for (index, (account, ..)) in ALL_ACCOUNTS.iter().enumerate() {
            ledger.book(*account, 0.25 * (index + 1) as f64);
        }
        let loss = ledger.loss();
        assert_eq!(loss, 0.25 * (ACCOUNTS * (ACCOUNTS + 1) / 2) as f64);
        assert_eq!(ALL_SLOTS.iter().map(|slot| ledger.slot(*slot)).sum::<f64>(), loss);
        assert_eq!(ALL_MECHANISMS.iter().map(|mechanism| ledger.mechanism(*mechanism)).sum::<f64>(), loss);
        assert_eq!(ALL_FAMILIES.iter().map(|family| ledger.family(*family)).sum::<f64>(), loss);
    }
}
