//! Sensitivities against derivatives taken by hand, and gains that are bought against the model itself.

use std::error::Error;
use std::path::Path;

use lossbook::answer::Answer;
use lossbook::budget::Budget;
use lossbook::fitted::Stage;
use lossbook::grid::PartialPoint;
use lossbook::sensitivity::{self, Request};
use lossbook::{input, model, values};
use serde_json::Value;

type Outcome = Result<(), Box<dyn Error>>;

fn ask(stage: &str) -> Result<(Budget, Value), Box<dyn Error>> {
    let file = Path::new(env!("CARGO_MANIFEST_DIR")).join("budgets/grain-dryer-camera.yaml");
    let (budget, _) = input::load_budget(&file)?;
    let request = Request { stage: Some(stage.into()), at: PartialPoint::default(), gain: 0.005 };
    let mut bytes = Vec::new();
    sensitivity::answer(&budget, &request).json(&mut bytes)?;
    let answer: Value = serde_json::from_slice(&bytes)?;
    Ok((budget, answer["stages"][0].clone()))
}

fn percent(stage: &Value, path: &str) -> Result<f64, Box<dyn Error>> {
    let slopes = stage["slopes"].as_array().ok_or("slopes")?;
    let slope = slopes.iter().find(|slope| slope["path"] == path).ok_or(format!("no slope of {path}"))?;
    Ok(slope["percent"].as_f64().ok_or("percent")?)
}

#[test]
fn a_linear_regulator_by_hand() -> Outcome {
    // loss = (V_i - V_o) I + V_i I_gnd (textbook, LT3010 data sheet p. 11): the elasticity to V_i is
    // V_i (I + I_gnd)/loss, that to the ground current V_i I_gnd/loss
    let (budget, stage) = ask("linear")?;
    let number = |key: &str| stage[key].as_f64().ok_or("number");
    let (v_in, load, loss) = (number("input_voltage")?, number("load")?, number("loss")?);
    let ground = (loss - (v_in - budget.output_voltage) * load) / v_in;
    let expected = v_in * (load + ground) / loss;
    // central differences of a linear law: only rounding remains
    assert!((percent(&stage, "input_voltage")? / expected - 1.0).abs() < 1e-6);
    assert!((percent(&stage, "regulator.i_gnd.i_gnd")? / (v_in * ground / loss) - 1.0).abs() < 1e-6);
    assert!(
        stage["slopes"]
            .as_array()
            .is_some_and(|slopes| slopes.iter().all(|slope| slope["path"] != "ambient"))
    );
    Ok(())
}

#[test]
fn what_is_bought_is_gained() -> Outcome {
    let (budget, stage) = ask("synchronous")?;
    let purchases = stage["purchases"].as_array().ok_or("purchases")?;
    let before = stage["efficiency"].as_f64().ok_or("efficiency")?;
    let mut bought = 0;
    for purchase in purchases {
        let (Some(path), Some(needed)) = (purchase["path"].as_str(), purchase["needed"].as_f64()) else {
            continue;
        };
        let (mut sheet, mut board) = (budget.stages[0].clone(), budget.board.clone());
        // curves of several points move together and are not set by one path
        if !values::set(&mut sheet, &mut board, path, needed) {
            continue;
        }
        let stage = Stage::on_rail(&sheet.circuit, budget.output_voltage, &board, &budget.coupling);
        let after = model::evaluate(&stage, budget.headline)?.efficiency().ok_or("no load")?;
        // the search ends within 1e-9 of the factor
        assert!((after - before - 0.005).abs() < 1e-7, "{path}: {}", after - before);
        bought += 1;
    }
    assert!(bought >= 2, "{bought} values reach the gain");
    Ok(())
}

#[test]
fn signs_of_the_trade() -> Outcome {
    // more resistance, more charge, more frequency: more loss; more inductance: less ripple and less loss at full load
    let (_, stage) = ask("synchronous")?;
    for path in
        ["inductor.dcr", "high_side.r_ds_on", "low_side.q_g", "switching_frequency", "load", "ambient"]
    {
        assert!(percent(&stage, path)? > 0.0, "{path}");
    }
    assert!(percent(&stage, "inductor.inductance")? < 0.0);
    Ok(())
}
