//! Ratings: what a solved point asks of each part, held against its data sheet and the budget's derating.

use std::fmt::{self, Display};

use crate::budget::{Budget, Derating};
use crate::findings::{Finding, Severity};
use crate::fitted::{Kind, Stage};
use crate::ledger::Slot;
use crate::loss::esr::{self, End};
use crate::model::{Prepared, Solved};
use crate::parts::capacitor::Bank;
use crate::printable::printable;
use crate::report::number::{Form, quantity, show};
use crate::sheet::{CapacitorSheet, Datum, DiodeSheet, InductorSheet, MosfetSheet};
use crate::stage::{Circuit, Placed, RectifierSheet, StageSheet, SwitchedSheet};
use crate::units::Dimension as D;
use crate::waveform::{Mode, Waveform};

/// Temperature above which a number is no result, °C.
pub const BEYOND_BELIEF: f64 = 300.0;

/// What a rating is called and what it is held against.
struct Rating<'a> {
    slot: Slot,
    /// Kind of finding when the rating itself is exceeded, and when only the derating is.
    kinds: [&'static str; 2],
    /// What is stressed: "V_IN across the high side".
    what: &'a dyn Display,
    /// Key of the rating.
    key: &'a dyn Display,
    stress: f64,
    limit: f64,
    /// Share of the limit that may be used.
    share: f64,
    dimension: D,
}

/// What is stressed of a part of a bank; put into words only when it is asked for.
struct OfPart<'a> {
    name: &'a str,
    what: &'static str,
}

impl Display for OfPart<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}: {}", printable(self.name), self.what)
    }
}

struct Checker<'a> {
    findings: Vec<Finding>,
    derating: &'a Derating,
}

impl Checker<'_> {
    fn rating(&mut self, rating: &Rating<'_>) {
        let Rating { slot, kinds, what, key, stress, limit, share, dimension } = *rating;
        let text = |of: &str| {
            format!(
                "{what} {} is above {of}{key} {}",
                quantity(stress, dimension),
                quantity(limit, dimension)
            )
        };
        if stress > limit {
            self.findings.push(Finding::new(Severity::Critical, kinds[0], slot, text("")));
        } else if stress > share * limit {
            let of = format!("{:.0} % of ", 100.0 * share);
            self.findings.push(Finding::new(Severity::Warning, kinds[1], slot, text(&of)));
        }
    }

    fn voltage(&mut self, slot: Slot, what: &dyn Display, key: &str, stress: f64, limit: &Datum) {
        self.rating(&Rating {
            slot,
            kinds: ["voltage_rating", "voltage_derating"],
            what,
            key: &key,
            stress,
            limit: limit.value,
            share: self.derating.voltage,
            dimension: D::Voltage,
        });
    }

    fn current(&mut self, slot: Slot, what: &str, key: &str, stress: f64, limit: Option<&Datum>) {
        let Some(limit) = limit else { return };
        self.rating(&Rating {
            slot,
            kinds: ["current_rating", "current_derating"],
            what: &what,
            key: &key,
            stress,
            limit: limit.value,
            share: 1.0,
            dimension: D::Current,
        });
    }

    fn junction(&mut self, slot: Slot, solved: &Solved, key: &str, limit: Option<&Datum>) {
        let (Some(t), Some(limit)) = (solved.temperatures[slot.index()], limit) else { return };
        if solved.held[slot.index()] {
            return;
        }
        let margin = limit.value - t;
        if margin < 0.0 {
            let text = format!(
                "{} is above {key} {}",
                show(t, Form::Result(D::Temperature)),
                quantity(limit.value, D::Temperature)
            );
            self.findings.push(Finding::new(Severity::Critical, "junction_rating", slot, text));
        } else if margin < self.derating.junction_margin {
            let text = format!(
                "{} leaves {margin:.1} K to {key} {}, less than {:.0} K",
                show(t, Form::Result(D::Temperature)),
                quantity(limit.value, D::Temperature),
                self.derating.junction_margin
            );
            self.findings.push(Finding::new(Severity::Warning, "junction_margin", slot, text));
        }
    }
}

