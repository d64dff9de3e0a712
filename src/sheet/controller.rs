//! Controller with its gate drivers: the keys of its data sheet.

use super::common::{Descriptive, PRICE};
use super::datum::Datum;
use super::edge_times::{EDGE_TIMES, EdgeTimes};
use super::form::{Choice, Faults, Form, Key, KeyVisitor, Need};
use crate::units::Dimension as D;

/// A controller as its data sheet states it.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct ControllerSheet {
    /// `about`, `source`, `together`.
    pub descriptive: Descriptive,
    /// Gate drive voltage, V.
    pub v_drive: Datum,
    /// Drop of the bootstrap path, V.
    pub v_boot_drop: Option<Datum>,
    /// High-side driver.
    pub high_side: Driver,
    /// Low-side driver; a diode stage needs none.
    pub low_side: Option<Driver>,
    /// Dead times; a diode stage has none.
    pub dead_time: Option<DeadTime>,
    /// Where the drive power comes from.
    pub drive_supply: DriveSupply,
    /// Non-switching supply current, A.
    pub i_q: Datum,
    /// Supply current while asleep between pulses, A.
    pub i_q_sleep: Option<Datum>,
    /// Shortest on-time, s.
    pub t_on_min: Option<Datum>,
    /// Shortest off-time, s.
    pub t_off_min: Option<Datum>,
    /// Largest input voltage, V.
    pub v_in_max: Datum,
    /// Thermal resistance junction to ambient, K/W.
    pub r_th_ja: Option<Datum>,
    /// Largest junction temperature, °C.
    pub t_j_max: Option<Datum>,
    /// Price of one piece.
    pub price: Option<Datum>,
}

const V_DRIVE: Key = Key::new("v_drive", D::Voltage, "gate drive voltage").sane(2.0, 20.0).example("5 V");
const V_BOOT_DROP: Key = Key::new("v_boot_drop", D::Voltage, "drop of the bootstrap path")
    .zero()
    .sane(0.0, 2.0)
    .absent("0 V assumed when absent")
    .example("0.3 V")
    .starter();
const HIGH_SIDE: Key =
    Key::new("high_side", D::Resistance, "high-side driver: r_source and r_sink, or i_source and i_sink");
const LOW_SIDE: Key =
    Key::new("low_side", D::Resistance, "low-side driver; a diode stage needs none").starter();
const DEAD_TIME: Key = Key::new("dead_time", D::Time, "dead times; a diode stage has none").starter();
const DRIVE_SUPPLY: Key = Key::new(
    "drive_supply",
    D::Number,
    "where the drive power comes from: input, output, or {external: {efficiency: 90 %}}",
)
.example("input");
const I_Q: Key =
    Key::new("i_q", D::Current, "supply current without switching").zero().sane(0.0, 0.1).example("1.2 mA");
const I_Q_SLEEP: Key = Key::new("i_q_sleep", D::Current, "supply current asleep between pulses")
    .zero()
    .sane(0.0, 0.05)
    .absent("i_q at all times when absent")
    .example("60 µA")
    .starter();
const T_ON_MIN: Key =
    Key::new("t_on_min", D::Time, "shortest on-time").zero().sane(1e-9, 1e-5).example("60 ns").starter();
const T_OFF_MIN: Key =
    Key::new("t_off_min", D::Time, "shortest off-time").zero().sane(1e-9, 1e-5).example("120 ns").starter();
const V_IN_MAX: Key = Key::new("v_in_max", D::Voltage, "input voltage rating").sane(2.0, 1e3).example("42 V");
const R_TH_JA: Key = Key::new("r_th_ja", D::ThermalResistance, "junction to ambient")
    .sane(1.0, 500.0)
    .absent("its temperature is not computed when absent")
    .example("40 K/W")
    .starter();
const T_J_MAX: Key = Key::new("t_j_max", D::Temperature, "junction temperature rating, with r_th_ja")
    .sane(70.0, 250.0)
    .example("125 °C")
    .starter();

