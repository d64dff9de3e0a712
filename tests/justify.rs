//! Every printed equation, evaluated from its printed inputs with a general expression crate, gives the printed result.

use std::path::PathBuf;

use evalexpr::{ContextWithMutableVariables, HashMapContext, Value};
use lossbook::answer::Answer;
use lossbook::budget::Budget;
use lossbook::candidate::Candidate;
use lossbook::grid::{AxisName, PartialPoint};
use lossbook::justify::{Request, answer};
use lossbook::{files, input};

type Numbers = HashMapContext;

fn budgets() -> Vec<Budget> {
    let root = PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("budgets");
    let paths = files::list_yaml(&root).expect("the shipped budgets");
    paths.iter().map(|path| input::load_budget(path).expect("a shipped budget loads").0).collect()
}

/// The equation in the words of the expression crate; symbols become variables in the order of the inputs.
fn translate(equation: &str, symbols: &[&str]) -> String {
    let mut longest: Vec<usize> = (0..symbols.len()).collect();
    longest.sort_by_key(|at| std::cmp::Reverse(symbols[*at].len()));
    let mut out = String::new();
    let mut rest = equation;
    let word = |c: char| c.is_alphanumeric() || c == '_';
    while let Some(c) = rest.chars().next() {
        let fits =
            |at: &&usize| rest.strip_prefix(symbols[**at]).is_some_and(|after| !after.starts_with(word));
        let length = if c.is_alphabetic() && longest.iter().find(fits).is_some() {
            let at = *longest.iter().find(fits).expect("found");
            out.push_str(&format!("x{at}"));
            symbols[at].len()
        } else if c.is_ascii_digit() {
            let end = rest.find(|c: char| !c.is_ascii_digit() && c != '.').unwrap_or(rest.len());
            let number = &rest[..end];
            out.push_str(number);
            // whole numbers would be divided without a remainder
            if !number.contains('.') {
                out.push_str(".0");
            }
            end
        } else if c.is_alphabetic() {
            let end = rest.find(|c: char| !word(c)).unwrap_or(rest.len());
            out.push_str(match &rest[..end] {
                "ln" => "math::ln",
                "π" => "3.141592653589793",
                "min" => "min",
                "max" => "max",
                other => panic!("`{other}` in `{equation}` is no input"),
            });
            end
        } else {
            match c {
                '·' => out.push('*'),
                '√' => out.push_str("math::sqrt"),
                other => out.push(other),
            }
            c.len_utf8()
        };
        rest = &rest[length..];
    }
    out
}

/// Evaluates every line of one derivation; returns how many there were.
fn check(derivation: &serde_json::Value, place: &str) -> usize {
    let lines = derivation["lines"].as_array().expect("lines");
    for line in lines {
        let equation = line["equation"].as_str().expect("an equation");
        let inputs = line["inputs"].as_array().expect("inputs");
        let symbols: Vec<&str> =
            inputs.iter().map(|input| input["symbol"].as_str().expect("a symbol")).collect();
        let mut numbers = Numbers::new();
        // magnitude of what is added up: differences of large numbers keep no more digits than their terms
        for (at, input) in inputs.iter().enumerate() {
            let value = input["value"].as_f64().expect("a number");
            numbers.set_value(format!("x{at}"), Value::Float(value)).expect("set");
        }
        let words = translate(equation, &symbols);
        let found = evalexpr::eval_with_context(&words, &numbers)
            .unwrap_or_else(|error| panic!("{place}: {equation}: {error}"))
            .as_number()
            .unwrap_or_else(|error| panic!("{place}: {equation}: {error}"));
        let printed = line["value"].as_f64().expect("a result");
        // temperatures settle to 1e-6 K; energies are differences of terms a hundred times as large
        let tolerance = if line["unit"] == "°C" { 2e-6 } else { 1e-9 * printed.abs() + 1e-24 };
        assert!(
            (found - printed).abs() <= tolerance,
            "{place}, {}: {} = {equation} gives {found}, printed {printed}",
            line["name"],
            line["symbol"]
        );
        for input in inputs {
            let origin = input["origin"].as_str().expect("an origin");
            assert!(!origin.is_empty(), "{place}: {} has no origin", input["symbol"]);
        }
    }
    lines.len()
}