/// Findings of a solved point, most severe first.
pub fn check(sheet: &StageSheet, stage: &Stage, budget: &Budget, solved: &Solved) -> Vec<Finding> {
    let mut checker = Checker { findings: Vec::new(), derating: &budget.derating };
    match (&sheet.circuit, &stage.kind) {
        (Circuit::Linear(regulator), _) => {
            let (sheet, v_in) = (&regulator.sheet, solved.point.input_voltage);
            checker.voltage(Slot::Regulator, &"V_IN", "v_in_max", v_in, &sheet.v_in_max);
            let each = solved.point.load / f64::from(regulator.count);
            checker.current(Slot::Regulator, "load", "i_out_max", each, Some(&sheet.i_out_max));
            checker.junction(Slot::Regulator, solved, "t_j_max", Some(&sheet.t_j_max));
        }
        (Circuit::Switched(sheet), Kind::Switched(switched)) => {
            if let Some(waveform) = &solved.waveform {
                let prepared = Prepared::new(switched, solved.output_voltage, solved.point);
                switched_stage(&mut checker, sheet, &prepared, solved, waveform);
            }
        }
        _ => {}
    }
    for slot in crate::ledger::ALL_SLOTS {
        if solved.temperatures[slot.index()].is_some_and(|t| t > BEYOND_BELIEF) {
            let text = "settles above 300 °C: no number of this point is a result".to_owned();
            checker.findings.insert(0, Finding::new(Severity::Critical, "beyond_belief", slot, text));
        }
    }
    checker.findings.sort_by_key(|finding| std::cmp::Reverse(finding.severity));
    checker.findings
}

/// Smallest distance of any part with a temperature rating and a thermal resistance to that rating, K, and its slot.
pub fn junction_margin(sheet: &StageSheet, solved: &Solved) -> Option<(Slot, f64)> {
    let known = temperature_limits(sheet).into_iter().filter(|(slot, _)| !solved.held[slot.index()]);
    let margins = known.filter_map(|(slot, limit)| {
        solved.temperatures[slot.index()].map(|temperature| (slot, limit - temperature))
    });
    margins.min_by(|a, b| a.1.total_cmp(&b.1))
}

/// Temperature ratings of a stage by slot, °C.
pub fn temperature_limits(sheet: &StageSheet) -> Vec<(Slot, f64)> {
    match &sheet.circuit {
        Circuit::Linear(regulator) => vec![(Slot::Regulator, regulator.sheet.t_j_max.value)],
        Circuit::Switched(stage) => {
            let mut limits = vec![(Slot::HighSide, stage.high_side.sheet.t_j_max.value)];
            match &stage.rectifier {
                RectifierSheet::Synchronous { low_side, parallel_schottky } => {
                    limits.push((Slot::LowSide, low_side.sheet.t_j_max.value));
                    limits.extend(
                        parallel_schottky.iter().map(|d| (Slot::ParallelSchottky, d.sheet.t_j_max.value)),
                    );
                }
                RectifierSheet::Diode { freewheel_diode } => {
                    limits.push((Slot::FreewheelDiode, freewheel_diode.sheet.t_j_max.value));
                }
            }
            limits.extend(stage.inductor.sheet.t_max.iter().map(|t| (Slot::Inductor, t.value)));
            limits.extend(stage.controller.sheet.t_j_max.iter().map(|t| (Slot::Controller, t.value)));
            limits
        }
    }
}

