//! The laws that derivations cite: number in the model's own document, published source, limits of validity.

/// A law with its source.
#[derive(Debug, PartialEq, Eq)]
pub struct Law {
    /// Number in the model's document: "E12".
    pub number: &'static str,
    /// Where it was published, or that it was derived.
    pub source: &'static str,
    /// Where it holds.
    pub limits: &'static str,
}

const fn law(number: &'static str, source: &'static str, limits: &'static str) -> Law {
    Law { number, source, limits }
}

pub(super) const GIVEN: Law = law("", "definition", "");
pub(super) const INDUCTANCE: Law = law(
    "E1",
    "assumption: smooth saturation through the stated drop",
    "a core that saturates smoothly; not below a tenth of the inductance without current",
);
pub(super) const BALANCE: Law = law(
    "E2",
    "volt-second balance, derived; agrees with an exact periodic steady state to 1e-5",
    "continuous conduction; drops taken at the load current",
);
pub(super) const RIPPLE: Law = law("E3", "inductor law, derived", "linear ramps");
pub(super) const RAMP: Law = law("E4", "mean square of a ramp, textbook", "linear ramps");
pub(super) const DISCONTINUOUS: Law = law(
    "E5",
    "charge balance of triangular pulses; maker's form in the LT1376 data sheet p. 11",
    "lossless pulses but for the diode's drop",
);
pub(super) const SKIPPING: Law =
    law("E6", "charge balance, derived", "discontinuous mode with a smallest peak current");
pub(super) const ON_RESISTANCE: Law = law(
    "E10",
    "on-resistance follows the inverse overdrive, textbook",
    "between the data-sheet points; held beyond them",
);
pub(super) const HOT: Law = law(
    "E11",
    "power of the absolute temperature through the data sheet's hot ratio; common practice, LT8705 data sheet p. 26",
    "about -40 °C to the hot point of the data sheet",
);
pub(super) const CHANNEL: Law =
    law("E12", "RMS of a ramp, textbook; without the dead times: derived", "linear ramps");
pub(super) const PLATEAU: Law =
    law("E13", "linear transfer curve through threshold and plateau", "currents near the test current");
pub(super) const JUNCTION: Law =
    law("E14", "junction capacitance falling as v^-1/2, textbook", "voltages well above 1 V");
pub(super) const EDGES: Law = law(
    "E15",
    "gate-charge form: FAN5236 data sheet p. 16 eq. 19-20; RC form of the current edge and source inductance: derived",
    "drive voltage above the plateau, constant inductor current during an edge",
);
pub(super) const NODE: Law = law(
    "E16",
    "derived; two equal devices give V_IN·Q_OSS, the charge form printed with IRF7832",
    "hard turn-on",
);
pub(super) const EARLY: Law = law("E16c", "derived", "fixed dead time");
pub(super) const RINGING: Law =
    law("E16b", "derived; linear capacitances give half C v²", "discontinuous mode");
pub(super) const OVERLAP: Law = law(
    "E17",
    "derived; 0.87 to 1.17 of a transient solution of the switching cell",
    "gate-driven edges with constant inductor current",
);
pub(super) const RECOVERY: Law = law(
    "E18",
    "ADP3162 data sheet eq. 23; printed with IRF7832; exponent 0.5 from memory",
    "continuous mode with a positive valley, no Schottky diode across",
);
pub(super) const DEAD_TIME: Law = law(
    "E19",
    "ISL6314 data sheet eq. 22, which uses peak and valley; mean currents and transit derived",
    "linear ramps",
);
pub(super) const GATE_CHARGE: Law = law(
    "E20",
    "gate charge curve beyond its plateau; MIC2182 data sheet p. 17 for the low side",
    "above the plateau",
);
pub(super) const GATE: Law =
    law("E21", "division of a resistive loss", "the gate settles within each part of the period");
pub(super) const FORWARD: Law =
    law("E26", "ST data sheets: threshold plus slope; three-point Gauss-Legendre rule", "linear ramps");
pub(super) const LEAKAGE: Law =
    law("E27", "ln I_R linear in T between data-sheet points; ST AN869", "below breakdown");
pub(super) const COPPER: Law = law("E30", "IEC 60028, 0.00393 /K at 20 °C", "about -50 °C to 200 °C");
pub(super) const WINDING: Law = law(
    "E31",
    "RMS current through the DC resistance, textbook; skin effect as √f",
    "one winding, sinusoid-like ripple",
);
pub(super) const CORE: Law = law(
    "E32",
    "improved generalised Steinmetz equation, Venkatachalam et al., COMPEL 2002; closed form for a triangle derived",
    "within the range of the core data, no minor loops, no DC bias effect",
);
pub(super) const CORE_POINTS: Law =
    law("E33", "least squares through the maker's points; iGSE duty factor", "near the maker's points");
pub(super) const CORE_TABLE: Law = law(
    "E34",
    "composite waveform hypothesis, Sullivan et al. 2010 (from memory), with the iGSE ratio of triangle and sine",
    "within the material table",
);
pub(super) const BANK: Law = law(
    "E40",
    "RMS current through the series resistance, textbook; Fourier series for mixed banks",
    "ripple current only",
);
pub(super) const BOARD: Law =
    law("E41", "the current each path carries", "resistances at the copper's temperature");
pub(super) const BIAS: Law =
    law("E42", "data sheets: supply current without switching", "gate charge is booked apart");
pub(super) const LINEAR: Law = law("E43", "two-term rule: LT3010 data sheet p. 11", "above drop-out");
pub(super) const HEAT: Law = law("E50", "thermal resistance to ambient with coupling", "steady state");
pub(super) const LEDGER: Law = law("E60", "energy balance", "");
