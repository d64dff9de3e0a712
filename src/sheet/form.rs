//! Forms: each kind of part lists its keys once, and every reader of that list is a [`KeyVisitor`].
//!
//! The file reader fills the form in, the template writer prints it, `values` walks it by key path.
//! A key that is not listed in `keys` exists nowhere; there is no second list to keep in step.

use super::datum::Datum;
use crate::units::Dimension;

/// A mapping of a file with a fixed set of keys.
pub trait Form {
    /// Shows every key to the visitor, in the order a template prints them.
    fn keys(&mut self, visitor: &mut dyn KeyVisitor);

    /// Faults that no single key shows: a maximum below its typical value, a threshold above the plateau.
    fn cross_check(&self, _faults: &mut Faults) {}
}

/// What is done with each key of a form.
pub trait KeyVisitor {
    /// A quantity that must be there.
    fn required(&mut self, key: &'static Key, slot: &mut Datum);
    /// A quantity that may be absent.
    fn optional(&mut self, key: &'static Key, slot: &mut Option<Datum>);
    /// A quantity whose `min`, `typ` and `max` stand in this very mapping, beside the other keys.
    fn inline(&mut self, key: &'static Key, slot: &mut Datum);
    /// One quantity or a list of them.
    fn data(&mut self, key: &'static Key, need: Need, slot: &mut Vec<Datum>);
    /// true or false.
    fn flag(&mut self, key: &'static Key, slot: &mut Option<bool>);
    /// Free text.
    fn text(&mut self, key: &'static Key, slot: &mut Option<String>);
    /// A nested mapping that must be there.
    fn form(&mut self, key: &'static Key, slot: &mut dyn Form);
    /// A nested mapping that may be absent.
    fn optional_form(&mut self, key: &'static Key, slot: &mut dyn OptionalForm);
    /// One nested mapping or a list of them.
    fn forms(&mut self, key: &'static Key, need: Need, slot: &mut dyn FormList);
    /// One of several words, some of which stand before a mapping of their own.
    fn choice(&mut self, key: &'static Key, need: Need, slot: &mut dyn Choice);
}

/// Whether a key may be left out.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Need {
    /// An error when absent.
    Required,
    /// May be absent.
    Optional,
}

/// Which numbers are possible at all.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Bound {
    /// Greater than zero.
    Positive,
    /// Zero or greater.
    NonNegative,
    /// Any finite number.
    Any,
}

/// One key of a form: its name, what it measures and what may stand there.
#[derive(Clone, Copy, Debug)]
pub struct Key {
    /// As written in the file.
    pub name: &'static str,
    /// What it measures.
    pub dimension: Dimension,
    /// Which numbers are possible.
    pub bound: Bound,
    /// Numbers outside this range (SI) are possible but hardly meant; they get a warning.
    pub sane: (f64, f64),
    /// Test conditions without which the number says nothing.
    pub conditions: &'static [&'static str],
    /// What is assumed when the key is absent, for the template: "1 Ω assumed when absent".
    pub absent: &'static str,
    /// One line on what it is.
    pub about: &'static str,
    /// An example as it would stand in a file, for the template.
    pub example: &'static str,
    /// True for an optional key that a starter file shows ready for use.
    pub starter: bool,
}

impl Key {
    /// A quantity that must be positive.
    pub const fn new(name: &'static str, dimension: Dimension, about: &'static str) -> Self {
        Key {
            name,
            dimension,
            bound: Bound::Positive,
            sane: (f64::NEG_INFINITY, f64::INFINITY),
            conditions: &[],
            absent: "",
            about,
            example: "",
            starter: false,
        }
    }

    /// The range of numbers a practitioner would believe, in SI units.
    pub const fn sane(mut self, low: f64, high: f64) -> Self {
        self.sane = (low, high);
        self
    }

    /// Zero may stand here too.
    pub const fn zero(mut self) -> Self {
        self.bound = Bound::NonNegative;
        self
    }

    /// Any sign may stand here.
    pub const fn signed(mut self) -> Self {
        self.bound = Bound::Any;
        self
    }

    /// Test conditions that must be stated.
    pub const fn at(mut self, conditions: &'static [&'static str]) -> Self {
        self.conditions = conditions;
        self
    }

    /// What is assumed when the key is absent.
    pub const fn absent(mut self, assumption: &'static str) -> Self {
        self.absent = assumption;
        self
    }

    /// Shows an optional key in a starter file ready for use.
    pub const fn starter(mut self) -> Self {
        self.starter = true;
        self
    }

    /// An example value for the template.
    pub const fn example(mut self, example: &'static str) -> Self {
        self.example = example;
        self
    }
}

/// A nested mapping that may be absent.
pub trait OptionalForm {
    /// The form inside, created empty when it was absent.
    fn open(&mut self) -> &mut dyn Form;
    /// The form inside, if there is one.
    fn get(&mut self) -> Option<&mut dyn Form>;
}

impl<T: Form + Default> OptionalForm for Option<T> {
    fn open(&mut self) -> &mut dyn Form {
        self.get_or_insert_with(T::default)
    }

    fn get(&mut self) -> Option<&mut dyn Form> {
        self.as_mut().map(|form| form as &mut dyn Form)
    }
}

/// A list of nested mappings of one form.
pub trait FormList {
    /// Adds an empty form and returns it.
    fn push(&mut self) -> &mut dyn Form;
    /// Makes room for so many forms more, and no more than that.
    fn reserve(&mut self, count: usize);
    /// Number of forms.
    fn len(&self) -> usize;
    /// True without any.
    fn is_empty(&self) -> bool {
        self.len() == 0
    }
    /// The form at a place.
    fn get(&mut self, index: usize) -> Option<&mut dyn Form>;
}

impl<T: Form + Default> FormList for Vec<T> {
    fn push(&mut self) -> &mut dyn Form {
        self.push(T::default());
        let last = self.len() - 1;
        &mut self[last]
    }

    fn reserve(&mut self, count: usize) {
        self.reserve_exact(count);
    }

    fn len(&self) -> usize {
        Vec::len(self)
    }

    fn get(&mut self, index: usize) -> Option<&mut dyn Form> {
        self.get_mut(index).map(|form| form as &mut dyn Form)
    }
}

/// One of several words; a word may stand before a mapping: `{external: {efficiency: 90 %}}`.
pub trait Choice {
    /// The words, and whether each takes a mapping.
    fn options(&self) -> &'static [(&'static str, bool)];
    /// Takes the option at a place and returns the form of its mapping.
    fn pick(&mut self, option: usize) -> Option<&mut dyn Form>;
    /// The form of the option taken, when it has one.
    fn get(&mut self) -> Option<&mut dyn Form>;
}

/// A fault in what a form says, with its place in the form.
#[derive(Clone, Debug, PartialEq)]
pub struct Fault {
    /// Key path inside the form: `v_gs_plateau`, `core.material[2].density`.
    pub path: String,
    /// What is wrong.
    pub reason: String,
    /// The way out.
    pub hint: String,
    /// True for what is only doubtful.
    pub warning: bool,
}

/// Collects the faults of a form.
#[derive(Debug, Default)]
pub struct Faults(pub Vec<Fault>);

impl Faults {
    /// Adds an error at a key path of the form.
    pub fn error(&mut self, path: impl Into<String>, reason: impl Into<String>, hint: impl Into<String>) {
        self.0.push(Fault { path: path.into(), reason: reason.into(), hint: hint.into(), warning: false });
    }

    /// Adds a warning at a key path of the form.
    pub fn warn(&mut self, path: impl Into<String>, reason: impl Into<String>, hint: impl Into<String>) {
        self.0.push(Fault { path: path.into(), reason: reason.into(), hint: hint.into(), warning: true });
    }
}