fn switched_stage(
    checker: &mut Checker<'_>,
    sheet: &SwitchedSheet,
    prepared: &Prepared<'_>,
    solved: &Solved,
    waveform: &Waveform,
) {
    let (v_in, load) = (solved.point.input_voltage, solved.point.load);
    let drive = &prepared.drive;
    let high = (&sheet.high_side, drive.v_high, (waveform.duty * waveform.mean_square).sqrt());
    mosfet(checker, Slot::HighSide, high, v_in, solved);
    match &sheet.rectifier {
        RectifierSheet::Synchronous { low_side, parallel_schottky } => {
            let rms = (waveform.off_duty * waveform.mean_square).sqrt();
            mosfet(checker, Slot::LowSide, (low_side, drive.v_low, rms), v_in, solved);
            if let Some(placed) = parallel_schottky {
                diode(checker, Slot::ParallelSchottky, placed, v_in, 0.0, solved);
            }
        }
        RectifierSheet::Diode { freewheel_diode } => {
            let mean = waveform.off_duty * 0.5 * (waveform.valley + waveform.peak);
            diode(checker, Slot::FreewheelDiode, freewheel_diode, v_in, mean, solved);
        }
    }
    inductor(checker, &sheet.inductor, waveform, solved);
    let ends = [
        (Slot::InputCapacitors, &sheet.input_capacitors, &prepared.stage.input_bank, End::Input, v_in),
        (
            Slot::OutputCapacitors,
            &sheet.output_capacitors,
            &prepared.stage.output_bank,
            End::Output,
            prepared.v_out,
        ),
    ];
    for (slot, placed, bank, end, voltage) in ends {
        let mean_square = match end {
            End::Input => waveform.input_capacitor_square(load),
            End::Output => waveform.output_capacitor_square(load),
        };
        capacitors(checker, slot, placed, voltage, rms_each(bank, end, waveform, mean_square));
    }
    let controller = &sheet.controller.sheet;
    checker.voltage(Slot::Controller, &"V_IN", "v_in_max", v_in, &controller.v_in_max);
    checker.junction(Slot::Controller, solved, "t_j_max", controller.t_j_max.as_ref());
    if drive.v_low < prepared.stage.controller.v_drive {
        let text = format!("the drive voltage is cut to V_IN, {}", quantity(drive.v_low, D::Voltage));
        checker.findings.push(Finding::new(Severity::Warning, "drive_cut", Slot::Controller, text));
    }
    if waveform.mode == Mode::PulseSkipping && prepared.stage.skip_peak > 0.0 {
        let temperatures = crate::heat::nodes_of(prepared, solved);
        let ripple = Waveform::continuous(&prepared.current_path(&temperatures)).map_or(0.0, |w| w.ripple());
        if prepared.stage.skip_peak > ripple {
            let text = format!(
                "the stated peak {} is above the ripple {}: the border to continuous mode is abrupt",
                quantity(prepared.stage.skip_peak, D::Current),
                quantity(ripple, D::Current)
            );
            checker.findings.push(Finding::new(
                Severity::Note,
                "skip_peak_above_ripple",
                Slot::Controller,
                text,
            ));
        }
    }
}

/// RMS current of each capacitor of every kind, A.
fn rms_each(bank: &Bank, end: End, waveform: &Waveform, mean_square: f64) -> impl Iterator<Item = f64> {
    let shares = match bank.kinds.as_slice() {
        [_] => Vec::new(),
        _ => esr::shares(bank, end, waveform, mean_square),
    };
    let square = move |kind: usize| shares.get(kind).map_or(mean_square, |share| share.mean_square);
    bank.kinds.iter().enumerate().map(move |(kind, of)| square(kind).sqrt() / of.n)
}

