//! Inductor: the keys of its data sheet.

use super::common::{Descriptive, PRICE, distinct};
use super::datum::Datum;
use super::form::{Faults, Form, Key, KeyVisitor, Need};
use crate::units::Dimension as D;

/// An inductor as its data sheet states it.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct InductorSheet {
    /// `about`, `source`, `together`.
    pub descriptive: Descriptive,
    /// Inductance at no current, H.
    pub inductance: Datum,
    /// Drop of the inductance at one current.
    pub saturation: Option<Saturation>,
    /// Inductance against current, instead of `saturation`.
    pub inductance_curve: Vec<InductancePoint>,
    /// Largest RMS current, A.
    pub i_rms_max: Option<Datum>,
    /// Temperature rise as printed.
    pub temperature_rise: Option<TemperatureRise>,
    /// Thermal resistance winding to ambient, K/W.
    pub r_th: Option<Datum>,
    /// Largest temperature, °C.
    pub t_max: Option<Datum>,
    /// Winding resistance at 25 °C, Ω.
    pub dcr: Datum,
    /// Winding resistance at a frequency.
    pub r_ac: Option<AcResistance>,
    /// Steinmetz core data or a material table.
    pub core: Option<Core>,
    /// Maker's core loss points.
    pub core_loss: Vec<CoreLossPoint>,
    /// Price of one piece.
    pub price: Option<Datum>,
}

const INDUCTANCE: Key = Key::new("inductance", D::Inductance, "inductance at no current")
    .sane(1e-8, 1e-2)
    .example("{typ: 3.3 µH, min: 2.64 µH, max: 3.96 µH}");
const SATURATION: Key =
    Key::new("saturation", D::Current, "current at which the inductance has dropped; or inductance_curve")
        .starter();
const INDUCTANCE_CURVE: Key =
    Key::new("inductance_curve", D::Inductance, "inductance against current, instead of saturation")
        .example("[{i: 0 A, l: 3.3 µH}, {i: 16 A, l: 2.3 µH}]");
const I_RMS_MAX: Key =
    Key::new("i_rms_max", D::Current, "RMS current rating").sane(0.01, 500.0).example("12 A").starter();
const TEMPERATURE_RISE: Key = Key::new(
    "temperature_rise",
    D::TemperatureDifference,
    "rise at a current as printed; gives r_th when r_th is absent",
)
.starter();
const R_TH: Key =
    Key::new("r_th", D::ThermalResistance, "winding to ambient").sane(0.5, 1000.0).example("30 K/W");
const T_MAX: Key =
    Key::new("t_max", D::Temperature, "temperature rating").sane(60.0, 250.0).example("125 °C").starter();
const DCR: Key = Key::new("dcr", D::Resistance, "winding resistance at 25 °C")
    .sane(1e-5, 20.0)
    .example("{typ: 5.5 mΩ, max: 6.1 mΩ}");
const R_AC: Key = Key::new("r_ac", D::Resistance, "winding resistance at a frequency")
    .absent("AC winding loss not modelled when absent")
    .starter();
const CORE: Key = Key::new(
    "core",
    D::PowerDensity,
    "core material: Steinmetz k, alpha, beta in SI, or a table; or core_loss",
)
.absent("core loss not modelled when core and core_loss are absent")
.starter();
const CORE_LOSS: Key =
    Key::new("core_loss", D::Power, "maker's core loss points at D = 1/2, three or more, instead of core").example("[{frequency: 300 kHz, ripple: 2 A, loss: 40 mW}, {frequency: 300 kHz, ripple: 4 A, loss: 220 mW}, {frequency: 500 kHz, ripple: 2 A, loss: 85 mW}]");

impl Form for InductorSheet {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        self.descriptive.keys(v);
        v.required(&INDUCTANCE, &mut self.inductance);
        v.optional_form(&SATURATION, &mut self.saturation);
        v.forms(&INDUCTANCE_CURVE, Need::Optional, &mut self.inductance_curve);
        v.optional(&I_RMS_MAX, &mut self.i_rms_max);
        v.optional_form(&TEMPERATURE_RISE, &mut self.temperature_rise);
        v.optional(&R_TH, &mut self.r_th);
        v.optional(&T_MAX, &mut self.t_max);
        v.required(&DCR, &mut self.dcr);
        v.optional_form(&R_AC, &mut self.r_ac);
        v.optional_form(&CORE, &mut self.core);
        v.forms(&CORE_LOSS, Need::Optional, &mut self.core_loss);
        v.optional(&PRICE, &mut self.price);
    }

    fn cross_check(&self, faults: &mut Faults) {
        match (&self.saturation, self.inductance_curve.is_empty()) {
            (None, true) => faults.error(
                "inductance",
                "neither saturation nor inductance_curve is given",
                "add `saturation: {i: 16 A, drop: 30 %}` from the data sheet",
            ),
            (Some(_), false) => {
                faults.error(
                    "inductance_curve",
                    "saturation and inductance_curve are both given",
                    "keep one of them",
                );
            }
            _ => {}
        }
        distinct("inductance_curve", "i", self.inductance_curve.iter().map(|point| point.i.value), faults);
        if self.saturation.as_ref().is_some_and(|saturation| saturation.drop.value >= 1.0) {
            faults.error(
                "saturation.drop",
                "leaves no inductance",
                "give the drop as printed, often 20 % or 30 %",
            );
        }
        if self.temperature_rise.is_none() && self.r_th.is_none() {
            faults.error(
                "temperature_rise",
                "is missing, and r_th too",
                "add `temperature_rise: {i: 12 A, rise: 40 K}` as printed, or r_th",
            );
        }
        if self.core.is_some() && !self.core_loss.is_empty() {
            faults.error("core_loss", "core and core_loss are both given", "keep one of them");
        }
        if !self.core_loss.is_empty() && crate::fit::plane(&self.core_loss_logs()).is_none() {
            faults.error(
                "core_loss",
                "needs three or more points that differ in frequency and in ripple, not all on one line",
                "add a point at another frequency and one at another ripple",
            );
        }
        if let Some(core) = &self.core {
            core.cross_check(faults);
        }
    }
}