impl Form for ControllerSheet {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        self.descriptive.keys(v);
        v.required(&V_DRIVE, &mut self.v_drive);
        v.optional(&V_BOOT_DROP, &mut self.v_boot_drop);
        v.form(&HIGH_SIDE, &mut self.high_side);
        v.optional_form(&LOW_SIDE, &mut self.low_side);
        v.optional_form(&DEAD_TIME, &mut self.dead_time);
        v.choice(&DRIVE_SUPPLY, Need::Required, &mut self.drive_supply);
        v.required(&I_Q, &mut self.i_q);
        v.optional(&I_Q_SLEEP, &mut self.i_q_sleep);
        v.optional(&T_ON_MIN, &mut self.t_on_min);
        v.optional(&T_OFF_MIN, &mut self.t_off_min);
        v.required(&V_IN_MAX, &mut self.v_in_max);
        v.optional(&R_TH_JA, &mut self.r_th_ja);
        v.optional(&T_J_MAX, &mut self.t_j_max);
        v.optional(&PRICE, &mut self.price);
    }

    fn cross_check(&self, faults: &mut Faults) {
        self.high_side.check("high_side", faults);
        if let Some(low_side) = &self.low_side {
            low_side.check("low_side", faults);
        }
        if let Some(drop) = &self.v_boot_drop
            && drop.value >= self.v_drive.value
        {
            faults.error(
                "v_boot_drop",
                "takes the whole drive voltage",
                "it lies below v_drive, often 0.1 to 0.5 V",
            );
        }
        if let DriveSupply::External(external) = &self.drive_supply
            && external.efficiency.value > 1.0
        {
            faults.error(
                "drive_supply.external.efficiency",
                "is above 100 %",
                "no supply gives more than it takes",
            );
        }
        if let Some(sleep) = &self.i_q_sleep
            && sleep.value > self.i_q.value
        {
            faults.warn("i_q_sleep", "is above i_q", "the sleep current is the smaller of the two");
        }
        if self.r_th_ja.is_some() && self.t_j_max.is_none() {
            faults.warn("r_th_ja", "stands without t_j_max, so its margin is unknown", "add t_j_max");
        }
    }
}

/// A gate driver by its output resistances or its peak currents.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Driver {
    /// Resistance while charging the gate, Ω.
    pub r_source: Option<Datum>,
    /// Resistance while discharging the gate, Ω.
    pub r_sink: Option<Datum>,
    /// Peak current while charging, A, instead of `r_source`.
    pub i_source: Option<Datum>,
    /// Peak current while discharging, A, instead of `r_sink`.
    pub i_sink: Option<Datum>,
    /// Measured edge times.
    pub edge_times: Option<EdgeTimes>,
}

const R_SOURCE: Key = Key::new("r_source", D::Resistance, "output resistance while charging; or i_source")
    .zero()
    .sane(0.05, 100.0)
    .example("1.5 Ω");
const R_SINK: Key = Key::new("r_sink", D::Resistance, "output resistance while discharging; or i_sink")
    .zero()
    .sane(0.05, 100.0)
    .example("0.9 Ω");
const I_SOURCE: Key =
    Key::new("i_source", D::Current, "peak current while charging (r = v_drive / i)").sane(0.01, 30.0);
const I_SINK: Key =
    Key::new("i_sink", D::Current, "peak current while discharging (r = v_drive / i)").sane(0.01, 30.0);

impl Form for Driver {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.optional(&R_SOURCE, &mut self.r_source);
        v.optional(&R_SINK, &mut self.r_sink);
        v.optional(&I_SOURCE, &mut self.i_source);
        v.optional(&I_SINK, &mut self.i_sink);
        v.optional_form(&EDGE_TIMES, &mut self.edge_times);
    }
}

