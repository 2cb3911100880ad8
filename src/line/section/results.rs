//! What comes out: capacitances of modes, matrices, and what follows from them.

use super::solve::LIGHT;

/// Capacitance per unit length of one mode, with the dielectric and without.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Mode {
    /// Per line.
    pub capacitance_f_per_m: f64,
    /// Per line, all dielectric taken out.
    pub air_capacitance_f_per_m: f64,
}

impl Mode {
    /// Static characteristic impedance of the mode, per line.
    pub fn z0_ohm(&self) -> f64 {
        1.0 / (LIGHT * (self.capacitance_f_per_m * self.air_capacitance_f_per_m).sqrt())
    }

    /// Static effective permittivity.
    pub fn eps_eff(&self) -> f64 {
        self.capacitance_f_per_m / self.air_capacitance_f_per_m
    }

    /// Inductance per unit length.
    pub fn inductance_h_per_m(&self) -> f64 {
        1.0 / (LIGHT * LIGHT * self.air_capacitance_f_per_m)
    }
}

/// One strip.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Line {
    /// Its only mode.
    pub mode: Mode,
    /// Relative error of C that the two grids let expect.
    pub error_estimate: f64,
}

/// Two equal strips.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Pair {
    /// Both lines at the same potential.
    pub even: Mode,
    /// Opposite potentials.
    pub odd: Mode,
    /// Relative error of the worst of the four capacitances that the two grids let expect.
    pub error_estimate: f64,
}

impl Pair {
    /// (Z0e - Z0o) / (Z0e + Z0o).
    pub fn coupling(&self) -> f64 {
        let (even, odd) = (self.even.z0_ohm(), self.odd.z0_ohm());
        (even - odd) / (even + odd)
    }
}

/// N strips.
#[derive(Clone, Debug, PartialEq)]
pub struct Solved {
    /// Maxwell capacitance matrix: charge of line i for 1 V on line j, the others at 0.
    pub capacitance_f_per_m: Vec<Vec<f64>>,
    /// The same with all dielectric taken out.
    pub air_capacitance_f_per_m: Vec<Vec<f64>>,
    /// mu0 eps0 times the inverse of the matrix without dielectric.
    pub inductance_h_per_m: Vec<Vec<f64>>,
    /// Error that the two grids let expect, relative to the largest element of the row.
    pub error_estimate: f64,
    /// Panels along each width on the finer grid.
    pub panels_per_width: usize,
}

impl Solved {
    /// For one strip: its mode.
    pub fn single(&self) -> Option<Mode> {
        match (self.capacitance_f_per_m.as_slice(), self.air_capacitance_f_per_m.as_slice()) {
            ([c], [c0]) => Some(Mode { capacitance_f_per_m: *c.first()?, air_capacitance_f_per_m: *c0.first()? }),
            _ => None,
        }
    }

    /// For two equal strips: even and odd mode.
    pub fn pair(&self) -> Option<Pair> {
        let modes = |matrix: &[Vec<f64>]| match matrix {
            [one, other] => match (one.as_slice(), other.as_slice()) {
                ([a, b], [c, d]) if (a - d).abs() <= 1e-6 * a.abs() => Some((0.5 * (a + d + b + c), 0.5 * (a + d - b - c))),
                _ => None,
            },
            _ => None,
        };
        let (even, odd) = modes(&self.capacitance_f_per_m)?;
        let (even_air, odd_air) = modes(&self.air_capacitance_f_per_m)?;
        Some(Pair {
            even: Mode { capacitance_f_per_m: even, air_capacitance_f_per_m: even_air },
            odd: Mode { capacitance_f_per_m: odd, air_capacitance_f_per_m: odd_air },
            error_estimate: self.error_estimate,
        })
    }
}
