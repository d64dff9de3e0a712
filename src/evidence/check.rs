//! One comparison with the world outside.

use crate::units::Dimension;

/// What a check is about.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Subject {
    /// Worked examples of synchronous stages.
    Synchronous,
    /// Worked examples of stages with a freewheel diode.
    Freewheel,
    /// Discontinuous conduction.
    Discontinuous,
    /// Linear regulators.
    Linear,
    /// Currents of lossless stages.
    Currents,
    /// Exact periodic steady states with losses.
    SteadyState,
    /// Transient solutions of the switching cell.
    Switching,
    /// Swings and ringing of the switch node.
    Node,
    /// Temperatures that settle together with the loss.
    Heat,
    /// Copper against temperature, and averages.
    Copper,
    /// Core loss.
    Core,
}

/// All subjects in the order of the report.
pub const ALL_SUBJECTS: [Subject; 11] = [
    Subject::Synchronous,
    Subject::Freewheel,
    Subject::Discontinuous,
    Subject::Linear,
    Subject::Currents,
    Subject::SteadyState,
    Subject::Switching,
    Subject::Node,
    Subject::Heat,
    Subject::Copper,
    Subject::Core,
];

impl Subject {
    /// Name in files.
    pub const fn name(self) -> &'static str {
        match self {
            Subject::Synchronous => "synchronous",
            Subject::Freewheel => "freewheel_diode",
            Subject::Discontinuous => "discontinuous",
            Subject::Linear => "linear",
            Subject::Currents => "currents",
            Subject::SteadyState => "steady_state",
            Subject::Switching => "switching",
            Subject::Node => "switch_node",
            Subject::Heat => "heat",
            Subject::Copper => "copper",
            Subject::Core => "core",
        }
    }

    /// Heading.
    pub const fn words(self) -> &'static str {
        match self {
            Subject::Synchronous => "Worked examples: synchronous stages",
            Subject::Freewheel => "Worked examples: freewheel diodes",
            Subject::Discontinuous => "Worked examples: discontinuous conduction",
            Subject::Linear => "Worked examples: linear regulators",
            Subject::Currents => "Currents of lossless stages",
            Subject::SteadyState => "Conduction against the exact periodic steady state",
            Subject::Switching => "Switching edges against a transient solution",
            Subject::Node => "Switch node: partial swings and ringing",
            Subject::Heat => "Heat",
            Subject::Copper => "Copper and averages",
            Subject::Core => "Core loss",
        }
    }
}

/// How far ours may be from the outside value.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Bound {
    /// At most this fraction of the outside value away from it.
    Within(f64),
    /// Not above the outside value, which is a limit.
    AtMost,
    /// Not below the outside value, which is a limit.
    AtLeast,
}

/// One comparison with the world outside.
#[derive(Clone, Debug, PartialEq)]
pub struct Check {
    /// What it is about.
    pub subject: Subject,
    /// What is compared.
    pub what: String,
    /// Who says so.
    pub source: String,
    /// The outside value, in the unit inside the program.
    pub outside: f64,
    /// Ours, computed now; not a number when the model gives none.
    pub ours: f64,
    /// What the values measure.
    pub dimension: Dimension,
    /// How far apart they may be.
    pub bound: Bound,
    /// Why so far.
    pub reason: String,
    /// True for one of many like it, which a summary stands for.
    pub detail: bool,
}

impl Check {
    /// A value printed with a last digit worth `last_digit`: ours rounds to it.
    pub fn printed(outside: f64, last_digit: f64, dimension: Dimension, ours: f64) -> Self {
        let bound = Bound::Within(0.5 * last_digit / outside.abs() * (1.0 + 1e-9));
        Check {
            reason: "half a unit of the last printed digit".into(),
            ..Self::of(outside, ours, dimension, bound)
        }
    }

    /// A value that ours may differ from by a fraction of it.
    pub fn within(outside: f64, tolerance: f64, dimension: Dimension, ours: f64) -> Self {
        Self::of(outside, ours, dimension, Bound::Within(tolerance))
    }

    /// A value with a bound of any kind.
    pub fn of(outside: f64, ours: f64, dimension: Dimension, bound: Bound) -> Self {
        Check {
            subject: Subject::Synchronous,
            what: String::new(),
            source: String::new(),
            outside,
            ours,
            dimension,
            bound,
            reason: String::new(),
            detail: false,
        }
    }

    /// Says what is compared and who gives the outside value.
    #[must_use]
    pub fn about(mut self, subject: Subject, what: impl Into<String>, source: impl Into<String>) -> Self {
        self.subject = subject;
        self.what = what.into();
        self.source = source.into();
        self
    }

    /// Says why the tolerance is what it is.
    #[must_use]
    pub fn because(mut self, reason: impl Into<String>) -> Self {
        self.reason = reason.into();
        self
    }

    /// Marks one of many.
    #[must_use]
    pub fn one_of_many(mut self) -> Self {
        self.detail = true;
        self
    }

    /// Ours over the outside value, less one.
    pub fn difference(&self) -> f64 {
        self.ours / self.outside - 1.0
    }

    /// True when ours is as close as it must be.
    pub fn holds(&self) -> bool {
        match self.bound {
            Bound::Within(tolerance) => self.difference().abs() <= tolerance,
            Bound::AtMost => self.ours <= self.outside,
            Bound::AtLeast => self.ours >= self.outside,
        }
    }
}