impl InductorSheet {
    /// Thermal resistance winding to ambient, K/W: as given, else rise / (DCR i²) of the printed temperature rise.
    pub fn thermal_resistance(&self) -> Option<f64> {
        let from_rise = |rise: &TemperatureRise| rise.rise.value / (self.dcr.value * rise.i.value.powi(2));
        self.r_th.as_ref().map(|r_th| r_th.value).or_else(|| self.temperature_rise.as_ref().map(from_rise))
    }

    /// Maker's loss points as (ln f, ln ripple, ln loss).
    pub fn core_loss_logs(&self) -> Vec<[f64; 3]> {
        let logs = |point: &CoreLossPoint| {
            [point.frequency.value.ln(), point.ripple.value.ln(), point.loss.value.ln()]
        };
        self.core_loss.iter().map(logs).collect()
    }
}

/// Drop of the inductance at a current.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Saturation {
    /// Current, A.
    pub i: Datum,
    /// Relative drop.
    pub drop: Datum,
}

const SATURATION_I: Key = Key::new("i", D::Current, "current").sane(0.01, 1e3).example("16 A");
const SATURATION_DROP: Key =
    Key::new("drop", D::Ratio, "drop of the inductance there").sane(0.05, 0.8).example("30 %");

impl Form for Saturation {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.required(&SATURATION_I, &mut self.i);
        v.required(&SATURATION_DROP, &mut self.drop);
    }
}

/// Inductance at a current.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct InductancePoint {
    /// Current, A.
    pub i: Datum,
    /// Inductance, H.
    pub l: Datum,
}

const CURVE_I: Key = Key::new("i", D::Current, "current").zero().sane(0.0, 1e3).example("0 A");
const CURVE_L: Key = Key::new("l", D::Inductance, "inductance").sane(1e-9, 1e-2).example("3.3 µH");

impl Form for InductancePoint {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.required(&CURVE_I, &mut self.i);
        v.required(&CURVE_L, &mut self.l);
    }
}

/// Temperature rise at a current.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct TemperatureRise {
    /// Current, A.
    pub i: Datum,
    /// Rise over ambient, K.
    pub rise: Datum,
}

const RISE_I: Key = Key::new("i", D::Current, "current").sane(0.01, 1e3).example("12 A");
const RISE_K: Key =
    Key::new("rise", D::TemperatureDifference, "rise over ambient there").sane(1.0, 150.0).example("40 K");

impl Form for TemperatureRise {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.required(&RISE_I, &mut self.i);
        v.required(&RISE_K, &mut self.rise);
    }
}

/// Winding resistance at a frequency.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct AcResistance {
    /// Frequency, Hz.
    pub frequency: Datum,
    /// Resistance, Ω.
    pub r: Datum,
}

const AC_FREQUENCY: Key = Key::new("frequency", D::Frequency, "frequency").sane(1e3, 1e8).example("500 kHz");
const AC_R: Key = Key::new("r", D::Resistance, "resistance there").sane(1e-4, 1e3).example("60 mΩ");

impl Form for AcResistance {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.required(&AC_FREQUENCY, &mut self.frequency);
        v.required(&AC_R, &mut self.r);
    }
}

/// Core data: Steinmetz coefficients or a table of the material, with the core's size.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Core {
    /// Steinmetz k for W/m³, Hz, T.
    pub k: Option<Datum>,
    /// Steinmetz exponent of frequency.
    pub alpha: Option<Datum>,
    /// Steinmetz exponent of flux density.
    pub beta: Option<Datum>,
    /// Material table on sine excitation, instead of k, alpha and beta.
    pub material: Vec<MaterialPoint>,
    /// Effective volume, m³.
    pub volume: Datum,
    /// Effective area, m².
    pub area: Datum,
    /// Turns of the winding.
    pub turns: Datum,
}

