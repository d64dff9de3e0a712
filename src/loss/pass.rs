//! Pass element of a linear regulator (E43).

/// Loss of the pass element, W.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Pass {
    /// V_i - V_o, V.
    pub drop: f64,
    /// (V_i - V_o) I, W.
    pub watts: f64,
}

/// (V_i - V_o) I (E43). Source: LT3010 data sheet p. 11, first term. Valid above drop-out.
#[inline]
pub fn pass(v_in: f64, v_out: f64, load: f64) -> Pass {
    let drop = v_in - v_out;
    Pass { drop, watts: drop * load }
}
