//! Words that others use for what has another name here, and near misses: one table for command line and files.

/// What a word was meant to name.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Vocabulary {
    /// Verbs of the command line.
    Verb,
    /// Axes of the grid and coordinates of points, in budgets and options.
    Axis,
    /// Mechanisms of the ledger.
    Mechanism,
    /// Slots of a stage.
    Slot,
    /// Values of `rectifier:`, the kind of a stage.
    Rectifier,
    /// Options of the command line, with their value where it goes with them.
    Option,
    /// Values of options.
    Value,
}

use Vocabulary::{Axis, Mechanism, Option as Switch, Rectifier, Slot, Value, Verb};

/// Word, what it was meant to name, and our words for it.
const OTHER_WORDS: &[(&str, Vocabulary, &[&str])] = &[
    ("table", Verb, &["tabulate"]),
    ("tables", Verb, &["tabulate"]),
    ("list", Verb, &["tabulate"]),
    ("sweep", Verb, &["tabulate"]),
    ("grid", Verb, &["tabulate"]),
    ("curve", Verb, &["tabulate"]),
    ("explain", Verb, &["justify"]),
    ("why", Verb, &["justify"]),
    ("show", Verb, &["justify"]),
    ("versus", Verb, &["compare"]),
    ("vs", Verb, &["compare"]),
    ("run", Verb, &["compare"]),
    ("calc", Verb, &["compare"]),
    ("calculate", Verb, &["compare"]),
    ("validate", Verb, &["check"]),
    ("verify", Verb, &["check"]),
    ("lint", Verb, &["check"]),
    ("choose", Verb, &["pick"]),
    ("select", Verb, &["pick"]),
    ("rank", Verb, &["pick"]),
    ("best", Verb, &["pick"]),
    ("optimize", Verb, &["pick"]),
    ("optimise", Verb, &["pick"]),
    ("csv", Verb, &["import"]),
    ("new", Verb, &["template"]),
    ("init", Verb, &["template"]),
    ("example", Verb, &["template"]),
    ("tolerance", Verb, &["spread"]),
    ("tolerances", Verb, &["spread"]),
    ("random", Verb, &["spread"]),
    ("slopes", Verb, &["sensitivity"]),
    ("bench", Verb, &["reconcile"]),
    ("measure", Verb, &["reconcile"]),
    ("measured", Verb, &["reconcile"]),
    ("margin", Verb, &["headroom"]),
    ("margins", Verb, &["headroom"]),
    ("battery", Verb, &["energy"]),
    ("profile", Verb, &["energy"]),
    ("vin", Axis, &["input_voltage"]),
    ("v_in", Axis, &["input_voltage"]),
    ("vout", Axis, &["output_voltage"]),
    ("v_out", Axis, &["output_voltage"]),
    ("iout", Axis, &["load"]),
    ("i_out", Axis, &["load"]),
    ("load_current", Axis, &["load"]),
    ("output_current", Axis, &["load"]),
    ("current", Axis, &["load"]),
    ("fsw", Axis, &["switching_frequency"]),
    ("f_sw", Axis, &["switching_frequency"]),
    ("freq", Axis, &["switching_frequency"]),
    ("frequency", Axis, &["switching_frequency"]),
    ("temp", Axis, &["ambient"]),
    ("temperature", Axis, &["ambient"]),
    ("ta", Axis, &["ambient"]),
    ("t_a", Axis, &["ambient"]),
    ("t_amb", Axis, &["ambient"]),
    ("switching", Mechanism, &["overlap", "output_charge"]),
    ("coss", Mechanism, &["output_charge"]),
    ("c_oss", Mechanism, &["output_charge"]),
    ("q_oss", Mechanism, &["output_charge"]),
    ("qrr", Mechanism, &["recovery"]),
    ("q_rr", Mechanism, &["recovery"]),
    ("reverse_recovery", Mechanism, &["recovery"]),
    ("deadtime", Mechanism, &["dead_time"]),
    ("body_diode", Mechanism, &["dead_time"]),
    ("gate", Mechanism, &["gate_drive"]),
    ("dcr", Mechanism, &["winding"]),
    ("quiescent", Mechanism, &["bias"]),
    ("i_q", Mechanism, &["bias"]),
    ("hs", Slot, &["high_side"]),
    ("ls", Slot, &["low_side"]),
    ("diode", Slot, &["freewheel_diode"]),
    ("schottky", Slot, &["parallel_schottky"]),
    ("choke", Slot, &["inductor"]),
    ("cin", Slot, &["input_capacitors"]),
    ("c_in", Slot, &["input_capacitors"]),
    ("cout", Slot, &["output_capacitors"]),
    ("c_out", Slot, &["output_capacitors"]),
    ("driver", Slot, &["controller"]),
    ("ldo", Slot, &["regulator"]),
    ("pcb", Slot, &["board"]),
    ("sync", Rectifier, &["synchronous"]),
    ("schottky", Rectifier, &["diode"]),
    ("nonsynchronous", Rectifier, &["diode"]),
    ("asynchronous", Rectifier, &["diode"]),
    ("ldo", Rectifier, &["linear"]),
    ("json", Switch, &["format json"]),
    ("csv", Switch, &["format csv"]),
    ("markdown", Switch, &["format markdown"]),
    ("md", Switch, &["format markdown"]),
    ("out", Switch, &["output"]),
    ("file", Switch, &["output"]),
    ("all", Switch, &["full"]),
    ("long", Switch, &["full"]),
    ("verbose", Switch, &["full"]),
    ("by", Switch, &["split"]),
    ("jobs", Switch, &["threads"]),
    ("slot", Value, &["part"]),
    ("component", Value, &["part"]),
    ("parts", Value, &["part"]),
    ("mechanisms", Value, &["mechanism"]),
    ("cause", Value, &["mechanism"]),
    ("switching", Value, &["mechanism"]),
    ("mosfet", Value, &["mosfets"]),
    ("fets", Value, &["mosfets"]),
    ("transistors", Value, &["mosfets"]),
    ("diode", Value, &["diodes"]),
    ("schottky", Value, &["diodes"]),
    ("inductor", Value, &["inductors"]),
    ("chokes", Value, &["inductors"]),
    ("coils", Value, &["inductors"]),
    ("capacitor", Value, &["capacitors"]),
    ("controller", Value, &["controllers"]),
    ("drivers", Value, &["controllers"]),
    ("ldo", Value, &["linear_regulators"]),
    ("ldos", Value, &["linear_regulators"]),
    ("linear", Value, &["linear_regulators"]),
    ("regulators", Value, &["linear_regulators"]),
    ("budgets", Value, &["budget"]),
    ("rail", Value, &["budget"]),
];