impl Driver {
    fn check(&self, name: &str, faults: &mut Faults) {
        let pairs = [
            ("r_source", &self.r_source, "i_source", &self.i_source),
            ("r_sink", &self.r_sink, "i_sink", &self.i_sink),
        ];
        for (r_name, r, i_name, i) in pairs {
            match (r, i) {
                (None, None) => faults.error(
                    name,
                    format!("neither {r_name} nor {i_name} is given"),
                    format!("add {r_name}, or {i_name} when the data sheet prints a peak current"),
                ),
                (Some(_), Some(_)) => faults.error(
                    format!("{name}.{i_name}"),
                    format!("{r_name} and {i_name} are both given"),
                    format!("keep {r_name}"),
                ),
                _ => {}
            }
        }
    }

    /// Resistance while charging the gate, Ω; v_drive / i_source when only the peak current is given.
    pub fn source_resistance(&self, v_drive: f64) -> f64 {
        resistance(&self.r_source, &self.i_source, v_drive)
    }

    /// Resistance while discharging the gate, Ω; v_drive / i_sink when only the peak current is given.
    pub fn sink_resistance(&self, v_drive: f64) -> f64 {
        resistance(&self.r_sink, &self.i_sink, v_drive)
    }

    /// True when a resistance is derived from a peak current.
    pub fn is_estimated(&self) -> bool {
        self.i_source.is_some() || self.i_sink.is_some()
    }
}

fn resistance(r: &Option<Datum>, i: &Option<Datum>, v_drive: f64) -> f64 {
    match (r, i) {
        (Some(r), _) => r.value,
        (None, Some(i)) => v_drive / i.value,
        (None, None) => 0.0,
    }
}

/// Dead times of a synchronous stage.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct DeadTime {
    /// From high-side turn-off to low-side turn-on, s.
    pub after_high_side: Datum,
    /// From low-side turn-off to high-side turn-on, s.
    pub before_high_side: Datum,
    /// True when the driver waits for the node to fall.
    pub adaptive: Option<bool>,
}

const AFTER_HIGH_SIDE: Key =
    Key::new("after_high_side", D::Time, "from high-side turn-off to low-side turn-on")
        .zero()
        .sane(0.0, 1e-6)
        .example("20 ns");
const BEFORE_HIGH_SIDE: Key =
    Key::new("before_high_side", D::Time, "from low-side turn-off to high-side turn-on")
        .zero()
        .sane(0.0, 1e-6)
        .example("25 ns");
const ADAPTIVE: Key = Key::new("adaptive", D::Number, "waits for the node to fall")
    .absent("false when absent")
    .example("false");

impl Form for DeadTime {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.required(&AFTER_HIGH_SIDE, &mut self.after_high_side);
        v.required(&BEFORE_HIGH_SIDE, &mut self.before_high_side);
        v.flag(&ADAPTIVE, &mut self.adaptive);
    }
}

/// Where the drive power comes from.
#[derive(Clone, Debug, Default, PartialEq)]
pub enum DriveSupply {
    /// A linear regulator from the input.
    #[default]
    Input,
    /// The output, when it is high enough for the drive voltage; else the input.
    Output,
    /// A separate rail made with an efficiency.
    External(External),
}

/// A separate drive rail.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct External {
    /// Efficiency of whatever makes the drive rail.
    pub efficiency: Datum,
}

const EFFICIENCY: Key =
    Key::new("efficiency", D::Ratio, "efficiency of the drive rail").sane(0.3, 1.0).example("90 %");

impl Form for External {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.required(&EFFICIENCY, &mut self.efficiency);
    }
}

impl Choice for DriveSupply {
    fn options(&self) -> &'static [(&'static str, bool)] {
        &[("input", false), ("output", false), ("external", true)]
    }

    fn pick(&mut self, option: usize) -> Option<&mut dyn Form> {
        *self = match option {
            0 => DriveSupply::Input,
            1 => DriveSupply::Output,
            _ => DriveSupply::External(External::default()),
        };
        Choice::get(self)
    }

    fn get(&mut self) -> Option<&mut dyn Form> {
        match self {
            DriveSupply::External(external) => Some(external),
            _ => None,
        }
    }
}
