//! Controller and gate drivers as the model sees them.

use crate::sheet::controller::{ControllerSheet, DriveSupply, Driver};

/// A controller with its drivers.
#[derive(Clone, Debug, PartialEq)]
pub struct Controller {
    /// Drive voltage as stated, V.
    pub v_drive: f64,
    /// Drop of the bootstrap path, V.
    pub v_boot_drop: f64,
    /// High-side driver.
    pub high_side: DriverLaw,
    /// Low-side driver; zero resistance in a diode stage, where it drives nothing.
    pub low_side: DriverLaw,
    /// From high-side turn-off to low-side turn-on, s; 0 in a diode stage.
    pub t_1: f64,
    /// From low-side turn-off to high-side turn-on, s; 0 in a diode stage.
    pub t_2: f64,
    /// True when the driver waits for the node to fall.
    pub adaptive: bool,
    /// Where the drive power comes from.
    pub supply: Supply,
    /// Non-switching supply current, A.
    pub i_q: f64,
    /// Supply current asleep, A, when stated.
    pub i_q_sleep: Option<f64>,
    /// Shortest on-time, s.
    pub t_on_min: f64,
    /// Shortest off-time, s.
    pub t_off_min: f64,
    /// Thermal resistance junction to ambient, K/W.
    pub r_th: Option<f64>,
}

/// Output resistances of a driver, Ω.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct DriverLaw {
    /// While charging the gate.
    pub r_source: f64,
    /// While discharging the gate.
    pub r_sink: f64,
}

/// Where the drive power comes from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Supply {
    /// A linear regulator from the input.
    Input,
    /// The output, when it is high enough; else the input.
    Output,
    /// A rail made with this efficiency.
    External(f64),
}

impl Controller {
    /// Reads the controller; a diode stage has neither low-side driver nor dead times.
    pub fn fit(sheet: &ControllerSheet, synchronous: bool) -> Self {
        let v_drive = sheet.v_drive.value;
        let law = |driver: &Driver| DriverLaw {
            r_source: driver.source_resistance(v_drive),
            r_sink: driver.sink_resistance(v_drive),
        };
        let dead_time = sheet.dead_time.as_ref().filter(|_| synchronous);
        let optional = |datum: &Option<crate::sheet::Datum>| datum.as_ref().map(|datum| datum.value);
        Controller {
            v_drive,
            v_boot_drop: optional(&sheet.v_boot_drop).unwrap_or(0.0),
            high_side: law(&sheet.high_side),
            low_side: sheet.low_side.as_ref().filter(|_| synchronous).map(law).unwrap_or_default(),
            t_1: dead_time.map_or(0.0, |dead| dead.after_high_side.value),
            t_2: dead_time.map_or(0.0, |dead| dead.before_high_side.value),
            adaptive: dead_time.is_some_and(|dead| dead.adaptive == Some(true)),
            supply: match &sheet.drive_supply {
                DriveSupply::Input => Supply::Input,
                DriveSupply::Output => Supply::Output,
                DriveSupply::External(external) => Supply::External(external.efficiency.value),
            },
            i_q: sheet.i_q.value,
            i_q_sleep: optional(&sheet.i_q_sleep),
            t_on_min: optional(&sheet.t_on_min).unwrap_or(0.0),
            t_off_min: optional(&sheet.t_off_min).unwrap_or(0.0),
            r_th: optional(&sheet.r_th_ja),
        }
    }
}
