//! Lines of a derivation: symbols that are given, and steps whose inputs are read off their own equation.

use std::collections::BTreeMap;

use super::laws::Law;
use super::origin::Origins;
use super::tokens::{self, Token};
use crate::ledger::Account;
use crate::report::number;
use crate::units::Dimension;

/// What a number of a derivation measures: a dimension of the files, or a product that no file needs.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Measure {
    /// A dimension; fractions are plain numbers here, so that equations hold as printed.
    Of(Dimension),
    /// A unit that only derivations need: `A²`, `V·s`, `S`.
    Unit(&'static str),
}

/// A plain number.
pub const PURE: Measure = Measure::Of(Dimension::Number);
/// Squared currents.
pub const SQUARE_AMPERES: Measure = Measure::Unit("A²");

impl From<Dimension> for Measure {
    fn from(dimension: Dimension) -> Self {
        match dimension {
            Dimension::Ratio => PURE,
            other => Measure::Of(other),
        }
    }
}

impl Measure {
    /// Unit of the full-precision value.
    pub fn unit(self) -> &'static str {
        match self {
            Measure::Of(dimension) => dimension.unit(),
            Measure::Unit(unit) => unit,
        }
    }

    /// The value with its unit and enough digits to follow the calculation.
    pub fn show(self, value: f64) -> String {
        match self {
            Measure::Of(dimension) => number::worked(value, dimension),
            Measure::Unit(unit) => number::worked_plain(value, unit),
        }
    }
}

/// What a line belongs to, in reading order.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Chapter {
    /// Resistances, duty, ripple, peak, valley.
    Waveform,
    /// Charges of the node, edges: what several entries share.
    Edges,
    /// Entries of the ledger.
    Entry,
    /// Temperatures.
    Heat,
    /// The sum and the balance.
    Balance,
}

impl Chapter {
    /// Name in outputs.
    pub const fn name(self) -> &'static str {
        match self {
            Chapter::Waveform => "waveform",
            Chapter::Edges => "edges",
            Chapter::Entry => "entry",
            Chapter::Heat => "heat",
            Chapter::Balance => "balance",
        }
    }
}

/// A number that an equation needs.
#[derive(Clone, Debug, PartialEq)]
pub struct Input {
    /// As in the equation.
    pub symbol: String,
    /// SI value, full precision.
    pub value: f64,
    /// What it measures.
    pub measure: Measure,
    /// Where it comes from.
    pub origin: String,
    /// True when a line above derives it.
    pub derived: bool,
}

/// One equation with its inputs and its result.
#[derive(Clone, Debug)]
pub struct Line {
    /// What it belongs to.
    pub chapter: Chapter,
    /// The entry that it books or prepares, when there is one.
    pub account: Option<Account>,
    /// What is derived: "duty".
    pub name: String,
    /// Its symbol.
    pub symbol: String,
    /// Right-hand side in symbols.
    pub equation: String,
    /// Every symbol of the equation, in its order.
    pub inputs: Vec<Input>,
    /// Result as the model has it.
    pub value: f64,
    /// What the result measures.
    pub measure: Measure,
    /// Who says so, and within which limits.
    pub law: &'static Law,
}

impl Line {
    /// The right-hand side with numbers and units in place of the symbols.
    pub fn substituted(&self) -> String {
        let known = |name: &str| self.inputs.iter().find(|input| input.symbol == name);
        let tokens = tokens::split(&self.equation, |name| known(name).is_some());
        let mut text = String::new();
        for (place, token) in tokens.iter().enumerate() {
            let Some(input) = token.symbol().and_then(known) else {
                text.push_str(token.text());
                continue;
            };
            let shown = input.measure.show(input.value);
            let beside = |place: Option<usize>| place.and_then(|place| tokens.get(place)).map(Token::text);
            let raised = beside(Some(place + 1)).is_some_and(|next| next.starts_with('^'));
            let power = beside(place.checked_sub(1)).is_some_and(|before| before.ends_with('^'));
            let bare = input.value >= 0.0 && !shown.contains(' ');
            if input.value < 0.0 || ((raised || power) && !bare) {
                text.push_str(&format!("({shown})"));
            } else {
                text.push_str(&shown);
            }
        }
        text
    }
}

