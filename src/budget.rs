//! A budget as it is meant: the rail, its candidate stages, the grid and what is asked of them.

use std::path::PathBuf;
use std::sync::Arc;

use crate::bench::Accuracy;
use crate::grid::{Axis, Grid, OperatingPoint, PartialPoint};
use crate::ledger::Slot;
use crate::sheet::{
    BoardSheet, CapacitorSheet, ControllerSheet, DiodeSheet, InductorSheet, LinearRegulatorSheet, MosfetSheet,
};
use crate::stage::StageSheet;
use crate::worst::ValueSet;

/// A budget file with the parts it names.
#[derive(Clone, Debug)]
pub struct Budget {
    /// Title of the rail.
    pub name: String,
    /// Free text.
    pub about: Option<String>,
    /// Where the requirements come from.
    pub source: Option<String>,
    /// Currency of all prices.
    pub currency: Option<String>,
    /// V_OUT, V.
    pub output_voltage: f64,
    /// Full load, A.
    pub rated_load: Option<f64>,
    /// Operating grid.
    pub grid: Grid,
    /// Where single numbers are quoted; its frequency is 0 when no stage takes it from here.
    pub headline: OperatingPoint,
    /// What the rail must do.
    pub requirements: Vec<Requirement>,
    /// Candidates, in the order written.
    pub stages: Vec<StageSheet>,
    /// Copper, sense, snubber.
    pub board: BoardSheet,
    /// Heat from slot to slot.
    pub coupling: Vec<Coupling>,
    /// Time shares of operating points.
    pub profile: Vec<ProfilePoint>,
    /// Energy of the battery, J.
    pub battery: Option<f64>,
    /// Instruments of the bench.
    pub bench: Option<BenchAccuracy>,
    /// What may stand in each slot.
    pub shortlist: Option<Shortlist>,
    /// Margins that findings are measured against.
    pub derating: Derating,
    /// Which set of data-sheet values every question about it takes; the verbs set it, the file does not.
    pub values: ValueSet,
    /// Every file that was read, with its SHA-256.
    pub inputs: Vec<InputFile>,
    /// All parts of the folders named.
    pub library: Arc<Library>,
}

impl Budget {
    /// Eight hexadecimal digits that change with any byte of any input file.
    pub fn fingerprint(&self) -> String {
        let joined: Vec<&str> = self.inputs.iter().map(|input| input.sha256.as_str()).collect();
        crate::files::sha256_hex(joined.join("\n").as_bytes()).chars().take(8).collect()
    }
}

/// What a rail must do, at the coordinates named; at every grid value of the others.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Requirement {
    /// What is required.
    pub limit: Limit,
    /// Where.
    pub at: PartialPoint,
}

/// A limit that a requirement sets.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Limit {
    /// Smallest efficiency, a fraction.
    EfficiencyMin(f64),
    /// Smallest distance of any junction to its rating, K.
    JunctionMarginMin(f64),
    /// Largest loss, W.
    LossMax(f64),
}

/// Heat that one slot receives from another.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Coupling {
    /// The slot that gets warmer.
    pub heated: Slot,
    /// The slot whose loss warms it.
    pub heating: Slot,
    /// K/W
    pub resistance: f64,
}

/// A share of time at an operating point.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ProfilePoint {
    /// Fraction of time.
    pub share: f64,
    /// Where; coordinates not named come from the headline.
    pub at: PartialPoint,
}

/// Stated accuracies of the bench's instruments.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct BenchAccuracy {
    /// Input voltage.
    pub input_voltage: Accuracy,
    /// Input current.
    pub input_current: Accuracy,
    /// Output voltage.
    pub output_voltage: Accuracy,
    /// Output current.
    pub output_current: Accuracy,
}

/// What may stand in each slot of a stage; a slot not named keeps its part.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Shortlist {
    /// Name of the stage.
    pub stage: String,
    /// Candidates of a slot: names of parts in the library, in the order written (or of the library).
    pub candidates: Vec<(Slot, Vec<Arc<str>>)>,
    /// Candidate frequencies.
    pub switching_frequency: Option<Axis>,
}

/// Margins to ratings that are good practice on this project.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Derating {
    /// Share of a voltage rating that may be used.
    pub voltage: f64,
    /// Share of a gate voltage rating that may be used.
    pub gate_voltage: f64,
    /// Share of the saturation current that the peak may use.
    pub saturation: f64,
    /// Share of a ripple current rating that may be used.
    pub ripple_current: f64,
    /// Distance to a junction rating, K.
    pub junction_margin: f64,
}

impl Default for Derating {
    fn default() -> Self {
        Derating {
            voltage: 0.8,
            gate_voltage: 0.8,
            saturation: 0.8,
            ripple_current: 0.8,
            junction_margin: 25.0,
        }
    }
}

/// A file that was read.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct InputFile {
    /// As named by the user or the budget.
    pub path: PathBuf,
    /// SHA-256 of its bytes, lower case hexadecimal.
    pub sha256: String,
}

/// All parts of the folders that were read, by kind, in the order of their files.
#[derive(Clone, Debug, Default)]
pub struct Library {
    /// MOSFETs.
    pub mosfets: PartsOf<MosfetSheet>,
    /// Diodes.
    pub diodes: PartsOf<DiodeSheet>,
    /// Inductors.
    pub inductors: PartsOf<InductorSheet>,
    /// Capacitors.
    pub capacitors: PartsOf<CapacitorSheet>,
    /// Controllers.
    pub controllers: PartsOf<ControllerSheet>,
    /// Linear regulators.
    pub linear_regulators: PartsOf<LinearRegulatorSheet>,
}

/// Parts of one kind, found by name, listed in the order read.
#[derive(Clone, Debug)]
pub struct PartsOf<T> {
    list: Vec<(Arc<str>, Arc<T>)>,
    by_name: std::collections::HashMap<Arc<str>, usize>,
}

impl<T> Default for PartsOf<T> {
    fn default() -> Self {
        PartsOf { list: Vec::new(), by_name: std::collections::HashMap::new() }
    }
}

impl<T> PartsOf<T> {
    /// Adds a part; false, and nothing changes, when the name is taken.
    pub fn add(&mut self, name: Arc<str>, sheet: Arc<T>) -> bool {
        if self.by_name.contains_key(&name) {
            return false;
        }
        self.by_name.insert(name.clone(), self.list.len());
        self.list.push((name, sheet));
        true
    }

    /// The part of a name, with the name as the library keeps it.
    pub fn get(&self, name: &str) -> Option<(Arc<str>, Arc<T>)> {
        self.by_name.get(name).and_then(|index| self.list.get(*index)).cloned()
    }

    /// All parts in the order read.
    pub fn iter(&self) -> impl Iterator<Item = (&Arc<str>, &Arc<T>)> {
        self.list.iter().map(|(name, sheet)| (name, sheet))
    }

    /// Number of parts.
    pub fn len(&self) -> usize {
        self.list.len()
    }

    /// True without parts.
    pub fn is_empty(&self) -> bool {
        self.list.is_empty()
    }
}
