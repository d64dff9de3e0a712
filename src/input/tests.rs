//! The examples load, and nothing that a file may hold makes the readers panic.

use std::path::{Path, PathBuf};

use proptest::prelude::*;

use super::*;
use crate::files::TextFile;
use crate::units::Dimension;

fn root(folder: &str) -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join(folder)
}

#[test]
fn example_library_loads() {
    let (library, _, inputs) = load_library(&[root("parts")]).unwrap_or_else(|errors| panic!("{errors}"));
    assert!(library.mosfets.len() >= 10 && inputs.len() >= 6);
}

#[test]
fn example_budgets_load() {
    for path in crate::files::list_yaml(&root("budgets")).expect("examples") {
        let (budget, _) = load_budget(&path).unwrap_or_else(|errors| panic!("{errors}"));
        assert!(budget.grid.len() > 1 && !budget.stages.is_empty());
        assert!(budget.inputs.len() > 1);
    }
}

#[test]
fn warnings_are_about_parts_in_use_only() {
    let everyone = load_library(&[root("parts")]).expect("sound").1;
    let (_, own) = load_budget(&root("budgets").join("grain-dryer-camera.yaml")).expect("sound");
    assert!(own.len() < everyone.len());
}

/// Reads a text as a library file.
fn read_parts(text: &str) -> Vec<InputError> {
    let path = Path::new("x.yaml");
    match outline::guard(path, text) {
        Ok(outline) => part_file::read_text(path, text, &outline, &part_file::Attention::Everyone).faults,
        Err(faults) => faults,
    }
}

/// Reads a text as a budget beside the examples.
fn read_budget(text: &str) -> Vec<InputError> {
    let path = root("budgets").join("x.yaml");
    let file = TextFile { text: text.to_string(), sha256: String::new() };
    match outline::guard(&path, text) {
        Ok(outline) => budget::load_text(&path, &file, &outline).1,
        Err(faults) => faults,
    }
}

/// A text with some of its characters replaced.
fn hurt(text: &str, wounds: &[(prop::sample::Index, char)]) -> String {
    let mut letters: Vec<char> = text.chars().collect();
    for (place, letter) in wounds {
        let place = place.index(letters.len());
        letters[place] = *letter;
    }
    letters.into_iter().collect()
}

fn wounds() -> impl Strategy<Value = Vec<(prop::sample::Index, char)>> {
    let letter =
        prop::sample::select("{}[]:,-#&*!|>\'\"\n\t\u{2028} .0159eVmAΩ%~?".chars().collect::<Vec<_>>());
    prop::collection::vec((any::<prop::sample::Index>(), letter), 1..6)
}

fn sound(faults: &[InputError]) -> Result<(), TestCaseError> {
    for fault in faults {
        prop_assert!(!fault.reason.is_empty() && !fault.hint.is_empty(), "{fault}");
        prop_assert!(!fault.render(false).is_empty());
        if let Some(excerpt) = &fault.excerpt {
            prop_assert!(excerpt.text.get(excerpt.start..excerpt.end).is_some(), "{fault:?}");
        }
    }
    Ok(())
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 300, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn any_text_is_a_quantity_or_a_fault(text in "\\PC{0,20}", number in "[-+]?[0-9.,eE]{1,12} ?(mΩ|V|K/W|Wh|)") {
        for dimension in [Dimension::Voltage, Dimension::Number, Dimension::Ratio, Dimension::Energy] {
            for text in [&text, &number] {
                match quantity::parse(text, quantity::Expected::of(dimension)) {
                    Ok(value) => prop_assert!(value.is_finite()),
                    Err(blame) => prop_assert!(!blame.reason.is_empty() && !blame.hint.is_empty()),
                }
            }
        }
    }

    #[test]
    fn quantities_are_the_literals_of_the_language(whole in 0_u32.., rest in 0_u32..) {
        let literal: f64 = format!("{whole}.{rest}e-9").parse().expect("a literal");
        let read = quantity::parse(&format!("{whole}.{rest} nC"), quantity::Expected::of(Dimension::Charge));
        prop_assert_eq!(read.expect("a charge").to_bits(), literal.to_bits());
    }

    #[test]
    fn no_hurt_library_panics(wounds in wounds()) {
        let text = include_str!("../../parts/inductors.yaml");
        sound(&read_parts(&hurt(text, &wounds)))?;
    }

    #[test]
    fn no_hurt_budget_panics(wounds in wounds()) {
        let text = include_str!("../../budgets/trackside-sensor.yaml");
        sound(&read_budget(&hurt(text, &wounds)))?;
    }

    #[test]
    fn both_parsers_see_the_same_keys(text in "([a-c\"'?-]{1,2}: ?[a-c{}\\[\\]:,#|>'\"\n ?-]{0,12}\n){1,4}") {
        if let (Ok(outline), Ok(node::Node::Map(entries))) = (outline::guard(Path::new("x"), &text), yaml::read(&text)) {
            let guarded: Vec<&str> = outline.top.iter().map(|(key, _)| &**key).collect();
            let read: Vec<&str> = entries.iter().map(|(key, _)| &**key).collect();
            prop_assert_eq!(guarded, read);
        }
    }

    #[test]
    fn no_scribble_panics(text in "[a-c{}\\[\\]:,#&*!|>'\"\n\t ?-]{0,60}") {
        sound(&read_parts(&text))?;
        sound(&read_budget(&text))?;
        sound(&read_parts(&format!("mosfets:\n  a: {text}\n")))?;
    }
}