const CORE_K: Key =
    Key::new("k", D::Number, "Steinmetz coefficient for W/m³, Hz, T").sane(1e-6, 1e6).example("4.0");
const CORE_ALPHA: Key =
    Key::new("alpha", D::Number, "Steinmetz exponent of frequency").sane(0.9, 2.6).example("1.45");
const CORE_BETA: Key =
    Key::new("beta", D::Number, "Steinmetz exponent of flux density").sane(1.5, 3.5).example("2.45");
const CORE_MATERIAL: Key = Key::new(
    "material",
    D::PowerDensity,
    "sine loss of the material, six or more points, instead of k, alpha, beta",
);
const CORE_VOLUME: Key =
    Key::new("volume", D::Volume, "effective volume").sane(1e-10, 1e-3).example("1200 mm3");
const CORE_AREA: Key = Key::new("area", D::Area, "effective area").sane(1e-7, 1e-2).example("60 mm2");
const CORE_TURNS: Key = Key::new("turns", D::Number, "turns").sane(0.5, 500.0).example("6");

impl Form for Core {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.optional(&CORE_K, &mut self.k);
        v.optional(&CORE_ALPHA, &mut self.alpha);
        v.optional(&CORE_BETA, &mut self.beta);
        v.forms(&CORE_MATERIAL, Need::Optional, &mut self.material);
        v.required(&CORE_VOLUME, &mut self.volume);
        v.required(&CORE_AREA, &mut self.area);
        v.required(&CORE_TURNS, &mut self.turns);
    }

    fn cross_check(&self, faults: &mut Faults) {
        let steinmetz = [&self.k, &self.alpha, &self.beta].iter().filter(|datum| datum.is_some()).count();
        match (steinmetz, self.material.is_empty()) {
            (3, true) => {}
            (0, true) => {
                faults.error("core", "has neither k, alpha, beta nor a material table", "add one of the two")
            }
            (0, false) => {
                if crate::fit::quadric(&self.material_logs()).is_none() {
                    faults.error(
                        "core.material",
                        "needs six or more points at three or more frequencies and amplitudes",
                        "add points; a fit quadratic in ln f and ln B needs them spread in both",
                    );
                }
            }
            (_, true) => faults.error("core", "k, alpha and beta belong together", "give all three"),
            (_, false) => {
                faults.error("core.material", "stands beside k, alpha or beta", "keep one of the two")
            }
        }
    }
}

impl Core {
    /// Material table as (ln f, ln amplitude, ln density).
    pub fn material_logs(&self) -> Vec<[f64; 3]> {
        let logs = |p: &MaterialPoint| [p.frequency.value.ln(), p.amplitude.value.ln(), p.density.value.ln()];
        self.material.iter().map(logs).collect()
    }
}

/// Core loss density of a material on sine excitation.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct MaterialPoint {
    /// Frequency, Hz.
    pub frequency: Datum,
    /// Amplitude of the flux density (half the swing), T.
    pub amplitude: Datum,
    /// Loss density, W/m³.
    pub density: Datum,
}

const MATERIAL_FREQUENCY: Key =
    Key::new("frequency", D::Frequency, "frequency").sane(1e3, 1e8).example("100 kHz");
const MATERIAL_AMPLITUDE: Key =
    Key::new("amplitude", D::FluxDensity, "amplitude of the flux density, half the swing")
        .sane(1e-4, 2.0)
        .example("50 mT");
const MATERIAL_DENSITY: Key =
    Key::new("density", D::PowerDensity, "loss density").sane(1.0, 1e9).example("30 kW/m3");

impl Form for MaterialPoint {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.required(&MATERIAL_FREQUENCY, &mut self.frequency);
        v.required(&MATERIAL_AMPLITUDE, &mut self.amplitude);
        v.required(&MATERIAL_DENSITY, &mut self.density);
    }
}

/// A maker's core loss point at D = 1/2.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct CoreLossPoint {
    /// Frequency, Hz.
    pub frequency: Datum,
    /// Ripple current, peak to peak, A.
    pub ripple: Datum,
    /// Core loss, W.
    pub loss: Datum,
}

const LOSS_FREQUENCY: Key =
    Key::new("frequency", D::Frequency, "frequency").sane(1e3, 1e8).example("300 kHz");
const LOSS_RIPPLE: Key =
    Key::new("ripple", D::Current, "ripple current, peak to peak").sane(1e-3, 500.0).example("2 A");
const LOSS_WATTS: Key = Key::new("loss", D::Power, "core loss").sane(1e-6, 100.0).example("40 mW");

impl Form for CoreLossPoint {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.required(&LOSS_FREQUENCY, &mut self.frequency);
        v.required(&LOSS_RIPPLE, &mut self.ripple);
        v.required(&LOSS_WATTS, &mut self.loss);
    }
}
