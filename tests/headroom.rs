//! Backward answers and energy: roots against closed forms, and against the model run forwards.

use std::error::Error;
use std::path::Path;

use lossbook::answer::Answer;
use lossbook::budget::Budget;
use lossbook::candidate::Candidate;
use lossbook::grid::{AxisName, PartialPoint};
use lossbook::ledger::Slot;
use lossbook::stage::Circuit;
use lossbook::{energy, headroom, input, model, values};
use serde_json::Value;

type Outcome = Result<(), Box<dyn Error>>;

fn budget(name: &str) -> Result<Budget, Box<dyn Error>> {
    Ok(input::load_budget(&Path::new(env!("CARGO_MANIFEST_DIR")).join("budgets").join(name))?.0)
}

fn json(answer: &dyn Answer) -> Result<Value, Box<dyn Error>> {
    let mut bytes = Vec::new();
    answer.json(&mut bytes)?;
    Ok(serde_json::from_slice(&bytes)?)
}

fn room(budget: &Budget, stage: &str, at: PartialPoint) -> Result<Vec<Value>, Box<dyn Error>> {
    let request = headroom::Request { stage: Some(stage.into()), at };
    let answer = json(&headroom::answer(budget, &request))?;
    Ok(answer["stages"][0]["parts"].as_array().ok_or("parts")?.clone())
}

fn number(value: &Value) -> Result<f64, Box<dyn Error>> {
    value.as_f64().ok_or_else(|| format!("{value} is no number").into())
}

#[test]
fn a_linear_regulator_by_hand() -> Outcome {
    // T = T_a + R_th P with a loss P that does not depend on T: R_max = (T_max - T_a)/P, T_a,max = T_max - R_th P
    let budget = budget("grain-dryer-camera.yaml")?;
    let at = PartialPoint { load: Some(1.0), ..PartialPoint::default() };
    let part = room(&budget, "linear", at)?.remove(0);
    let sheet = budget.stages.iter().find(|stage| stage.is_linear()).ok_or("a linear stage")?;
    let candidate = Candidate::new(&budget, sheet);
    let point = candidate.at(at);
    let loss = candidate.evaluate(point)?.loss();
    let (limit, now) = (number(&part["limit"])?, number(&part["r_th_now"])?);
    let close = |value: &Value, expected: f64| {
        Ok::<bool, Box<dyn Error>>((number(value)? / expected - 1.0).abs() < 1e-9)
    };
    // bisection to the last bit of a straight line
    assert!(close(&part["r_th"]["value"], (limit - point.ambient) / loss)?);
    assert!(close(&part["ambient"]["value"], limit - now * loss)?);
    assert_eq!(part["spreading"]["answer"], "none_needed");

    // at 6 A it is far too hot: the second way beside its own is the difference of conductances
    let hot = room(&budget, "linear", PartialPoint::default())?.remove(0);
    let beside = number(&hot["spreading"]["r_th"])?;
    let both = 1.0 / (1.0 / beside + 1.0 / number(&hot["r_th_now"])?);
    assert!((both / number(&hot["r_th"]["value"])? - 1.0).abs() < 1e-9);
    Ok(())
}

#[test]
fn forwards_again_every_part_stands_at_its_limit() -> Outcome {
    let budget = budget("grain-dryer-camera.yaml")?;
    for sheet in &budget.stages {
        let candidate = Candidate::new(&budget, sheet);
        for part in room(&budget, &sheet.name, PartialPoint::default())? {
            let slot = part["slot"].as_str().and_then(Slot::from_name).ok_or("slot")?;
            for (key, axis) in [("load", AxisName::Load), ("ambient", AxisName::Ambient)] {
                if part[key]["answer"] != "value" {
                    continue;
                }
                let point = candidate.headline().with(axis, number(&part[key]["value"])?);
                let reached = candidate.evaluate(point)?.temperatures[slot.index()].ok_or("temperature")?;
                // temperatures settle to 1e-6 K
                assert!((reached - number(&part["limit"])?).abs() < 1e-4, "{} {key}: {reached}", sheet.name);
            }
        }
    }
    Ok(())
}

#[test]
fn unbounded_and_already_exceeded_are_answers() -> Outcome {
    let mut budget = budget("grain-dryer-camera.yaml")?;
    // an idle diode stage makes no pulses: its inductor is cold behind any thermal resistance
    let idle = PartialPoint { load: Some(0.0), ..PartialPoint::default() };
    let parts = room(&budget, "diode", idle)?;
    let inductor = parts.iter().find(|part| part["slot"] == "inductor").ok_or("inductor")?;
    assert_eq!(inductor["r_th"]["answer"], "unbounded");
    // air that is hotter than a part may be
    let furnace = PartialPoint { ambient: Some(130.0), ..PartialPoint::default() };
    for part in room(&budget, "synchronous", furnace)? {
        assert_eq!(part["load"]["answer"], "already_exceeded", "{part}");
        assert_eq!(part["r_th"]["answer"], "already_exceeded");
        assert_eq!(part["spreading"]["answer"], "none_helps");
    }
    // a wider margin leaves less room
    let before = number(&room(&budget, "synchronous", PartialPoint::default())?[0]["load"]["value"])?;
    budget.derating.junction_margin += 20.0;
    let after = number(&room(&budget, "synchronous", PartialPoint::default())?[0]["load"]["value"])?;
    assert!(after < before);
    Ok(())
}

