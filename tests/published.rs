//! The model against what others have published: every check of `lossbook evidence`, one test a subject, so that a failure
//! names itself. The checks with their sources stand in `src/evidence`, one set for the command, the README and these tests.

use std::collections::BTreeMap;
use std::sync::OnceLock;

use lossbook::evidence::{ALL_SUBJECTS, Bound, Check, Subject, checks};

fn all() -> &'static [Check] {
    static ALL: OnceLock<Vec<Check>> = OnceLock::new();
    ALL.get_or_init(checks)
}

fn subject_holds(subject: Subject, least: usize) {
    let of_subject: Vec<&Check> = all().iter().filter(|check| check.subject == subject).collect();
    assert!(of_subject.len() >= least, "{} checks only", of_subject.len());
    let failures: Vec<String> = of_subject
        .iter()
        .filter(|check| !check.holds())
        .map(|c| format!("{} ({}): outside {}, ours {}, {:?}", c.what, c.source, c.outside, c.ours, c.bound))
        .collect();
    assert!(failures.is_empty(), "{}", failures.join("\n"));
}

#[test]
fn synchronous_stages() {
    subject_holds(Subject::Synchronous, 18);
}

#[test]
fn freewheel_diodes() {
    subject_holds(Subject::Freewheel, 23);
}

#[test]
fn discontinuous_conduction() {
    subject_holds(Subject::Discontinuous, 2);
}

#[test]
fn linear_regulators() {
    subject_holds(Subject::Linear, 11);
}

#[test]
fn lossless_currents() {
    subject_holds(Subject::Currents, 54);
}

#[test]
fn steady_states() {
    subject_holds(Subject::SteadyState, 100);
}

#[test]
fn switching_edges() {
    subject_holds(Subject::Switching, 50);
}

#[test]
fn switch_node() {
    subject_holds(Subject::Node, 24);
}

#[test]
fn heat() {
    subject_holds(Subject::Heat, 11);
}

#[test]
fn copper_and_averages() {
    subject_holds(Subject::Copper, 5);
}

#[test]
fn core_loss() {
    subject_holds(Subject::Core, 32);
}

/// A check that cannot fail proves nothing: each has a source, a reason, a finite outside value that is not zero, and a
/// tolerance that a wrong formula would leave.
#[test]
fn every_check_is_able_to_fail() {
    let mut counts: BTreeMap<Subject, usize> = BTreeMap::new();
    for check in all() {
        *counts.entry(check.subject).or_default() += 1;
        assert!(!check.source.is_empty() && !check.reason.is_empty() && !check.what.is_empty(), "{check:?}");
        assert!(check.outside.is_finite() && check.outside != 0.0, "{check:?}");
        if let Bound::Within(tolerance) = check.bound {
            // a small entry may be judged against a larger one it belongs to, in single comparisons only
            let judged_apart = check.detail;
            assert!(tolerance < if judged_apart { 3.0 } else { 0.21 }, "{check:?}");
        }
        let missing = Check { ours: f64::NAN, ..check.clone() };
        assert!(!missing.holds(), "{missing:?}");
    }
    assert_eq!(counts.len(), ALL_SUBJECTS.len());
}

/// LT8705 data sheet p. 38 prints 0.06 W for its high side: it squares the duty. The model must not agree with that.
#[test]
fn a_printed_slip_is_not_reproduced() {
    let check = all().iter().find(|check| check.source.contains("squares the duty")).expect("the check");
    assert!(check.ours > 0.1, "{check:?}");
}

/// LT8708 data sheet p. 53 prints 64 mW for the output capacitances of both switches, 685 pF each at 25 V and 150 kHz, taking
/// them as linear. Capacitances that fall as v^-1/2 hold twice the charge at that reading and cost 128 mW: a difference of
/// law, not of arithmetic.
#[test]
fn a_linear_output_capacitance_is_half_of_ours() {
    use lossbook::evidence::rig::Rig;
    use lossbook::ledger::Account;
    use lossbook::sheet::Datum;
    let mut rig = Rig::ideal(25.0, 12.0, 5.0, 150e3);
    for side in [&mut rig.high_side, &mut rig.low_side] {
        side.c_oss = Some(Datum::at(685e-12, "v_ds", 25.0));
    }
    let ours = rig.watts(Account::HighSideOutputCharge);
    assert!((ours / 128e-3 - 1.0).abs() < 5e-3, "{ours}");
    // half a unit of the last printed digit of 64 mW, doubled
    assert!((0.5 * ours / 64e-3 - 1.0).abs() < 0.5 / 64.0, "{ours}");
}

/// Common practice: a freewheel diode's share of the loss grows as the output voltage falls.
#[test]
fn a_diode_weighs_more_at_low_output_voltage() {
    use lossbook::evidence::rig::{Rig, coil, diode, switch};
    use lossbook::ledger::Slot;
    let share = |v_out: f64| {
        let mut rig = Rig::ideal(12.0, v_out, 2.0, 300e3);
        rig.high_side = switch(50e-3);
        rig.inductor = coil(1.0, 40e-3);
        rig.diode = Some(diode(&[(2.0, 0.45)]));
        rig.solve().map(|solved| solved.ledger.slot(Slot::FreewheelDiode) / solved.output_power())
    };
    let shares: Vec<f64> = [9.0, 5.0, 3.3, 1.8, 1.2].into_iter().filter_map(|v| share(v).ok()).collect();
    assert_eq!(shares.len(), 5);
    assert!(shares.windows(2).all(|pair| pair[1] > pair[0]), "{shares:?}");
}
