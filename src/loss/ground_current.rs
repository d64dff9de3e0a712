//! Ground current of a linear regulator (E43).

/// Loss by the ground current, W.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct GroundCurrent {
    /// I_gnd, A.
    pub current: f64,
    /// V_i I_gnd, W.
    pub watts: f64,
}

/// V_i I_gnd (E43). Source: LT3010 data sheet p. 11, second term.
#[inline]
pub fn ground_current(v_in: f64, current: f64) -> GroundCurrent {
    GroundCurrent { current, watts: v_in * current }
}
