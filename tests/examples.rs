//! Every shipped budget, answered: text and Markdown as snapshots, JSON and CSV compared as numbers.
//!
//! After a change that is meant, `REWRITE=1 cargo test --test examples` writes the snapshots anew; read them before
//! committing.

#![allow(clippy::disallowed_methods)] // tests read and write their own files

use std::collections::BTreeMap;
use std::fs;
use std::path::{Path, PathBuf};

use lossbook::answer::Answer;
use lossbook::budget::Budget;
use lossbook::render::{Markdown, Render, Text};
use lossbook::sweep::Watch;
use lossbook::{compare, input, tabulate};

type Outcome = Result<(), Box<dyn std::error::Error>>;

fn budgets() -> Result<Vec<PathBuf>, std::io::Error> {
    let mut paths: Vec<PathBuf> =
        fs::read_dir("budgets")?.map(|entry| Ok(entry?.path())).collect::<Result<_, std::io::Error>>()?;
    paths.retain(|path| path.extension().is_some_and(|ending| ending == "yaml"));
    paths.sort();
    Ok(paths)
}

fn load(path: &Path) -> Result<Budget, Box<dyn std::error::Error>> {
    Ok(input::load_budget(path).map_err(|errors| format!("{errors:?}"))?.0)
}

/// Compares with a snapshot, or writes it when asked to.
fn matches(name: &str, text: &str) -> Outcome {
    let path = Path::new("tests/snapshots").join(name);
    if std::env::var_os("REWRITE").is_some() {
        fs::create_dir_all("tests/snapshots")?;
        fs::write(&path, text)?;
    }
    let kept = fs::read_to_string(&path)?;
    assert!(kept == text, "{name} differs from its snapshot; read the difference, then REWRITE=1");
    Ok(())
}

fn rendered(answer: &dyn Answer, render: &dyn Render) -> Result<String, Box<dyn std::error::Error>> {
    let mut bytes = Vec::new();
    render.render(&answer.document(), &mut bytes)?;
    Ok(String::from_utf8(bytes)?)
}

#[test]
fn text_and_markdown_are_as_they_were_read() -> Outcome {
    let watch = Watch::default();
    for path in budgets()? {
        let budget = load(&path)?;
        let name = path.file_stem().unwrap_or_default().to_string_lossy().into_owned();
        let (side_by_side, tables) = (compare::Request::default(), tabulate::Request::default());
        let text = Text { width: 100, colour: false };
        let answer = compare::answer(&budget, &side_by_side, &watch);
        matches(&format!("compare-{name}.txt"), &rendered(&answer, &text)?)?;
        let answer = tabulate::answer(&budget, &tables, &watch);
        matches(&format!("tabulate-{name}.txt"), &rendered(&answer, &text)?)?;
        matches(&format!("tabulate-{name}.md"), &rendered(&answer, &Markdown)?)?;
    }
    Ok(())
}

#[test]
fn json_and_csv_carry_the_same_grid_and_every_ledger_closes() -> Outcome {
    let watch = Watch::default();
    for path in budgets()? {
        let budget = load(&path)?;
        let request = tabulate::Request::default();
        let answer = tabulate::answer(&budget, &request, &watch);
        let (mut json, mut csv) = (Vec::new(), Vec::new());
        answer.json(&mut json)?;
        answer.csv(&mut csv)?;
        let json: serde_json::Value = serde_json::from_slice(&json)?;
        let points = json["points"].as_array().ok_or("no points")?;
        let mut reader = csv::Reader::from_reader(csv.as_slice());
        let rows: Vec<BTreeMap<String, String>> = reader.deserialize().collect::<Result<_, _>>()?;
        assert_eq!(points.len(), rows.len());
        for (point, row) in points.iter().zip(&rows) {
            for (key, column) in
                [("input_voltage", "input_voltage [V]"), ("load", "load [A]"), ("loss", "loss [W]")]
            {
                let printed = row[column].parse::<f64>().ok();
                assert_eq!(point[key].as_f64(), printed, "{key} in {}", path.display());
            }
            if point["mode"] == "infeasible" {
                assert!(point["reason"].as_str().is_some_and(|reason| !reason.is_empty()));
                continue;
            }
            // E60: the entries add up to the loss, and the loss is what is drawn less what is delivered
            let number = |value: &serde_json::Value| value.as_f64().ok_or("a number is missing");
            let entries = point["entries"].as_array().ok_or("no entries")?;
            let mut sum = 0.0;
            for entry in entries {
                let watts = number(&entry["watts"])?;
                assert!(watts >= 0.0 && watts.is_finite());
                sum += watts;
            }
            let (input, output) = (number(&point["input_power"])?, number(&point["output_power"])?);
            assert!((sum / number(&point["loss"])? - 1.0).abs() < 1e-12);
            assert!(((input - output - sum) / input).abs() < 1e-12);
        }
    }
    Ok(())
}

#[test]
fn the_shipped_library_is_as_large_as_promised() -> Outcome {
    let (library, _, _) = {
        let loaded =
            input::load_library(&[PathBuf::from("parts")]).map_err(|errors| format!("{errors:?}"))?;
        (loaded.0, loaded.1, loaded.2)
    };
    assert!(library.mosfets.len() >= 12 && library.diodes.len() >= 6 && library.inductors.len() >= 8);
    assert!(
        library.capacitors.len() >= 8
            && library.controllers.len() >= 3
            && library.linear_regulators.len() >= 4
    );
    // every invented part says so
    for (name, sheet) in library.mosfets.iter() {
        assert!(sheet.descriptive.source.as_deref().is_some_and(|s| s.contains("invented")), "{name}");
    }
    Ok(())
}
