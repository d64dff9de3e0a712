//! RC snubber at the switch node (E41).

/// Snubber loss, W.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Snubber {
    /// Capacitance, F.
    pub capacitance: f64,
    /// C V_i² f_e, W.
    pub watts: f64,
}

/// C V_i² f_e (E41): one half at each edge. Valid when the snubber settles within each part of the period.
#[inline(always)]
pub fn snubber(capacitance: f64, v_in: f64, frequency: f64) -> Snubber {
    Snubber { capacitance, watts: capacitance * v_in * v_in * frequency }
}
