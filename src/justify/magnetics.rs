//! Entries of the inductor (E31 to E34, E16b).

use super::book::{Book, Measure, PURE, SQUARE_AMPERES};
use super::case::Case;
use super::laws;
use crate::ledger::Account;
use crate::loss::core::Core;
use crate::parts::core::{CoreLaw, MaterialLaw, PowerLaw};
use crate::units::Dimension as D;

const VOLT_SECONDS: Measure = Measure::Unit("V·s");

pub(super) fn derive(case: &Case<'_>, book: &mut Book<'_>) {
    book.entry(Account::InductorWinding);
    let watts = case.heated.winding.watts;
    book.law(&laws::WINDING).step("P_L_winding: inductor, winding", "R_L·I_L²", watts, D::Power);
    ac_winding(case, book);
    core(case, book);
    ringing(case, book);
}

fn ac_winding(case: &Case<'_>, book: &mut Book<'_>) {
    let Some(ac) = &case.heated.ac_winding else { return };
    book.entry(Account::InductorAcWinding);
    book.law(&laws::WINDING);
    book.datum("R_AC", "inductor.r_ac.r", (0.0, D::Resistance, ""));
    book.datum("f_AC", "inductor.r_ac.frequency", (1.0, D::Frequency, ""));
    book.step("I_ΔL²: squared RMS of the ripple", "max(I_L² - I_OUT^2, 0)", ac.ripple_square, SQUARE_AMPERES);
    book.step(
        "R_ΔL: resistance beyond the DC value at the clock, hot",
        "max(R_AC/n_L·√(f_SW/f_AC) - R_DC/n_L, 0)·k_L",
        ac.excess_resistance,
        D::Resistance,
    );
    book.step("P_L_ac_winding: inductor, AC winding", "I_ΔL²·R_ΔL", ac.watts, D::Power);
}

fn core(case: &Case<'_>, book: &mut Book<'_>) {
    let (Some(core), Some(law)) = (&case.heated.core, &case.prepared.stage.inductor.core) else { return };
    book.entry(Account::InductorCore);
    let name = "P_L_core: inductor, core";
    if core.volt_seconds == 0.0 {
        book.law(&laws::CORE).step(&format!("{name}; none without pulses"), "0", core.watts, D::Power);
        return;
    }
    let f = case.f();
    book.law(&laws::CORE).step(
        "λ: volt-seconds of the rising slope",
        &format!("V_ON·D/{f}"),
        core.volt_seconds,
        VOLT_SECONDS,
    );
    match law {
        CoreLaw::Power(law) => power(case, core, law, book),
        CoreLaw::Material(law) => material(case, core, law, book),
    }
    let equation = match law {
        CoreLaw::Power(_) => format!("n_L·K_FE·B_PP^β·{f}^α·(D^(1 - α) + D_2^(1 - α))"),
        CoreLaw::Material(_) => "n_L·V_E·(D·p_1 + D_2·p_2)".into(),
    };
    book.step(name, &equation, core.watts, D::Power);
}

fn power(case: &Case<'_>, core: &Core, law: &PowerLaw, book: &mut Book<'_>) {
    if case.sheet.inductor.sheet.core.is_some() {
        geometry(book);
        for (symbol, key) in [("k_S", "k"), ("α", "alpha"), ("β", "beta")] {
            book.datum(symbol, &format!("inductor.core.{key}"), (0.0, D::Number, ""));
        }
        let gammas = libm::tgamma(0.5 * (law.alpha + 1.0)) / libm::tgamma(0.5 * law.alpha + 1.0);
        book.given("Γ_α", gammas, PURE, "Γ((α + 1)/2)/Γ(α/2 + 1), gamma function");
        book.step("K_FE: core coefficient", "V_E·k_S/(2^β·π^(α - 0.5)·Γ_α)", law.k, PURE);
        book.step("B_PP: flux swing, peak to peak", "λ/(N·A_E)", core.swing, D::FluxDensity);
    } else {
        let points = book.origins.points("inductor.core_loss");
        let origin =
            |what: &str| format!("{what} of the least-squares fit through the maker's points: {points}");
        book.given("K_FE", law.k, PURE, origin("coefficient"));
        book.given("α", law.alpha, PURE, origin("exponent of frequency"));
        book.given("β", law.beta, PURE, origin("exponent of ripple"));
        book.datum("L_0", "inductor.inductance", (0.0, D::Inductance, ""));
        book.law(&laws::CORE_POINTS);
        book.step(
            "B_PP: swing, as the ripple of the unsaturated inductance",
            "λ/L_0",
            core.swing,
            D::Current,
        );
    }
}

fn geometry(book: &mut Book<'_>) {
    book.datum("V_E", "inductor.core.volume", (0.0, D::Volume, ""));
    book.datum("A_E", "inductor.core.area", (0.0, D::Area, ""));
    book.datum("N", "inductor.core.turns", (0.0, D::Number, ""));
}

fn material(case: &Case<'_>, core: &Core, law: &MaterialLaw, book: &mut Book<'_>) {
    geometry(book);
    book.law(&laws::CORE_TABLE);
    book.step("B_PP: flux swing, peak to peak", "λ/(N·A_E)", core.swing, D::FluxDensity);
    let waveform = case.waveform();
    let points = book.origins.points("inductor.core.material");
    for (symbol, duty, words) in [("p_1", waveform.duty, "rising"), ("p_2", waveform.off_duty, "falling")] {
        let density = if duty > 0.0 {
            law.symmetric_triangle(waveform.frequency / (2.0 * duty), 0.5 * core.swing)
        } else {
            0.0
        };
        let origin = format!(
            "loss density of a symmetric triangle of the {words} slope, at f/(2 D) and B_PP/2, quadratic fit in ln f and ln B of: {points}"
        );
        book.given(symbol, density, D::PowerDensity, origin);
    }
}

fn ringing(case: &Case<'_>, book: &mut Book<'_>) {
    book.entry(Account::InductorRinging);
    let ringing = &case.heated.ringing;
    let name = "P_L_ringing: inductor, ringing";
    book.law(&laws::RINGING);
    if case.continuous() {
        book.step(&format!("{name}; none, the node never idles"), "0", ringing.watts, D::Power);
        return;
    }
    book.step(
        "E_RING: energy that rings out each pulse",
        "max(V_NODE·(Q_R·√(V_NODE/V_IN) + Q_OSS_HS·(1 - √((V_IN - V_NODE)/V_IN))) - V_IN·Q_OSS_HS·(1 - √((V_IN - V_NODE)/V_IN)) - Q_R·√(V_NODE/V_IN)·V_NODE/3 + Q_OSS_HS/3·(V_IN - (V_IN - V_NODE)·√((V_IN - V_NODE)/V_IN)), 0)",
        ringing.energy,
        D::Energy,
    );
    book.step(name, &format!("E_RING·{}", case.f()), ringing.watts, D::Power);
}
