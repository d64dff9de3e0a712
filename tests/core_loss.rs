//! Core loss against measurements: ferrites N87 and 3C90, 25 °C, no bias, sines and triangles of 50 kHz to 500 kHz.
//!
//! Source: extract of the open dataset in the PyPI package mag-net 0.1.0, MIT license, Copyright (c) 2021 Minjie Chen
//! (`data/core-loss-measured.csv`, license beside it). Both forms of a core are fitted on the sines alone and then asked
//! for the triangles, through a stage of the model.

use lossbook::evidence::core::{
    MATERIALS, Measured, at_duty, errors, material_core, measured, sines, steinmetz, steinmetz_core,
    triangles,
};

type Outcome = Result<(), String>;

fn mean(values: &[f64]) -> f64 {
    values.iter().sum::<f64>() / values.len() as f64
}

fn rms(values: &[f64]) -> f64 {
    mean(&values.iter().map(|value| value * value).collect::<Vec<_>>()).sqrt()
}

fn single(material: &str, rows: &[Measured]) -> Result<Vec<f64>, String> {
    Ok(errors(&steinmetz_core(steinmetz(material).ok_or("no fit")?), rows))
}

/// The file as it is: 292 rows.
#[test]
fn all_rows_are_read() {
    let rows = measured();
    assert_eq!(rows.len(), 292);
    for material in MATERIALS {
        assert_eq!(sines(material).len(), 31);
        assert!(triangles(material).len() >= 114);
    }
    assert!(rows.iter().all(|row| row.density > 0.0 && row.amplitude < 0.3 && row.frequency >= 50e3));
}

/// Least squares of SciPy over the same sines: printed to four digits.
#[test]
fn single_exponents_are_those_of_another_fit() -> Outcome {
    for (material, outside) in [("N87", [7.421, 1.3771, 2.5523]), ("3C90", [2.067, 1.4672, 2.6104])] {
        let ours = steinmetz(material).ok_or("no fit")?;
        for (ours, outside) in ours.iter().zip(outside) {
            // half a unit of the last digit of 2.067
            assert!((ours / outside - 1.0).abs() < 2.5e-4, "{material}: {ours} {outside}");
        }
    }
    Ok(())
}

/// The band of the iGSE with one exponent: 20-22 % rms over the triangles, 28 % low at a tenth, 15 % high at one half
/// (calculated outside). Known weakness: if this gets better, the model has changed.
#[test]
fn one_exponent_is_a_band_of_a_fifth() -> Outcome {
    for material in MATERIALS {
        let rows = triangles(material);
        let all = single(material, &rows)?;
        assert!((0.19..0.22).contains(&rms(&all)), "{material}: {}", rms(&all));
        let steep = mean(&single(material, &at_duty(&rows, 0.1))?);
        let even = mean(&single(material, &at_duty(&rows, 0.5))?);
        assert!((-0.30..-0.26).contains(&steep), "{material}: {steep}");
        assert!((0.12..0.18).contains(&even), "{material}: {even}");
    }
    Ok(())
}

/// The material table with the composite waveform hypothesis: below 16 % rms over all triangles, steep ones included, where
/// one exponent gives 20-22 %; a trial reached 12.5-15.6 %.
#[test]
fn a_material_table_is_nearer_everywhere_that_matters() -> Outcome {
    for material in MATERIALS {
        let rows = triangles(material);
        let core = material_core(material);
        let (table, one) = (rms(&errors(&core, &rows)), rms(&single(material, &rows)?));
        println!("{material}: table {table:.4}, one exponent {one:.4}");
        assert!(table < 0.16 && table < 0.85 * one, "{material}: {table} {one}");
        for duty in [0.1, 0.9] {
            let steep = at_duty(&rows, duty);
            let (table, one) = (rms(&errors(&core, &steep)), rms(&single(material, &steep)?));
            println!("{material} at {duty}: table {table:.4}, one exponent {one:.4}");
            assert!(table < 0.16 && table < 0.5 * one, "{material} at {duty}: {table} {one}");
            assert!(mean(&errors(&core, &steep)).abs() < 0.10);
        }
    }
    Ok(())
}

/// The table gives back its own sines: 4-5 % rms is how far the material departs from a quadratic law.
#[test]
fn a_material_table_passes_through_its_points() -> Outcome {
    use lossbook::parts::core::MaterialLaw;
    for material in MATERIALS {
        let logs: Vec<[f64; 3]> = sines(material)
            .iter()
            .map(|row| [row.frequency.ln(), row.amplitude.ln(), row.density.ln()])
            .collect();
        let law = MaterialLaw::fit(&logs, 1.0, 1.0).ok_or("no fit")?;
        let residuals: Vec<f64> = logs.iter().map(|[f, b, p]| law.sine(*f, *b).0 - p).collect();
        assert!(rms(&residuals) < 0.05, "{material}: {}", rms(&residuals));
        // log-linear outside of the data: equal steps give equal ratios
        let (far, b) = (logs.iter().map(|row| row[0]).fold(0.0, f64::max) + 1.0, logs[0][1]);
        let steps = [0.0, 1.0, 2.0].map(|step| law.sine(far + step, b).0);
        assert!((steps[2] - 2.0 * steps[1] + steps[0]).abs() < 1e-9);
    }
    Ok(())
}

/// What the measurements say of the shape, and so must ours: least at one half, alike for D and 1 - D (within 7 % in the
/// measurements; exactly in both laws, which see the same two slopes).
#[test]
fn loss_is_least_for_even_slopes_and_symmetric() -> Outcome {
    use lossbook::evidence::core::triangle_loss;
    for material in MATERIALS {
        let cores = [steinmetz_core(steinmetz(material).ok_or("no fit")?), material_core(material)];
        for core in &cores {
            for (frequency, amplitude) in [(100e3, 0.05), (300e3, 0.02)] {
                let loss = |duty| triangle_loss(core, duty, frequency, amplitude);
                let duties = [0.1, 0.2, 0.3, 0.4, 0.5];
                let losses = duties.map(loss);
                assert!(losses.windows(2).all(|pair| pair[1] < pair[0]), "{material}: {losses:?}");
                for (duty, there) in duties.iter().zip(losses) {
                    assert!((loss(1.0 - duty) / there - 1.0).abs() < 1e-9);
                }
            }
        }
    }
    Ok(())
}
