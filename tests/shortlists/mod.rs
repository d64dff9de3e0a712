//! Random shortlists of coherent parts, for tests and benches: charges shrink as the on-resistance grows.

use std::fmt::Write as _;
use std::path::{Path, PathBuf};

use lossbook::files::write_whole;

/// splitmix64 (Steele, Lea and Flood 2014, from memory): small, and the same everywhere.
pub(crate) struct Dice(u64);

impl Dice {
    pub(crate) fn new(seed: u64) -> Self {
        Dice(seed)
    }

    pub(crate) fn bits(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    pub(crate) fn below(&mut self, n: u64) -> u64 {
        self.bits() % n
    }

    /// Evenly between two numbers.
    pub(crate) fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * (self.bits() >> 11) as f64 / (1u64 << 53) as f64
    }

    /// Evenly in ratio between two numbers.
    pub(crate) fn ratio(&mut self, low: f64, high: f64) -> f64 {
        low * (high / low).powf(self.between(0.0, 1.0))
    }

    pub(crate) fn chance(&mut self, share: f64) -> bool {
        self.between(0.0, 1.0) < share
    }
}

/// What a random shortlist is like.
#[derive(Clone, Copy)]
pub(crate) struct Shape {
    pub(crate) seed: u64,
    pub(crate) mosfets: usize,
    pub(crate) inductors: usize,
    pub(crate) frequencies: usize,
    /// Share of the parts that lack a datum, have no price or too low a rating.
    pub(crate) trouble: f64,
    pub(crate) loads: usize,
    pub(crate) light_load: &'static str,
}

impl Shape {
    pub(crate) fn small(seed: u64) -> Self {
        let mut dice = Dice::new(seed ^ 0x5eed);
        Shape {
            seed,
            mosfets: 3 + dice.below(4) as usize,
            inductors: 1 + dice.below(3) as usize,
            frequencies: 1 + dice.below(3) as usize,
            trouble: 0.15,
            loads: 3,
            light_load: ["forced_continuous", "diode_emulation"][dice.below(2) as usize],
        }
    }
}

fn mosfet(dice: &mut Dice, name: &str, trouble: f64, text: &mut String) {
    // on-resistance in mΩ at 4.5 V; charges in nC follow from figures of merit
    let r = dice.ratio(2.0, 25.0);
    let q_g = dice.between(48.0, 90.0) / r;
    let (q_gd, q_gs, q_oss) =
        (q_g * dice.between(0.15, 0.3), q_g * dice.between(0.25, 0.35), q_g * dice.between(1.2, 2.2));
    let rating = if dice.chance(trouble) { 25 } else { 40 };
    let _ = write!(
        text,
        "  {name}:\n    source: random\n    v_ds_max: {rating} V\n    v_gs_max: 20 V\n    i_d_max: {:.0} A\n    t_j_max: 150 °C\n    \
         r_ds_on: [{{v_gs: 4.5 V, typ: {r:.3} mΩ}}, {{v_gs: 10 V, typ: {:.3} mΩ}}]\n    r_ds_on_hot: {{t_j: 150 °C, ratio: {:.2}}}\n    \
         v_gs_th: 1.7 V\n    v_gs_plateau: {{i_d: 20 A, typ: {:.2} V}}\n    q_gs: {q_gs:.3} nC\n    q_gd: {{v_ds: 20 V, typ: {q_gd:.3} nC}}\n    \
         q_g: {{v_gs: 4.5 V, typ: {q_g:.3} nC}}\n    r_g: {:.2} Ω\n    v_sd: [{{i: 1 A, v: 0.7 V}}, {{i: 20 A, v: 0.84 V}}]\n    r_th_ja: {:.1} K/W\n",
        300.0 / r,
        r * dice.between(0.72, 0.85),
        dice.between(1.5, 1.8),
        dice.between(2.5, 3.1),
        dice.between(0.6, 2.0),
        dice.between(28.0, 50.0),
    );
    if !dice.chance(trouble) {
        let _ = writeln!(text, "    q_oss: {{v_ds: 20 V, typ: {q_oss:.3} nC}}");
    }
    if !dice.chance(trouble) {
        let _ = writeln!(
            text,
            "    q_rr: {{i: 20 A, typ: {:.3} nC, exponent: 0.5}}",
            q_oss * dice.between(0.8, 1.6)
        );
    }
    if !dice.chance(trouble * 0.5) {
        let _ = writeln!(text, "    price: {:.2}", 0.12 + dice.between(1.2, 2.4) / r);
    }
}

fn inductor(dice: &mut Dice, name: &str, trouble: f64, text: &mut String) {
    let l = dice.ratio(1.8, 6.8);
    let current = 44.0 / l.sqrt();
    let _ = write!(
        text,
        "  {name}:\n    source: random\n    inductance: {l:.2} µH\n    saturation: {{i: {current:.1} A, drop: 30 %}}\n    \
         i_rms_max: {:.1} A\n    r_th: {:.1} K/W\n    t_max: 140 °C\n    dcr: {:.2} mΩ\n    \
         core: {{k: {:.2}, alpha: 1.45, beta: 2.45, volume: 1200 mm3, area: 60 mm2, turns: 6}}\n    price: {:.2}\n",
        current * 0.9,
        dice.between(20.0, 32.0),
        l * dice.between(1.3, 2.2),
        dice.between(2.5, 5.0),
        dice.between(0.4, 0.9),
    );
    if !dice.chance(trouble) {
        let _ = writeln!(text, "    r_ac: {{frequency: 500 kHz, r: {:.1} mΩ}}", l * dice.between(14.0, 24.0));
    }
}

