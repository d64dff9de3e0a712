//! Spread by part tolerance against what is known of uniform and normal distributions, and the same bytes on any
//! number of threads.

use std::error::Error;
use std::path::{Path, PathBuf};
use std::process::Command;

use lossbook::answer::Answer;
use lossbook::budget::Budget;
use lossbook::spread::{self, Request};
use lossbook::sweep::Watch;
use lossbook::{input, values};
use serde_json::Value;

type Outcome = Result<(), Box<dyn Error>>;

fn file() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("budgets/grain-dryer-camera.yaml")
}

fn json(budget: &Budget, stage: &str, draws: u64) -> Result<Value, Box<dyn Error>> {
    let request = Request { stage: Some(stage.into()), draws, seed: 3 };
    let watch = Watch::default();
    let mut bytes = Vec::new();
    spread::answer(budget, &request, &watch).json(&mut bytes)?;
    Ok(serde_json::from_slice(&bytes)?)
}

/// The example with a tolerance on the ground current of its linear stage, in which the loss is linear.
fn toleranced(tolerance: impl Fn(&mut lossbook::sheet::Datum)) -> Result<Budget, Box<dyn Error>> {
    let (mut budget, _) = input::load_budget(&file())?;
    let mut board = budget.board.clone();
    let linear = budget.stages.iter_mut().find(|sheet| sheet.is_linear()).ok_or("no linear stage")?;
    values::walk(linear, &mut board, &mut |place, datum| {
        if place.path.ends_with(".i_gnd") {
            tolerance(datum);
        }
    });
    Ok(budget)
}

fn number(value: &Value) -> Result<f64, Box<dyn Error>> {
    value.as_f64().ok_or_else(|| format!("{value} is no number").into())
}

#[test]
fn a_uniform_tolerance_gives_uniform_percentiles() -> Outcome {
    // loss = pass + V_i I_gnd, I_gnd = g (1 ± 0.4) uniform: mean in the middle, 5 % at -0.9, 95 % at +0.9 of the
    // half-width, one standard deviation half-width/√3 (JCGM 100:2008, 4.3.7)
    let budget = toleranced(|datum| {
        datum.min = Some(0.6 * datum.value);
        datum.max = Some(1.4 * datum.value);
    })?;
    let answer = json(&budget, "linear", 20_000)?;
    for point in answer["points"].as_array().ok_or("points")? {
        let typical = number(&point["typical"])?;
        let half = number(&point["worst"])? - typical;
        assert!(half > 0.0);
        let place = |value: &Value| Ok::<f64, Box<dyn Error>>((number(value)? - typical) / half);
        // 20 000 draws: the standard error of a 5 % quantile of a uniform is 0.003 of the half-width
        assert!(place(&point["loss"]["mean"])?.abs() < 0.015);
        assert!((place(&point["loss"]["p5"])? + 0.9).abs() < 0.012);
        assert!((place(&point["loss"]["p95"])? - 0.9).abs() < 0.012);
        // a single tolerance: its root-sum-square is its own effect, and so is its line among the contributors
        assert!((number(&point["root_sum_square"]["plus"])? / half - 1.0).abs() < 1e-9);
    }
    assert_eq!(answer["contributors"].as_array().map(Vec::len), Some(1));
    Ok(())
}

#[test]
fn a_normal_tolerance_gives_normal_percentiles() -> Outcome {
    // any table of the normal distribution: 5 and 95 % lie 1.6449 deviations from the mean; the limit counts as 3
    let budget = toleranced(|datum| datum.sigma = Some(0.05 * datum.value))?;
    let answer = json(&budget, "linear", 20_000)?;
    let point = &answer["points"][0];
    let typical = number(&point["typical"])?;
    let sigma = number(&point["root_sum_square"]["plus"])? / 3.0;
    for (key, expected) in [("mean", 0.0), ("p5", -1.6449), ("p95", 1.6449)] {
        let seen = (number(&point["loss"][key])? - typical) / sigma;
        assert!((seen - expected).abs() < 0.06, "{key}: {seen} against {expected}");
    }
    Ok(())
}

#[test]
fn draws_stay_below_the_worst_case_and_the_model_stays_apart() -> Outcome {
    let (budget, _) = input::load_budget(&file())?;
    let answer = json(&budget, "synchronous", 400)?;
    for point in answer["points"].as_array().ok_or("points")? {
        let p95 = number(&point["loss"]["p95"])?;
        assert!(number(&point["loss"]["p5"])? < p95);
        assert!(p95 < number(&point["worst"])?, "no 95 % beyond the worst case");
        let model = point["model"].as_array().ok_or("model")?;
        assert!(model.iter().any(|term| term["mechanism"] == "overlap"));
        for term in model {
            assert!(number(&term["low"])? <= 0.0 && number(&term["high"])? >= 0.0);
        }
    }
    let contributors = answer["contributors"].as_array().ok_or("contributors")?;
    assert!(contributors.len() <= spread::CONTRIBUTORS);
    assert!(contributors.iter().all(|one| one["path"].as_str().is_some_and(|path| path.contains('.'))));
    Ok(())
}

#[test]
fn the_same_bytes_on_any_number_of_threads() -> Outcome {
    let run = |threads: &str, seed: &str| {
        Command::new(env!("CARGO_BIN_EXE_lossbook"))
            .arg("spread")
            .arg(file())
            .args(["--draws", "1500", "--format", "json", "--threads", threads, "--seed", seed])
            .output()
    };
    let (one, two, five, other) = (run("1", "1")?, run("2", "1")?, run("5", "1")?, run("1", "2")?);
    assert!(one.status.success());
    assert_eq!(one.stdout, two.stdout);
    assert_eq!(one.stdout, five.stdout);
    assert_ne!(one.stdout, other.stdout);
    Ok(())
}