/// Our words for a word used elsewhere; empty when none is known. Case, spaces and hyphens do not matter.
pub fn ours(vocabulary: Vocabulary, word: &str) -> &'static [&'static str] {
    let plain = word.trim().to_lowercase().replace(['-', ' '], "_");
    OTHER_WORDS
        .iter()
        .find(|(other, meant, _)| *meant == vocabulary && *other == plain)
        .map_or(&[], |(_, _, ours)| *ours)
}

/// The nearest of the known words, when one is near enough to be a slip of the fingers.
pub fn nearest<'a>(word: &str, known: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    let (plain, bare) = (word.to_lowercase(), bare(word));
    known
        .into_iter()
        .map(|candidate| {
            let same = !bare.is_empty() && self::bare(candidate) == bare;
            let closeness = strsim::jaro_winkler(&plain, &candidate.to_lowercase());
            (if same { 1.0 } else { closeness }, candidate)
        })
        .filter(|(closeness, _)| *closeness > 0.82)
        // the first of equals, so that the order of the known words decides
        .fold(None, |best: Option<(f64, &str)>, next| match best {
            Some(best) if best.0 >= next.0 => Some(best),
            _ => Some(next),
        })
        .map(|(_, candidate)| candidate)
}

/// A word without case, dashes and underscores: `RDSon` is `r_ds_on`.
fn bare(word: &str) -> String {
    word.chars().filter(|c| !"_- ".contains(*c)).flat_map(char::to_lowercase).collect()
}

/// Our word or words for it, in prose: "`overlap` and `output_charge`"; else the nearest known word.
pub fn hint<'a>(
    vocabulary: Vocabulary,
    word: &str,
    known: impl IntoIterator<Item = &'a str>,
) -> Option<String> {
    match ours(vocabulary, word) {
        [] => nearest(word, known).map(|near| format!("did you mean `{near}`?")),
        [one] => Some(format!("it is called `{one}` here")),
        many => {
            let names: Vec<String> = many.iter().map(|name| format!("`{name}`")).collect();
            Some(format!("it is called {} here", names.join(" and ")))
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::grid::AxisName;
    use crate::ledger;

    #[test]
    fn words_of_others_find_ours() {
        assert_eq!(ours(Verb, "Table"), ["tabulate"]);
        assert_eq!(ours(Axis, "v-in"), ["input_voltage"]);
        assert!(ours(Axis, "table").is_empty());
        let switching = hint(Mechanism, "switching", ["overlap"]);
        assert_eq!(switching.as_deref(), Some("it is called `overlap` and `output_charge` here"));
    }

    #[test]
    fn slips_of_the_fingers_find_the_nearest_word() {
        assert_eq!(nearest("tabluate", ["compare", "tabulate"]), Some("tabulate"));
        assert_eq!(nearest("recovry", ["recovery", "ringing"]), Some("recovery"));
        assert_eq!(nearest("RDSon", ["r_ds_on_hot", "r_ds_on"]), Some("r_ds_on"));
        assert_eq!(nearest("rg", ["q_g", "r_g"]), Some("r_g"));
        assert_eq!(nearest("", ["q_g", "r_g"]), None);
        assert_eq!(nearest("zebra", ["compare", "tabulate"]), None);
    }

    #[test]
    fn every_word_of_ours_exists() {
        for (word, vocabulary, ours) in OTHER_WORDS {
            for name in *ours {
                let known = match vocabulary {
                    Axis => AxisName::from_name(name).is_some() || *name == "output_voltage",
                    Mechanism => ledger::Mechanism::from_name(name).is_some(),
                    Slot => ledger::Slot::from_name(name).is_some(),
                    Rectifier => ["synchronous", "diode", "linear"].contains(name),
                    Verb | Switch | Value => true, // words of the command line, which has its own tests
                };
                assert!(known, "{word} -> {name}");
            }
        }
    }
}
