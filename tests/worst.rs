//! Worst values: each printed limit on the side that raises the loss at that point.

use std::error::Error;
use std::path::Path;

use lossbook::answer::Answer;
use lossbook::budget::Budget;
use lossbook::candidate::Candidate;
use lossbook::grid::AxisName;
use lossbook::sweep::Watch;
use lossbook::tolerance::Rig;
use lossbook::worst::{Side, ValueSet, WorstCase};
use lossbook::{compare, input, model};

fn example(values: ValueSet) -> Result<Budget, Box<dyn Error>> {
    let file = Path::new(env!("CARGO_MANIFEST_DIR")).join("budgets/grain-dryer-camera.yaml");
    let (mut budget, _) = input::load_budget(&file)?;
    budget.values = values;
    Ok(budget)
}

#[test]
fn inductance_goes_down_and_resistance_up() -> Result<(), Box<dyn Error>> {
    // a smaller inductance has more ripple, more core loss and more RMS current; a larger resistance more I²R: physics
    let budget = example(ValueSet::Typical)?;
    let worst = WorstCase::new(Rig::new(&budget, &budget.stages[0]));
    let chosen = worst.chosen(budget.headline);
    let side = |path: &str| chosen.iter().find(|(lever, _)| lever.path == path).map(|(_, side)| *side);
    assert_eq!(side("inductor.inductance"), Some(Side::Low));
    assert_eq!(side("inductor.dcr"), Some(Side::High));
    assert_eq!(side("high_side.r_ds_on"), Some(Side::High));
    assert_eq!(side("high_side.q_g"), Some(Side::High));
    assert_eq!(side("high_side.v_ds_max"), None, "a rating moves no loss");
    Ok(())
}

#[test]
fn no_single_limit_and_no_corner_beats_the_worst_values() -> Result<(), Box<dyn Error>> {
    let budget = example(ValueSet::Worst)?;
    for sheet in &budget.stages[..2] {
        let rig = Rig::new(&budget, sheet);
        let levers: Vec<_> = rig.levers().into_iter().filter(|lever| lever.has_limits()).collect();
        let candidate = Candidate::new(&budget, sheet);
        for load in [0.3, 2.0, 6.0, 10.0] {
            let point = candidate.headline().with(AxisName::Load, load);
            let worst = candidate.evaluate(point)?.loss();
            let typical = model::evaluate(&candidate.stage, point)?.loss();
            assert!(worst > typical, "{}: {worst} against {typical} W at {load} A", sheet.name);
            // every corner of the first eight limited values, which are far from independent
            for corner in 0..1_u32 << levers.len().min(8) {
                let mut settings = Vec::new();
                for (place, lever) in levers.iter().enumerate() {
                    let up = corner >> place & 1 == 1;
                    settings.extend(lever.settings(if up { Side::High } else { Side::Low }));
                }
                let Ok(stage) = rig.fit(&settings) else { continue };
                let Ok(solved) = model::evaluate(&stage, point) else { continue };
                // signs are found one value at a time; products of two small changes may beat them by a little
                let limit = worst * 1.005;
                assert!(
                    solved.loss() <= limit,
                    "{} at {load} A: {} above {worst}",
                    sheet.name,
                    solved.loss()
                );
            }
        }
    }
    Ok(())
}

#[test]
fn every_form_of_the_answer_says_which_values() -> Result<(), Box<dyn Error>> {
    for (values, words) in [(ValueSet::Typical, "typical values"), (ValueSet::Worst, "worst values")] {
        let budget = example(values)?;
        let (request, watch) = (compare::Request::default(), Watch::default());
        let answer = compare::answer(&budget, &request, &watch);
        let document = format!("{:?}", answer.document());
        assert!(document.contains(words));
        let mut bytes = Vec::new();
        answer.json(&mut bytes)?;
        let json: serde_json::Value = serde_json::from_slice(&bytes)?;
        assert_eq!(json["values"], values.name());
    }
    Ok(())
}

#[test]
fn derivations_show_the_limits_that_are_taken() -> Result<(), Box<dyn Error>> {
    let budget = example(ValueSet::Worst)?;
    let request = lossbook::justify::Request { stage: Some("synchronous".into()), ..Default::default() };
    let mut bytes = Vec::new();
    lossbook::justify::answer(&budget, &request).json(&mut bytes)?;
    let text = String::from_utf8(bytes)?;
    let json: serde_json::Value = serde_json::from_str(&text)?;
    assert_eq!(json["values"], "worst");
    // the limits of the example's files, typed by hand
    for origin in ["inductance = 2.64 µH min", "dcr = 6.1 mΩ max", "q_g[0] = 13 nC max"] {
        assert!(text.contains(origin), "{origin}");
    }
    let loss = Candidate::new(&budget, &budget.stages[0]).evaluate(budget.headline)?.loss();
    assert_eq!(json["point"]["loss"].as_f64(), Some(loss));
    Ok(())
}

#[test]
fn a_ranking_by_worst_values_ranks_by_worst_values() -> Result<(), Box<dyn Error>> {
    let file = Path::new(env!("CARGO_MANIFEST_DIR")).join("budgets/grain-dryer-camera.yaml");
    let run = |extra: &[&str]| -> Result<serde_json::Value, Box<dyn Error>> {
        let mut command = std::process::Command::new(env!("CARGO_BIN_EXE_lossbook"));
        let out = command
            .arg("pick")
            .arg(&file)
            .args(["--format", "json", "--values", "worst"])
            .args(extra)
            .output()?;
        Ok(serde_json::from_slice(&out.stdout)?)
    };
    let (bound, whole) = (run(&["--slice", "2/12"])?, run(&["--slice", "2/12", "--exhaustive"])?);
    assert_eq!(bound["values"], "worst");
    let ranking = bound["ranking"].as_array().ok_or("ranking")?;
    assert_eq!(ranking.len(), whole["ranking"].as_array().ok_or("ranking")?.len());
    for (short, long) in ranking.iter().zip(whole["ranking"].as_array().ok_or("ranking")?) {
        // cutting off what cannot win loses nothing
        assert_eq!(
            (&short["high_side"], &short["low_side"], &short["value"]),
            (&long["high_side"], &long["low_side"], &long["value"])
        );
        // what is ranked by is the loss that the entry itself states
        assert_eq!(short["value"], short["loss"]);
    }
    Ok(())
}
