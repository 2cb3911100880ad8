//! S-parameters over frequency, whatever computed them.

use num_complex::Complex64;

/// Which analysis gave a response.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Method {
    /// The circuit model of the layout's parts.
    Network,
    /// The field solution of the board's copper.
    FullWave,
}

/// S-parameters of a two-port at increasing frequencies.
///
/// Convention: time factor exp(+j w t); `S_ij = b_i / a_j`, power waves against the real reference impedance of each port.
#[derive(Clone, Debug, PartialEq)]
pub struct Response {
    /// What computed it.
    pub method: Method,
    /// Reference impedance of port 1 and port 2.
    pub z0_ohm: [f64; 2],
    /// Frequencies, strictly increasing.
    pub f_hz: Vec<f64>,
    /// `[S11, S21, S12, S22]` at each frequency.
    pub s: Vec<[Complex64; 4]>,
}

impl Response {
    /// -20 log10 |S21| at point `i`, dB; capped at 300 dB so that an exact zero stays finite.
    pub fn insertion_loss_db(&self, i: usize) -> f64 {
        level_db(self.s[i][1])
    }

    /// The smaller of -20 log10 |S11| and -20 log10 |S22| at point `i`, dB; capped at 300 dB.
    pub fn return_loss_db(&self, i: usize) -> f64 {
        level_db(self.s[i][0]).min(level_db(self.s[i][3]))
    }
}

/// -20 log10 |s|, at most 300 dB.
pub fn level_db(s: Complex64) -> f64 {
    (-20.0 * s.norm().log10()).min(300.0)
}
