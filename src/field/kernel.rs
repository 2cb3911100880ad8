//! What potential does one mode of the box give: spectral kernels of vector and scalar potential at the copper's level.
//!
//! Each mode (kx, ky) is a transmission line along z. With `Z_TE`, `Z_TM` the impedance seen by a current at the copper, the vector potential kernel is
//! `L = Z_TE/(j w)` and the scalar potential kernel `P = j w (Z_TM - Z_TE)/k^2` (horizontal currents only).
//!
//! # Source
//! Layered media as transmission lines: K. A. Michalski & J. R. Mosig, IEEE Trans. Antennas Propag. 45, 1997, pp. 508-519 (from memory).

use std::f64::consts::PI;

use num_complex::Complex64;

use super::stack::{Dielectric, EPS0, MU0, Stack, Top};

/// Kernels at one frequency.
#[derive(Clone, Debug)]
pub struct Kernels {
    /// Angular frequency, rad/s.
    pub omega: f64,
    below: Vec<(Complex64, f64)>,
    above: Vec<(Complex64, f64)>,
    top: Top,
    /// Above this square of the wave number every mode decays; infinite when a layer loses.
    decaying_k2: f64,
    /// Large-k expansion `L -> l1/k + l3/k^3`.
    pub l1: Complex64,
    /// See `l1`.
    pub l3: Complex64,
    /// Large-k expansion `P -> p1/k + p3/k^3`.
    pub p1: Complex64,
    /// See `p1`.
    pub p3: Complex64,
}

impl Kernels {
    /// Kernels of a stack at a frequency above zero.
    pub fn new(stack: &Stack, f_hz: f64) -> Kernels {
        let omega = 2.0 * PI * f_hz;
        let list = |layers: &mut dyn Iterator<Item = &Dielectric>| layers.map(|l| (l.permittivity_f_per_m(), l.thickness_m)).collect();
        // Both ladders start at the far end: ground or top.
        let below: Vec<(Complex64, f64)> = list(&mut stack.below.iter());
        let above: Vec<(Complex64, f64)> = list(&mut stack.above.iter().rev());
        let eps1 = below.last().map_or(Complex64::from(0.0), |l| l.0);
        let eps2 = above.last().map_or(Complex64::from(0.0), |l| l.0);
        let k2 = omega * omega * MU0;
        Kernels {
            omega,
            below,
            above,
            top: stack.top,
            decaying_k2: if stack.loses() { f64::INFINITY } else { k2 * EPS0 * stack.greatest_permittivity() },
            l1: Complex64::from(MU0 / 2.0),
            l3: (eps1 + eps2) * (MU0 / 2.0 * k2 / 4.0),
            p1: (eps1 + eps2).inv(),
            p3: eps1 * eps2 / (eps1 + eps2).powu(2) * k2,
        }
    }

    /// `(L, P)` of a mode with transverse wave number `k` greater than zero.
    pub fn at(&self, k: f64) -> (Complex64, Complex64) {
        if k * k > self.decaying_k2 {
            // Nearly all modes: everything is real.
            let (te_below, tm_below) = self.real_ladder(&self.below, k, Top::Lid);
            let (te_above, tm_above) = self.real_ladder(&self.above, k, self.top);
            let l = MU0 / (te_below + te_above);
            let p = (1.0 / (tm_below + tm_above) + l * self.omega * self.omega) / (k * k);
            return (Complex64::from(l), Complex64::from(p));
        }
        let (te_below, tm_below) = self.ladder(&self.below, k, Top::Lid);
        let (te_above, tm_above) = self.ladder(&self.above, k, self.top);
        let l = Complex64::from(MU0) / (te_below + te_above);
        let p = ((tm_below + tm_above).inv() + l * (self.omega * self.omega)) / (k * k);
        (l, p)
    }

    /// Admittances looking into layers given from their far end: TE times `j w mu0`, TM over `j w`, so that both are real without loss.
    fn ladder(&self, layers: &[(Complex64, f64)], k: f64, end: Top) -> (Complex64, Complex64) {
        let mut seen: Option<(Complex64, Complex64)> = None;
        for &(eps, thickness_m) in layers {
            let gamma = propagation(k, self.omega, eps);
            let (te, tm) = (gamma, eps / gamma);
            let decay = (gamma * (-2.0 * thickness_m)).exp();
            let (plus, minus) = (Complex64::from(1.0) + decay, Complex64::from(1.0) - decay);
            seen = Some(match seen {
                // tanh = minus/plus; multiplied through by `plus` so that nothing overflows.
                Some((te_far, tm_far)) => (
                    te * (te_far * plus + te * minus) / (te * plus + te_far * minus),
                    tm * (tm_far * plus + tm * minus) / (tm * plus + tm_far * minus),
                ),
                None if end == Top::Open => (te, tm),
                None => (te * plus / minus, tm * plus / minus),
            });
        }
        seen.unwrap_or((Complex64::from(0.0), Complex64::from(0.0)))
    }

