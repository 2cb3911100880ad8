//! Which model gave the constants of a circuit's strips, pairs and arrays, and how far from them are the closed forms?

use super::Array;
use super::C_M_PER_S;
use super::Pair;
use super::StaticsModel;
use super::Strip;

/// Couplings below this are the solver's rounding and nothing to compare with.
const LEAST_COUPLING: f64 = 1e-6;

/// The models behind a set of strips and pairs. Differences are of the closed form from the values used, static, relative, the largest in magnitude.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Models {
    /// Strips and pairs whose static constants the numerical cross-section gave.
    pub solved: usize,
    /// Strips and pairs left to the closed forms.
    pub closed_form: usize,
    /// Largest error that the solver expects of a capacitance, relative.
    pub error_estimate: f64,
    /// Of an impedance.
    pub impedance_difference: f64,
    /// Of an effective permittivity.
    pub permittivity_difference: f64,
    /// Of a pair's coupling (Z0e - Z0o)/(Z0e + Z0o); in an array, of the mutual capacitance over both strips' own.
    pub coupling_difference: f64,
}

impl Models {
    /// Of these strips and pairs.
    pub fn of<'a>(strips: impl Iterator<Item = &'a Strip>, pairs: impl Iterator<Item = &'a Pair>) -> Models {
        let mut models = Models::default();
        for strip in strips {
            models.count(strip.error_estimate());
            let closed = Strip::new(&strip.board().with_statics(StaticsModel::ClosedForm), strip.width_m());
            keep(&mut models.impedance_difference, closed.static_z0_ohm() / strip.static_z0_ohm() - 1.0);
            keep(&mut models.permittivity_difference, closed.static_eps_eff() / strip.static_eps_eff() - 1.0);
        }
        for pair in pairs {
            models.count(pair.error_estimate());
            let closed = Pair::new(&pair.board().with_statics(StaticsModel::ClosedForm), pair.width_m(), pair.gap_m());
            let (z, eps, closed_z, closed_eps) =
                (pair.static_z0_ohm(), pair.static_eps_eff(), closed.static_z0_ohm(), closed.static_eps_eff());
            for (closed, used) in [(closed_z.even, z.even), (closed_z.odd, z.odd)] {
                keep(&mut models.impedance_difference, closed / used - 1.0);
            }
            for (closed, used) in [(closed_eps.even, eps.even), (closed_eps.odd, eps.odd)] {
                keep(&mut models.permittivity_difference, closed / used - 1.0);
            }
            let coupling = |even: f64, odd: f64| (even - odd) / (even + odd);
            if coupling(z.even, z.odd) > LEAST_COUPLING {
                keep(&mut models.coupling_difference, coupling(closed_z.even, closed_z.odd) / coupling(z.even, z.odd) - 1.0);
            }
        }
        models
    }

    /// And of these arrays; their closed forms are put together from single strips and pairs.
    pub fn with_arrays<'a>(mut self, arrays: impl Iterator<Item = &'a Array>) -> Models {
        for array in arrays {
            self.count(array.error_estimate());
            let closed = Array::new(&array.board().with_statics(StaticsModel::ClosedForm), array.widths_m(), array.gaps_m());
            let (used, closed) = (Matrices::of(array), Matrices::of(&closed));
            for i in 0..array.count() {
                keep(&mut self.impedance_difference, closed.z0_ohm(i) / used.z0_ohm(i) - 1.0);
                keep(&mut self.permittivity_difference, closed.eps_eff(i) / used.eps_eff(i) - 1.0);
                if i > 0 && used.coupling(i - 1, i) > LEAST_COUPLING {
                    keep(&mut self.coupling_difference, closed.coupling(i - 1, i) / used.coupling(i - 1, i) - 1.0);
                }
            }
        }
        self
    }

    fn count(&mut self, error_estimate: Option<f64>) {
        match error_estimate {
            Some(estimate) => {
                self.solved += 1;
                self.error_estimate = self.error_estimate.max(estimate);
            }
            None => self.closed_form += 1,
        }
    }

    /// One sentence for people.
    pub fn describe(&self) -> String {
        if self.solved == 0 {
            return "closed forms (Hammerstad & Jensen 1980, Kirschning & Jansen 1984), no lid".into();
        }
        let rest = if self.closed_form > 0 { format!(" ({} left to the closed form)", self.closed_form) } else { String::new() };
        format!(
            "numerical cross-section{rest}, error estimate {:.0e}; the closed form differs by up to {:+.1} % in impedance, {:+.1} % in eff. permittivity, {:+.1} % in coupling",
            self.error_estimate,
            100.0 * self.impedance_difference,
            100.0 * self.permittivity_difference,
            100.0 * self.coupling_difference
        )
    }
}

/// Constants of single strips of an array with all others grounded, and of neighbours.
struct Matrices<'a> {
    laminate: &'a [f64],
    air: &'a [f64],
    count: usize,
}

impl Matrices<'_> {
    fn of(array: &Array) -> Matrices<'_> {
        Matrices { laminate: array.capacitance_f_per_m(), air: array.air_capacitance_f_per_m(), count: array.count() }
    }

    fn own(&self, i: usize) -> [f64; 2] {
        [self.laminate, self.air].map(|matrix| matrix.get(i * (self.count + 1)).copied().unwrap_or(f64::NAN))
    }

    fn z0_ohm(&self, i: usize) -> f64 {
        let [c, c0] = self.own(i);
        1.0 / (C_M_PER_S * (c * c0).sqrt())
    }

    fn eps_eff(&self, i: usize) -> f64 {
        let [c, c0] = self.own(i);
        c / c0
    }

    fn coupling(&self, i: usize, j: usize) -> f64 {
        let [[one, _], [other, _]] = [self.own(i), self.own(j)];
        -self.laminate.get(i * self.count + j).copied().unwrap_or(f64::NAN) / (one * other).sqrt()
    }
}

/// Keeps the larger in magnitude, with its sign.
fn keep(kept: &mut f64, other: f64) {
    if other.abs() > kept.abs() {
        *kept = other;
    }
}
