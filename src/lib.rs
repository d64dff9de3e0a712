//! lossbook books every watt lost in a step-down rail to one part and one mechanism.

pub mod budget;
pub mod files;
pub mod fit;
pub mod grid;
pub mod input;
pub mod ledger;
pub mod sheet;
pub mod stage;
pub mod units;
