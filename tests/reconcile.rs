//! A bench beside its budget: the shipped, invented bench file hides two changes; they are found again within their
//! uncertainty.

use std::error::Error;
use std::path::{Path, PathBuf};

use lossbook::answer::Answer;
use lossbook::bench::Reading;
use lossbook::budget::Budget;
use lossbook::grid::PartialPoint;
use lossbook::reconcile::{self, Reconciled, Reconciliation, Verdict};
use lossbook::{input, rehearse};

type Outcome = Result<(), Box<dyn Error>>;

/// IEC 60028: temperature coefficient of copper at 20 °C; resistances are given at 25 °C.
const COPPER: f64 = 0.00393;

fn path(name: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("budgets").join(name)
}

fn example() -> Result<Budget, Box<dyn Error>> {
    Ok(input::load_budget(&path("grain-dryer-camera.yaml"))?.0)
}

fn beside(budget: &Budget, readings: Vec<Reading>) -> Result<Reconciliation, Box<dyn Error>> {
    let accuracy = budget.bench.ok_or("the example states its instruments")?;
    let request = reconcile::Request { stage: "synchronous".into(), readings, accuracy };
    Ok(reconcile::reconcile(budget, &request).ok_or("the stage is there")?)
}

/// What the shipped file hides: 3 mΩ more board copper and twice the bias current.
fn rehearsal(budget: &Budget, seed: u64) -> Result<rehearse::Request, Box<dyn Error>> {
    Ok(rehearse::Request {
        stage: "synchronous".into(),
        at: PartialPoint { ambient: Some(25.0), ..PartialPoint::default() },
        hidden: vec![("board.output_path".into(), 4e-3), ("controller.i_q".into(), 2.4e-3)],
        accuracy: budget.bench.ok_or("the example states its instruments")?,
        seed,
    })
}

#[test]
fn the_shipped_bench_file_is_what_the_program_makes() -> Outcome {
    let budget = example()?;
    let made = rehearse::file(&budget, &rehearsal(&budget, 11)?)?;
    let shipped = lossbook::files::read_text(&path("grain-dryer-camera-bench.csv"))?.text;
    assert!(shipped.starts_with("# Invented readings"));
    assert_eq!(made, shipped);
    Ok(())
}

#[test]
fn the_hidden_changes_are_found_within_their_uncertainty() -> Outcome {
    let budget = example()?;
    let readings = input::bench::load_bench(&path("grain-dryer-camera-bench.csv"))?;
    assert_eq!(readings.len(), 24);
    let found = beside(&budget, readings)?;
    let remainder = found.remainder.ok_or("loads over two decades")?;
    // 3 mΩ of copper at 25 °C is 3 mΩ; its share of the ripple's RMS, dI²/12 of about 0.44 A², is 1.3 mW at any load
    let (ohms, watts) = (3e-3, 24.0 * 1.2e-3 + 3e-3 * 2.3 * 2.3 / 12.0);
    // two standard uncertainties cover 95 %
    assert!((remainder.quadratic.ohms - ohms).abs() < 2.0 * remainder.quadratic.sigma, "{remainder:?}");
    assert!((remainder.constant.watts - watts).abs() < 2.0 * remainder.constant.sigma, "{remainder:?}");
    assert!(remainder.linear.volts < 2.0 * remainder.linear.sigma, "{remainder:?}");
    // they stand out of the noise
    assert!(remainder.quadratic.ohms > 4.0 * remainder.quadratic.sigma);
    assert!(remainder.constant.watts > 20.0 * remainder.constant.sigma);
    let words = format!("{:?}", lossbook::report::reconcile::document(&budget, &found));
    assert!(words.contains("of resistance not in the budget") && words.contains("Constant part 29"));

    // board copper and bias current are among the pairs that this bench cannot tell apart, with their hidden values
    let absorbers = &found.absorbers;
    assert!(absorbers.pairs.iter().all(|pair| pair.changes.len() == 2), "never more than two");
    let best = absorbers.pairs.first().ok_or("a pair")?.chi_square;
    assert!(best < absorbers.chi_square / 100.0 && best < absorbers.single[0].chi_square - 4.0);
    let bias = absorbers.pairs.iter().flat_map(|pair| &pair.changes).find(|c| c.path == "controller.i_q");
    let bias = bias.ok_or("the bias current absorbs the constant part")?;
    assert!((bias.fitted - 2.4e-3).abs() < 3.0 * bias.sigma, "{bias:?}");
    Ok(())
}

#[test]
fn two_deviations_cover_the_truth_as_often_as_they_should() -> Outcome {
    // JCGM 100, 6.3.3: two standard uncertainties cover about 95 %; of 60 seeds at least 51 (binomial, 1 in 1000 falls short)
    let budget = example()?;
    let (mut ohms, mut watts, seeds) = (0, 0, 60);
    for seed in 0..seeds {
        let readings = rehearse::readings(&budget, &rehearsal(&budget, seed)?)?;
        let remainder = beside(&budget, readings)?.remainder.ok_or("loads over two decades")?;
        let inside = |value: f64, sigma: f64, truth: f64| usize::from((value - truth).abs() < 2.0 * sigma);
        ohms += inside(remainder.quadratic.ohms, remainder.quadratic.sigma, 3e-3);
        watts += inside(remainder.constant.watts, remainder.constant.sigma, 0.0301);
    }
    assert!(ohms >= 51, "{ohms} of {seeds}");
    assert!(watts >= 51, "{watts} of {seeds}");
    Ok(())
}