    /// The same where every layer is lossless and every wave decays.
    fn real_ladder(&self, layers: &[(Complex64, f64)], k: f64, end: Top) -> (f64, f64) {
        let mut seen: Option<(f64, f64)> = None;
        for &(eps, thickness_m) in layers {
            let gamma = (k * k - self.omega * self.omega * MU0 * eps.re).sqrt();
            let (te, tm) = (gamma, eps.re / gamma);
            let thickness = 2.0 * gamma * thickness_m;
            // exp(-40) is below what a double adds to one.
            let decay = if thickness > 40.0 { 0.0 } else { (-thickness).exp() };
            let (plus, minus) = (1.0 + decay, 1.0 - decay);
            seen = Some(match seen {
                Some((te_far, tm_far)) => (
                    te * (te_far * plus + te * minus) / (te * plus + te_far * minus),
                    tm * (tm_far * plus + tm * minus) / (tm * plus + tm_far * minus),
                ),
                None if end == Top::Open => (te, tm),
                None => (te * plus / minus, tm * plus / minus),
            });
        }
        seen.unwrap_or((0.0, 0.0))
    }
}

/// `sqrt(k^2 - w^2 mu0 eps)`, decaying or, without loss, travelling away (`+j`).
fn propagation(k: f64, omega: f64, eps: Complex64) -> Complex64 {
    let square = Complex64::from(k * k) - eps * (omega * omega * MU0);
    // Without loss the sign of a zero imaginary part must not choose the branch.
    if square.im.abs() < f64::MIN_POSITIVE && square.re < 0.0 { Complex64::new(0.0, (-square.re).sqrt()) } else { square.sqrt() }
}

/// `erf(z)/k` and `[erf z - (2/sqrt pi) z exp(-z^2)]/k^3` with `z = k cut`: the part of `1/k` and `1/k^3` that the near part already has.
pub fn near_share(k: f64, cut_m: f64) -> (f64, f64) {
    let z = k * cut_m;
    let root = 2.0 / PI.sqrt();
    let erf = libm::erf(z);
    let third = if z < 0.02 {
        // The bracket cancels; its series.
        2.0 * root * cut_m.powi(3) * (1.0 / 3.0 - z * z / 5.0)
    } else {
        (erf - root * z * (-z * z).exp()) / k.powi(3)
    };
    (erf / k, third)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn slab() -> Stack {
        let layer = |permittivity, thickness_m| Dielectric { permittivity, loss_tangent: 0.0, thickness_m };
        Stack { below: vec![layer(3.5, 0.5e-3)], above: vec![layer(1.0, 12e-3)], top: Top::Lid }
    }

    #[test]
    fn large_wave_numbers_follow_the_expansion() {
        let kernels = Kernels::new(&slab(), 5e9);
        for k in [4e4, 8e4] {
            let (l, p) = kernels.at(k);
            // What is left decays as k^-5 relative to 1/k: (w sqrt(mu eps)/k)^4 = 2e-7 at k = 4e4, and as exp(-2kh) = 4e-18.
            assert!((l - kernels.l1 / k - kernels.l3 / k.powi(3)).norm() < 1e-6 * l.norm());
            assert!((p - kernels.p1 / k - kernels.p3 / k.powi(3)).norm() < 1e-6 * p.norm());
        }
    }

    #[test]
    fn real_and_complex_arithmetic_agree() {
        let mut lossy = slab();
        // So little loss that only the way of computing changes.
        lossy.below[0].loss_tangent = 1e-15;
        for k in [200.0, 1000.0, 2e4] {
            let (one, two) = (Kernels::new(&slab(), 5e9).at(k), Kernels::new(&lossy, 5e9).at(k));
            assert!((one.0 - two.0).norm() < 1e-12 * one.0.norm() && (one.1 - two.1).norm() < 1e-12 * one.1.norm());
        }
    }

    #[test]
    fn layers_cut_in_two_change_nothing() {
        let mut cut = slab();
        let half = Dielectric { thickness_m: 0.25e-3, ..cut.below[0] };
        cut.below = vec![half, half];
        for k in [100.0, 2000.0, 2e4] {
            let (one, two) = (Kernels::new(&slab(), 7e9).at(k), Kernels::new(&cut, 7e9).at(k));
            assert!((one.0 - two.0).norm() < 1e-12 * one.0.norm() && (one.1 - two.1).norm() < 1e-12 * one.1.norm());
        }
    }
}