#[test]
fn energy_of_a_linear_stage_by_hand() -> Outcome {
    // drawn power is V_i (I + I_gnd); 1 Wh = 3600 J; a day has 86 400 s
    let budget = budget("soil-probe.yaml")?;
    let sheet = budget.stages.iter().find(|stage| stage.is_linear()).ok_or("a linear stage")?;
    let Circuit::Linear(regulator) = &sheet.circuit else { return Err("a linear stage".into()) };
    let ground = |load: f64| {
        let table: Vec<(f64, f64)> =
            regulator.sheet.i_gnd.iter().map(|point| (point.i.value, point.i_gnd.value)).collect();
        let pair = table.windows(2).find(|pair| load <= pair[1].0).unwrap_or(&table[table.len() - 2..]);
        pair[0].1 + (load - pair[0].0) / (pair[1].0 - pair[0].0) * (pair[1].1 - pair[0].1)
    };
    let drawn: f64 = budget
        .profile
        .iter()
        .map(|part| {
            let point = part.at.or(budget.headline);
            part.share * point.input_voltage * (point.load + ground(point.load))
        })
        .sum();
    let answer = json(&energy::answer(&budget, &energy::Request::default()))?;
    let stages = answer["stages"].as_array().ok_or("stages")?;
    let linear = stages.iter().find(|stage| stage["stage"] == sheet.name.as_str()).ok_or("the stage")?;
    let usage = &linear["usage"];
    assert!((number(&usage["energy_per_day"])? / (drawn * 86_400.0) - 1.0).abs() < 1e-9);
    assert!((number(&usage["energy_per_year"])? / number(&usage["energy_per_day"])? - 365.0).abs() < 1e-9);
    let battery = budget.battery.ok_or("a battery")?;
    assert!((number(&usage["battery_days"])? / (battery / drawn / 86_400.0) - 1.0).abs() < 1e-9);
    // what one saves the other pays
    let saved = |of: &str, against: &str| -> Result<f64, Box<dyn Error>> {
        let stage = stages.iter().find(|stage| stage["stage"] == of).ok_or("stage")?;
        let list = stage["savings"].as_array().ok_or("savings")?;
        number(&list.iter().find(|one| one["against"] == against).ok_or("saving")?["energy_per_day"])
    };
    let other = stages.iter().find(|stage| stage["stage"] != sheet.name.as_str()).ok_or("another stage")?;
    let other = other["stage"].as_str().ok_or("name")?;
    assert_eq!(saved(&sheet.name, other)?, -saved(other, &sheet.name)?);
    Ok(())
}

#[test]
fn data_sheet_values_are_set_by_key_path_everywhere() -> Outcome {
    // halving r_th_ja by its path halves the rise of a linear regulator
    let budget = budget("grain-dryer-camera.yaml")?;
    let sheet = budget.stages.iter().find(|stage| stage.is_linear()).ok_or("a linear stage")?;
    let rise = |sheet: &lossbook::stage::StageSheet| -> Result<f64, Box<dyn Error>> {
        let stage = lossbook::fitted::Stage::fit(sheet, &budget);
        let point = budget.headline.with(AxisName::Load, 1.0);
        let solved = model::evaluate(&stage, point)?;
        Ok(solved.temperatures[Slot::Regulator.index()].ok_or("temperature")? - point.ambient)
    };
    let before = rise(sheet)?;
    let (mut changed, mut board) = (sheet.clone(), budget.board.clone());
    let now = values::all(sheet, &board)
        .into_iter()
        .find(|value| value.path == "regulator.r_th_ja")
        .ok_or("r_th_ja")?;
    assert!(values::set(&mut changed, &mut board, "regulator.r_th_ja", 0.5 * now.datum.value));
    assert!((rise(&changed)? / before - 0.5).abs() < 1e-9);
    Ok(())
}

#[test]
fn the_thermal_resistance_found_takes_the_part_to_its_limit() -> Outcome {
    // the answer put back into the model: the definition of the root
    let mut budget = budget("grain-dryer-camera.yaml")?;
    let part = room(&budget, "synchronous", PartialPoint::default())?.remove(0);
    let (limit, r_th) = (number(&part["limit"])?, number(&part["r_th"]["value"])?);
    let stage = budget.stages.iter_mut().find(|stage| stage.name == "synchronous").ok_or("the stage")?;
    assert!(values::set(stage, &mut budget.board, "high_side.r_th_ja", r_th));
    let sheet = budget.stages.iter().find(|stage| stage.name == "synchronous").ok_or("the stage")?;
    let candidate = Candidate::new(&budget, sheet);
    let solved = candidate.evaluate(candidate.headline())?;
    let reached = solved.temperatures[Slot::HighSide.index()].ok_or("a temperature")?;
    // the search stops within a microkelvin of the limit, of 65 K of rise
    assert!((reached / limit - 1.0).abs() < 1e-6, "{reached} of {limit}");
    Ok(())
}