fn json(budget: &Budget, request: &Request) -> serde_json::Value {
    let mut out = Vec::new();
    answer(budget, request).json(&mut out).expect("written");
    serde_json::from_slice(&out).expect("JSON")
}

/// The headline, the lightest and the heaviest loads and the ends of the input voltage: several modes of every stage.
fn places(candidate: &Candidate<'_>) -> Vec<PartialPoint> {
    let mut places = vec![PartialPoint::default()];
    let loads: Vec<f64> = candidate.grid.axis(AxisName::Load).expect("loads").values().collect();
    let volts: Vec<f64> = candidate.grid.axis(AxisName::InputVoltage).expect("voltages").values().collect();
    for load in [0.0, loads[0], loads[loads.len() / 3], loads[loads.len() / 2], loads[loads.len() - 1]] {
        for v_in in [volts[0], volts[volts.len() - 1]] {
            places.push(PartialPoint {
                load: Some(load),
                input_voltage: Some(v_in),
                ..PartialPoint::default()
            });
        }
    }
    places
}

#[test]
fn every_printed_equation_gives_its_printed_result() {
    let (mut lines, mut modes) = (0, std::collections::BTreeSet::new());
    let worst = |mut budget: Budget| {
        budget.values = lossbook::worst::ValueSet::Worst;
        budget
    };
    for budget in budgets().into_iter().chain(budgets().into_iter().map(worst)) {
        for candidate in Candidate::all(&budget) {
            for at in places(&candidate) {
                let request = Request { stage: Some(candidate.name().into()), at, ..Request::default() };
                let derivation = json(&budget, &request);
                let place = format!("{} {} {at:?}", budget.name, candidate.name());
                modes.insert(derivation["point"]["mode"].as_str().expect("a mode").to_owned());
                lines += check(&derivation, &place);
                entries_are_derived(&derivation, &place);
            }
        }
    }
    assert!(lines > 5000, "{lines}");
    for mode in ["continuous", "discontinuous", "pulse_skipping", "linear"] {
        assert!(modes.contains(mode), "no point runs in {mode}");
    }
}

/// Every booked entry has a line with its watts.
fn entries_are_derived(derivation: &serde_json::Value, place: &str) {
    let Some(entries) = derivation["point"]["entries"].as_array() else { return };
    let lines = derivation["lines"].as_array().expect("lines");
    for entry in entries {
        let of = |line: &&serde_json::Value| {
            line["slot"] == entry["slot"] && line["mechanism"] == entry["mechanism"]
        };
        let last = lines.iter().rfind(of);
        let last = last
            .unwrap_or_else(|| panic!("{place}: {} {} is not derived", entry["slot"], entry["mechanism"]));
        let (derived, booked) = (last["value"].as_f64().expect("W"), entry["watts"].as_f64().expect("W"));
        // the passes of the heat loop use series near the last place: parts in 1e15
        assert!(
            (derived - booked).abs() <= 1e-12 * booked.abs(),
            "{place}: {} {derived} {booked}",
            entry["mechanism"]
        );
    }
}

#[test]
fn narrowed_derivations_keep_what_they_need() {
    let budgets = budgets();
    let budget = budgets.iter().find(|budget| budget.name.contains("dryer")).expect("the grain dryer");
    let request = Request {
        stage: Some("synchronous".into()),
        mechanism: Some(lossbook::ledger::Mechanism::Overlap),
        slot: Some(lossbook::ledger::Slot::HighSide),
        ..Request::default()
    };
    let derivation = json(budget, &request);
    assert!(check(&derivation, "narrowed") > 20);
    let lines = derivation["lines"].as_array().expect("lines");
    let last = lines.last().expect("a line");
    assert_eq!((last["slot"].as_str(), last["mechanism"].as_str()), (Some("high_side"), Some("overlap")));
    assert!(!lines.iter().any(|line| line["mechanism"] == "core"));
}