/// Writes parts and budget into a folder and returns the budget's path.
pub(crate) fn write(folder: &Path, shape: Shape) -> PathBuf {
    let mut dice = Dice::new(shape.seed);
    let mut parts = String::from("mosfets:\n");
    for place in 0..shape.mosfets {
        mosfet(&mut dice, &format!("m{place}"), shape.trouble, &mut parts);
    }
    parts.push_str("inductors:\n");
    for place in 0..shape.inductors {
        inductor(&mut dice, &format!("l{place}"), shape.trouble, &mut parts);
    }
    parts.push_str(
        "capacitors:\n  c-in: {capacitance: 10 µF, esr: 3 mΩ, v_max: 50 V, price: 0.1}\n  \
         c-out: {capacitance: 47 µF, esr: 3 mΩ, v_max: 6.3 V, price: 0.1}\ncontrollers:\n  pwm:\n    source: random\n    \
         v_drive: 5 V\n    v_boot_drop: 0.3 V\n    high_side: {r_source: 1.5 Ω, r_sink: 0.9 Ω}\n    \
         low_side: {r_source: 1.5 Ω, r_sink: 0.9 Ω}\n    dead_time: {after_high_side: 20 ns, before_high_side: 25 ns}\n    \
         drive_supply: input\n    i_q: 1.2 mA\n    t_on_min: 60 ns\n    v_in_max: 42 V\n    price: 1.1\n",
    );
    let frequencies: Vec<String> =
        (0..shape.frequencies).map(|place| format!("{} kHz", 250 + 100 * place)).collect();
    let loads = shape.loads;
    let light_load = shape.light_load;
    let list = frequencies.join(", ");
    let budget = format!(
        "budget: random\nparts: parts\ncurrency: EUR\noutput_voltage: 3.3 V\nrated_load: 10 A\ngrid:\n  input_voltage: [19 V, 29 V]\n  \
         load: {{from: 0.2 A, to: 9 A, points: {loads}, spacing: log}}\n  ambient: [25 °C, 60 °C]\n  switching_frequency: 400 kHz\n\
         headline: {{input_voltage: 24 V, load: 6 A, ambient: 60 °C}}\nrequirements:\n  - {{loss_max: 4 W}}\n  - {{efficiency_min: 88 %, load: 6 A}}\n\
         profile:\n  - {{share: 70 %, load: 1 A}}\n  - {{share: 30 %, load: 8 A}}\nstages:\n  synchronous:\n    rectifier: synchronous\n    \
         high_side: m0\n    low_side: m1\n    inductor: l0\n    input_capacitors: [{{part: c-in, count: 4}}]\n    \
         output_capacitors: [{{part: c-out, count: 4}}]\n    controller: pwm\n    light_load: {light_load}\n\
         shortlist:\n  stage: synchronous\n  high_side: all\n  low_side: all\n  inductor: all\n  switching_frequency: [{list}]\n"
    );
    let library = folder.join("parts");
    std::fs::create_dir_all(&library).expect("a folder for the parts");
    write_whole(&library.join("random.yaml"), parts.as_bytes()).expect("the parts are written");
    let path = folder.join("rail.yaml");
    write_whole(&path, budget.as_bytes()).expect("the budget is written");
    path
}

/// Place of the best combination at the headline when one value of the winner's part is changed, in every combination
/// that has this part in this slot.
#[allow(dead_code)]
pub(crate) fn first_with(
    budget: &lossbook::budget::Budget,
    winner: &lossbook::pick::entry::Entry,
    path: &str,
    factor: f64,
) -> u64 {
    use lossbook::candidate::Candidate;
    use lossbook::pick::By;
    use lossbook::pick::space::Space;
    let shortlist = budget.shortlist.as_ref().expect("a shortlist");
    let space = Space::of(budget, &budget.stages[0], shortlist, By::HeadlineLoss);
    let bare = |path: &str| -> String {
        let pieces = path.split('[').map(|piece| piece.split_once(']').map_or(piece, |(_, rest)| rest));
        pieces.collect()
    };
    let mut best = (f64::INFINITY, 0);
    for place in 0..space.len() {
        let mut sheet = space.sheet(&space.digits(place));
        let mut board = budget.board.clone();
        lossbook::values::walk(&mut sheet, &mut board, &mut |value, datum| {
            if bare(value.path) == path && winner.part(value.slot) == Some(value.part) {
                datum.value *= factor;
            }
        });
        let candidate = Candidate::new(budget, &sheet);
        let loss = candidate.evaluate(candidate.headline()).map_or(f64::INFINITY, |solved| solved.loss());
        if loss < best.0 {
            best = (loss, place);
        }
    }
    best.1
}
