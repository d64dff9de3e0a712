//! lossbook books every watt lost in a step-down rail to one part and one mechanism.

pub mod answer;
pub mod budget;
pub mod compare;
pub mod edges;
pub mod files;
pub mod fit;
pub mod fitted;
pub mod grid;
pub mod heat;
pub mod hints;
pub mod infeasible;
pub mod input;
pub mod ledger;
pub mod loss;
pub mod model;
pub mod parts;
pub mod printable;
pub mod render;
pub mod report;
pub mod sheet;
pub mod stage;
pub mod sweep;
pub mod tabulate;
pub mod units;
pub mod waveform;