#[test]
fn a_bench_of_the_budget_itself_agrees() -> Outcome {
    let budget = example()?;
    let honest = rehearse::Request { hidden: Vec::new(), ..rehearsal(&budget, 5)? };
    let found = beside(&budget, rehearse::readings(&budget, &honest)?)?;
    let disagree = found.points.iter().filter(|point| point.verdict == Verdict::Disagrees).count();
    // readings are evenly distributed, two deviations cover more than 95 % of 24
    assert!(disagree <= 3, "{disagree} of {}", found.points.len());
    let agree = found.points.iter().filter(|point| point.verdict == Verdict::Agrees).count();
    assert!(agree >= 20);
    Ok(())
}

#[test]
fn the_copper_of_a_hot_board_counts_hot() -> Outcome {
    // at 60 °C the hidden 3 mΩ have grown by IEC 60028
    let budget = example()?;
    let mut hot = rehearsal(&budget, 3)?;
    hot.at.ambient = Some(60.0);
    hot.accuracy = lossbook::budget::BenchAccuracy {
        input_current: lossbook::bench::Accuracy { of_reading: 1e-6, of_range: 0.0 },
        output_current: lossbook::bench::Accuracy { of_reading: 1e-6, of_range: 0.0 },
        input_voltage: lossbook::bench::Accuracy { of_reading: 1e-6, of_range: 0.0 },
        output_voltage: lossbook::bench::Accuracy { of_reading: 1e-6, of_range: 0.0 },
    };
    let readings = rehearse::readings(&budget, &hot)?;
    let request = reconcile::Request { stage: "synchronous".into(), readings, accuracy: hot.accuracy };
    let found = reconcile::reconcile(&budget, &request).ok_or("the stage is there")?;
    let ohms = found.remainder.ok_or("loads over two decades")?.quadratic.ohms;
    let expected = 3e-3 * (1.0 + COPPER * 40.0) / (1.0 + COPPER * 5.0);
    // the drop also stretches the duty a little, which heats other parts: second order, within 5 %
    assert!((ohms / expected - 1.0).abs() < 0.05, "{ohms} against {expected}");
    Ok(())
}

#[test]
fn wide_uncertainty_cannot_tell_and_absurd_rows_are_left_out() -> Outcome {
    let budget = example()?;
    let row = |line, input_current, output_voltage, output_current| Reading {
        line,
        input_voltage: 24.0,
        input_current,
        output_voltage,
        output_current,
        ambient: Some(25.0),
        switching_frequency: None,
    };
    let coarse = lossbook::bench::Accuracy { of_reading: 0.02, of_range: 0.0 };
    let accuracy = lossbook::budget::BenchAccuracy {
        input_voltage: coarse,
        input_current: coarse,
        output_voltage: coarse,
        output_current: coarse,
    };
    let readings = vec![row(2, 0.886, 3.3, 6.0), row(3, 0.7, 3.3, 6.0), row(4, 0.886, 6.0, 3.3)];
    let request = reconcile::Request { stage: "synchronous".into(), readings, accuracy };
    let found = reconcile::reconcile(&budget, &request).ok_or("the stage is there")?;
    assert_eq!(found.points.len(), 1);
    assert_eq!(found.points[0].verdict, Verdict::CannotTell);
    assert_eq!(found.rejected.iter().map(|one| one.line).collect::<Vec<_>>(), [3, 4]);
    assert!(found.rejected[0].reason.contains("more power leaves than enters"));
    assert!(found.rejected[1].reason.contains("look swapped"));
    assert_eq!(found.remainder, None);
    Ok(())
}

#[test]
fn the_json_has_the_keys_that_were_promised() -> Outcome {
    let budget = example()?;
    let readings = input::bench::load_bench(&path("grain-dryer-camera-bench.csv"))?;
    let result = beside(&budget, readings)?;
    let mut bytes = Vec::new();
    Reconciled { budget: &budget, result }.json(&mut bytes)?;
    let json: serde_json::Value = serde_json::from_slice(&bytes)?;
    let point = &json["points"][0];
    for key in ["input_voltage", "load", "measured_loss", "measured_loss_sigma", "booked_loss", "difference"]
    {
        assert!(point[key].is_f64(), "{key}");
    }
    assert_eq!(point["verdict"], "disagrees");
    for (term, unit) in [("constant", "watts"), ("linear", "volts"), ("quadratic", "ohms")] {
        assert!(json["remainder"][term][unit].is_f64() && json["remainder"][term]["sigma"].is_f64());
    }
    Ok(())
}
