//! Loss mechanisms: one file each, pure functions that return their named terms with the watts.

pub mod ac_winding;
pub mod bias;
pub mod conduction;
pub mod copper;
pub mod core;
pub mod dead_time;
pub mod esr;
pub mod gate_drive;
pub mod ground_current;
pub mod leakage;
pub mod output_charge;
pub mod overlap;
pub mod pass;
pub mod recovery;
pub mod ringing;
pub mod sense;
pub mod snubber;
pub mod winding;