fn mosfet(
    checker: &mut Checker<'_>,
    slot: Slot,
    (placed, v_gate, rms): (&Placed<MosfetSheet>, f64, f64),
    v_in: f64,
    solved: &Solved,
) {
    let sheet = &placed.sheet;
    checker.voltage(slot, &"V_IN", "v_ds_max", v_in, &sheet.v_ds_max);
    checker.rating(&Rating {
        slot,
        kinds: ["gate_voltage_rating", "gate_voltage_derating"],
        what: &"gate voltage",
        key: &"v_gs_max",
        stress: v_gate,
        limit: sheet.v_gs_max.value,
        share: checker.derating.gate_voltage,
        dimension: D::Voltage,
    });
    checker.current(slot, "RMS current", "i_d_max", rms / f64::from(placed.count), sheet.i_d_max.as_ref());
    checker.junction(slot, solved, "t_j_max", Some(&sheet.t_j_max));
    let specified = sheet.r_ds_on.iter().filter_map(|point| point.condition("v_gs"));
    let lowest = specified.fold(f64::INFINITY, f64::min);
    if v_gate < lowest {
        let text = format!(
            "r_ds_on is not specified at this drive voltage: {} at the gate, lowest point {}",
            quantity(v_gate, D::Voltage),
            quantity(lowest, D::Voltage)
        );
        checker.findings.push(Finding::new(Severity::Warning, "drive_not_specified", slot, text));
    }
    if v_gate < sheet.v_gs_plateau.value {
        let text = format!(
            "{} at the gate is below the plateau {}: the channel is not fully on",
            quantity(v_gate, D::Voltage),
            quantity(sheet.v_gs_plateau.value, D::Voltage)
        );
        checker.findings.push(Finding::new(Severity::Critical, "drive_below_plateau", slot, text));
    }
}

fn diode(
    checker: &mut Checker<'_>,
    slot: Slot,
    placed: &Placed<DiodeSheet>,
    v_in: f64,
    mean: f64,
    solved: &Solved,
) {
    let sheet = &placed.sheet;
    checker.voltage(slot, &"V_IN", "v_rrm", v_in, &sheet.v_rrm);
    let each = mean / f64::from(placed.count);
    checker.current(slot, "mean current", "i_f_max", each, Some(&sheet.i_f_max));
    checker.junction(slot, solved, "t_j_max", Some(&sheet.t_j_max));
}

fn inductor(checker: &mut Checker<'_>, placed: &Placed<InductorSheet>, waveform: &Waveform, solved: &Solved) {
    let (sheet, count) = (&placed.sheet, f64::from(placed.count));
    if let Some((limit, drop)) = saturation_current(sheet) {
        checker.rating(&Rating {
            slot: Slot::Inductor,
            kinds: ["saturation", "saturation_margin"],
            what: &"peak current",
            key: &format_args!("the current for {:.0} % drop,", 100.0 * drop),
            stress: waveform.peak / count,
            limit,
            share: checker.derating.saturation,
            dimension: D::Current,
        });
    }
    let rms = waveform.inductor_square().sqrt() / count;
    checker.current(Slot::Inductor, "RMS current", "i_rms_max", rms, sheet.i_rms_max.as_ref());
    checker.junction(Slot::Inductor, solved, "t_max", sheet.t_max.as_ref());
}

/// Current at which the inductance has dropped, and by how much: as stated, else the last point of the curve.
pub fn saturation_current(sheet: &InductorSheet) -> Option<(f64, f64)> {
    if let Some(saturation) = &sheet.saturation {
        return Some((saturation.i.value, saturation.drop.value));
    }
    let last = sheet.inductance_curve.iter().max_by(|a, b| a.i.value.total_cmp(&b.i.value))?;
    Some((last.i.value, 1.0 - last.l.value / sheet.inductance.value))
}

fn capacitors(
    checker: &mut Checker<'_>,
    slot: Slot,
    bank: &[Placed<CapacitorSheet>],
    voltage: f64,
    rms_each: impl Iterator<Item = f64>,
) {
    for (placed, rms) in bank.iter().zip(rms_each) {
        let of = |what| OfPart { name: &placed.name, what };
        checker.voltage(slot, &of("voltage"), "v_max", voltage, &placed.sheet.v_max);
        if let Some(limit) = &placed.sheet.i_rms_max {
            checker.rating(&Rating {
                slot,
                kinds: ["ripple_current_rating", "ripple_current_derating"],
                what: &of("ripple current"),
                key: &"i_rms_max",
                stress: rms,
                limit: limit.value,
                share: checker.derating.ripple_current,
                dimension: D::Current,
            });
        }
    }
}