/// A derivation as it is written.
#[derive(Debug)]
pub struct Book<'a> {
    /// Lines so far.
    pub lines: Vec<Line>,
    /// What was found on the way, in words.
    pub remarks: Vec<(Chapter, String)>,
    /// Where data-sheet values come from.
    pub origins: &'a Origins,
    known: BTreeMap<String, Input>,
    chapter: Chapter,
    account: Option<Account>,
    law: &'static Law,
}

impl<'a> Book<'a> {
    /// An empty book.
    pub fn new(origins: &'a Origins) -> Self {
        Book {
            lines: Vec::new(),
            remarks: Vec::new(),
            origins,
            known: BTreeMap::new(),
            chapter: Chapter::Waveform,
            account: None,
            law: &super::laws::GIVEN,
        }
    }

    /// Opens a chapter.
    pub fn open(&mut self, chapter: Chapter) {
        self.chapter = chapter;
        self.account = None;
    }

    /// Opens an entry of the ledger.
    pub fn entry(&mut self, account: Account) {
        self.chapter = Chapter::Entry;
        self.account = Some(account);
    }

    /// The law of the steps that follow.
    pub fn law(&mut self, law: &'static Law) -> &mut Self {
        self.law = law;
        self
    }

    /// Says something in words.
    pub fn remark(&mut self, words: impl Into<String>) {
        self.remarks.push((self.chapter, words.into()));
    }

    /// A number that is not derived here.
    pub fn given(
        &mut self,
        symbol: &str,
        value: f64,
        measure: impl Into<Measure>,
        origin: impl Into<String>,
    ) {
        let (measure, origin) = (measure.into(), origin.into());
        let input = Input { symbol: symbol.into(), value, measure, origin, derived: false };
        self.known.entry(symbol.to_owned()).or_insert(input);
    }

    /// A data-sheet value by its key path, or what holds in its place.
    pub fn datum(&mut self, symbol: &str, path: &str, absent: (f64, Dimension, &str)) {
        match self.origins.find(path) {
            Some(found) => {
                let (value, dimension) = (found.datum.value, found.dimension);
                let origin = self.origins.words(found);
                self.given(symbol, value, dimension, origin);
            }
            None => self.given(symbol, absent.0, absent.1, format!("{path}: {}", absent.2)),
        }
    }

    /// A test condition of a data-sheet value.
    pub fn condition(&mut self, symbol: &str, path: &str, key: &str, absent: f64) {
        let found = self.origins.find(path).and_then(|value| {
            value
                .datum
                .conditions
                .iter()
                .find(|condition| condition.key == key)
                .map(|c| (c.value, c.dimension))
        });
        let (value, dimension) = found.unwrap_or((absent, Dimension::Number));
        self.given(symbol, value, dimension, format!("test condition {key} of {path}"));
    }

    /// A step "symbol: name" with its equation and the result that the model has.
    pub fn step(&mut self, label: &str, equation: &str, value: f64, measure: impl Into<Measure>) {
        let (symbol, name) = label.split_once(": ").unwrap_or((label, label));
        let measure = measure.into();
        let mut inputs: Vec<Input> = Vec::new();
        for token in tokens::split(equation, |name| self.known.contains_key(name)) {
            let Some(input) = token.symbol().and_then(|name| self.known.get(name)) else { continue };
            if !inputs.iter().any(|known| known.symbol == input.symbol) {
                inputs.push(input.clone());
            }
        }
        self.lines.push(Line {
            chapter: self.chapter,
            account: self.account,
            name: name.into(),
            symbol: symbol.into(),
            equation: equation.into(),
            inputs,
            value,
            measure,
            law: self.law,
        });
        let origin = format!("derived above: {name}");
        let input = Input { symbol: symbol.into(), value, measure, origin, derived: true };
        self.known.insert(symbol.to_owned(), input);
    }
}

/// The lines that some accounts need, in their order.
pub fn narrowed(
    lines: Vec<Line>,
    mut remarks: Vec<(Chapter, String)>,
    wanted: impl Fn(Account) -> bool,
) -> (Vec<Line>, Vec<(Chapter, String)>) {
    let mut needed: Vec<String> = Vec::new();
    let mut kept: Vec<Line> = Vec::new();
    for line in lines.into_iter().rev() {
        if line.account.is_some_and(&wanted) || needed.contains(&line.symbol) {
            needed.extend(line.inputs.iter().map(|input| input.symbol.clone()));
            kept.push(line);
        }
    }
    kept.reverse();
    remarks.retain(|(chapter, _)| *chapter == Chapter::Waveform);
    (kept, remarks)
}
