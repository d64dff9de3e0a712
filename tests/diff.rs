//! Differences of two budgets: nothing between equals, one change explains all of one change, entries add up.

use std::path::PathBuf;

use lossbook::answer::Answer;
use lossbook::budget::Budget;
use lossbook::diff::{Request, answer};
use lossbook::grid::{Axis, AxisName};
use lossbook::input;

fn load(name: &str) -> Budget {
    let path = PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("budgets").join(name);
    input::load_budget(&path).expect("loads").0
}

fn json(before: &Budget, after: &Budget) -> serde_json::Value {
    let mut out = Vec::new();
    answer(before, after, &Request::default()).json(&mut out).expect("written");
    serde_json::from_slice(&out).expect("JSON")
}

#[test]
fn equals_differ_in_nothing() {
    for name in ["grain-dryer-camera.yaml", "drifting-buoy.yaml", "trackside-sensor.yaml", "soil-probe.yaml"]
    {
        let budget = load(name);
        for stage in json(&budget, &budget)["stages"].as_array().expect("stages") {
            assert_eq!(stage["changes"].as_array().map(Vec::len), Some(0));
            assert_eq!(stage["loss_difference"].as_f64(), Some(0.0));
            assert!(stage["sentence"].as_str().expect("words").starts_with("no change"));
        }
    }
}

#[test]
fn one_change_explains_the_whole_difference() {
    let before = load("grain-dryer-camera.yaml");
    let mut after = before.clone();
    after.grid = after.grid.with(AxisName::SwitchingFrequency, Axis::List(vec![500e3]));
    after.headline.switching_frequency = 500e3;
    let difference = json(&before, &after);
    for stage in difference["stages"].as_array().expect("stages") {
        let loss = stage["loss_difference"].as_f64().expect("W");
        let changes = stage["changes"].as_array().expect("changes");
        if stage["stage"] == "linear" {
            assert!(changes.is_empty());
            continue;
        }
        assert_eq!((changes.len(), changes[0]["what"].as_str()), (1, Some("f_SW")));
        // the same evaluation: no tolerance but that of adding up
        assert!((changes[0]["effect"].as_f64().expect("W") - loss).abs() <= 1e-12 * loss.abs());
        let entries = stage["entries"].as_array().expect("entries");
        let sum: f64 = entries.iter().map(|entry| entry["difference"].as_f64().expect("W")).sum();
        assert!((sum - loss).abs() <= 1e-12, "{sum} {loss}");
    }
}

#[test]
fn parts_and_board_are_named() {
    let before = load("grain-dryer-camera.yaml");
    let mut after = before.clone();
    after.board.output_path = Some(lossbook::sheet::Datum::of(2e-3));
    let words = json(&before, &after)["stages"][0]["sentence"].as_str().expect("words").to_owned();
    assert!(words.contains("board.output_path 1 mΩ -> 2 mΩ"), "{words}");
    assert!(words.contains("copper +"), "{words}");
}
