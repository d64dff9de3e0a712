//! Copper: the board's paths (E41).

use crate::fitted::Board;
use crate::waveform::Waveform;

/// Copper loss by path, W.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Copper {
    /// R(T)/R(25 °C) of the copper.
    pub hot_ratio: f64,
    /// High-side path, D1 m R.
    pub high_side_path: f64,
    /// Low-side path, D2 m R.
    pub low_side_path: f64,
    /// Output path, I_L,rms² R.
    pub output_path: f64,
    /// Input path with the mean input current, (D1 (I_v + I_p)/2)² R.
    pub input_path: f64,
    /// Load path, I² R.
    pub load_path: f64,
    /// Their sum.
    pub watts: f64,
}

/// Board copper at its temperature (E41). Source: the current each path carries.
#[inline(always)]
pub fn copper(waveform: &Waveform, board: &Board, load: f64, hot_ratio: f64) -> Copper {
    let high_side_path = waveform.duty * waveform.mean_square * board.high_side_path * hot_ratio;
    let low_side_path = waveform.off_duty * waveform.mean_square * board.low_side_path * hot_ratio;
    let output_path = waveform.inductor_square() * board.output_path * hot_ratio;
    let input_path = waveform.mean_input_current().powi(2) * board.input_path * hot_ratio;
    let load_path = load * load * board.load_path * hot_ratio;
    let watts = high_side_path + low_side_path + output_path + input_path + load_path;
    Copper { hot_ratio, high_side_path, low_side_path, output_path, input_path, load_path, watts }
}
