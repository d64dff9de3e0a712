//! The model against time: exact periodic steady states of whole converters, transient solutions of switching cells and of
//! the switch node. Nothing of the model is used in the solvers.
//!
//! The results are recorded in the library, where `lossbook evidence` compares the model with them; here they are computed
//! anew. `LOSSBOOK_RECORD=1 cargo test --test time_domain -- --nocapture` prints them.

#[path = "time_domain/cell.rs"]
mod cell;
#[path = "time_domain/linear.rs"]
mod linear;
#[path = "time_domain/steady.rs"]
mod steady;

use lossbook::evidence::converters::{self, COLUMNS, ELSEWHERE_COLUMNS, computed_elsewhere};
use lossbook::evidence::recorded::{CELLS, CONVERTERS, FAST_CELLS, SWINGS};
use lossbook::evidence::switching;

fn recording() -> bool {
    std::env::var_os("LOSSBOOK_RECORD").is_some()
}

/// Mean, mean of the magnitudes, largest magnitude.
fn summary(values: &[f64]) -> (f64, f64, f64) {
    let n = values.len() as f64;
    let mean = values.iter().sum::<f64>() / n;
    let magnitude = values.iter().map(|v| v.abs()).sum::<f64>() / n;
    let worst = values.iter().fold(0.0, |w: f64, v| w.max(v.abs()));
    (mean, magnitude, worst)
}

/// Source: SciPy matrix exponentials, computed elsewhere; eight printed digits.
#[test]
fn the_solver_agrees_with_another_one() {
    for (converter, outside) in computed_elsewhere() {
        let (exact, _) = steady::steady(&converter);
        for (column, outside) in ELSEWHERE_COLUMNS.into_iter().zip(outside) {
            let difference = exact[column] / outside - 1.0;
            println!("{:30} {:.9} {outside:.9} {difference:+.2e}", COLUMNS[column].0, exact[column]);
            assert!(difference.abs() < 2e-6, "{}: {} {outside}", COLUMNS[column].0, exact[column]);
        }
    }
}

/// The recorded steady states are those of the solver, and its powers balance.
#[test]
fn recorded_steady_states_are_exact() {
    for (place, (converter, recorded)) in CONVERTERS.iter().enumerate() {
        let (exact, balance) = steady::steady(converter);
        if recording() {
            let model = converter.model();
            println!("S {place} {exact:?}");
            println!("  balance {balance:.1e} {:.4?}", converters::differences(&model, &exact));
            continue;
        }
        assert!(balance.abs() < 1e-9 * converter.v_out * converter.load, "{converter:?}: {balance}");
        for (column, (exact, recorded)) in exact.iter().zip(recorded).enumerate() {
            // a valley at zero is a rounding error
            let close = (exact - recorded).abs() <= 1e-6 * recorded.abs().max(1e-6);
            assert!(close, "{converter:?} {}: {exact} {recorded}", COLUMNS[column].0);
        }
    }
}

/// Within 2 % each (3 % for ESR), 0.3 % on the mean over all of duties, peaks, valleys and entries: the drops are taken at the load current.
#[test]
fn conduction_agrees_with_the_exact_steady_state() {
    assert!(CONVERTERS.len() >= 12);
    let mut all = Vec::new();
    for (converter, exact) in CONVERTERS {
        let ours = converter.model();
        for (column, difference) in converters::differences(&ours, exact) {
            let name = COLUMNS[column].0;
            let limit = converters::limit(column);
            assert!(
                difference.abs() <= limit,
                "{}: {name} {difference:+.4}, {ours:?} {exact:?}",
                converter.words()
            );
            all.push(difference);
        }
    }
    let (_, magnitude, worst) = summary(&all);
    println!("{} quantities: mean {magnitude:.5}, worst {worst:.5}", all.len());
    assert!(magnitude <= converters::LIMIT_MEAN, "{magnitude}");
}

/// The recorded energies are those of the solver, whose step is small enough.
#[test]
fn recorded_cells_are_those_of_the_solver() {
    for (place, (own, recorded)) in CELLS.iter().chain(FAST_CELLS).enumerate() {
        let energy = cell::energy(own, cell::STEP);
        if recording() {
            println!(
                "C {place} {energy:.5e} model {:.4} book {:.4}",
                own.model() / energy,
                own.textbook() / energy
            );
            continue;
        }
        assert!((energy / recorded - 1.0).abs() < 1e-3, "{own:?}: {energy} {recorded}");
        if place % 12 == 0 {
            let finer = cell::energy(own, 0.5 * cell::STEP);
            assert!((finer / energy - 1.0).abs() < 1e-3, "{finer} {energy}");
        }
    }
}

/// What the model and the sum that textbooks print are off: mean, mean magnitude, worst.
fn of_cells(cells: &[(switching::Cell, f64)]) -> [(f64, f64, f64); 2] {
    let ours: Vec<f64> = cells.iter().map(|(own, energy)| own.model() / energy - 1.0).collect();
    let book: Vec<f64> = cells.iter().map(|(own, energy)| own.textbook() / energy - 1.0).collect();
    [summary(&ours), summary(&book)]
}

/// Within 20 % each and 5 % on the mean where capacitances follow the model's law and the gate is not very fast; the sum
/// that textbooks print is worse.
#[test]
fn edges_agree_with_transient_solutions() {
    assert!(CELLS.len() >= 20);
    let [(mean, magnitude, worst), (book_mean, book_magnitude, _)] = of_cells(CELLS);
    println!("mean {mean:+.4}, size {magnitude:.4}, worst {worst:.4}; textbook {book_mean:+.4}");
    assert!(worst <= switching::LIMIT && mean.abs() <= switching::LIMIT_MEAN);
    assert!(book_magnitude > 2.0 * magnitude && book_mean.abs() > 2.0 * mean.abs());
}

/// Fast edges and real junctions: the model reads low, because a fast gate must charge itself further while the channel
/// discharges the node, and because a junction of 0.7 V stores more energy for its charge. Still nearer than the sum.
#[test]
fn fast_edges_read_low_but_nearer_than_the_textbook() {
    let [(mean, magnitude, worst), (book_mean, book_magnitude, _)] = of_cells(FAST_CELLS);
    println!("mean {mean:+.4}, size {magnitude:.4}, worst {worst:.4}; textbook {book_mean:+.4}");
    assert!(worst <= switching::LIMIT_FAST && mean.abs() <= switching::LIMIT_FAST_MEAN);
    assert!(book_magnitude > 1.5 * magnitude && book_mean > mean.abs());
}

/// Partial swings either way, the idle node ringing out, and the settled node turned on; differences as a share of the energy
/// of the whole node.
#[test]
fn node_energies_agree_with_transient_solutions() {
    for (place, (own, recorded)) in SWINGS.iter().enumerate() {
        let energy = cell::swing(own);
        let difference = (own.model() - energy) / own.whole_node();
        if recording() {
            println!("W {place} {energy:.5e} model {:.4} of whole {difference:+.4}", own.model() / energy);
            continue;
        }
        assert!((energy / recorded - 1.0).abs() < 1e-3, "{own:?}: {energy} {recorded}");
        assert!(difference.abs() <= own.limit(), "{own:?}: {difference:+.4}");
    }
}
