//! How effective permittivity and impedance rise with frequency, single and coupled.

use super::coupled::EvenOdd;

/// Below this permittivity the published impedance law has a pole near the permittivity of air; from here to [`IMPEDANCE_FULL`] it is faded in.
const IMPEDANCE_NONE: f64 = 1.05;
/// From this permittivity on the impedance law is used as published.
const IMPEDANCE_FULL: f64 = 1.2;

/// The parts of the laws that do not depend on frequency, for one substrate, width (and gap), so that a sweep costs little.
///
/// # Units
/// `fn` in the formulas is frequency times substrate height in GHz mm, `u` width and `g` gap over height.
///
/// # Valid range
/// Effective permittivity, single: 0.1 <= u <= 100, er <= 20, height below 0.13 wavelengths (39 GHz mm): 0.6 % as claimed, 0.6 % as seen to 25 GHz mm.
/// Coupled: 0.1 <= u, g <= 10, er <= 18, 25 GHz mm: 1.4 % as claimed, 1.6 % as seen to 13 GHz mm. Impedance: 30 GHz mm, not checked independently.
///
/// # Source
/// Single: M. Kirschning, R. H. Jansen, "Accurate model for effective dielectric constant of microstrip with validity up to millimetre-wave frequencies",
/// Electron. Lett. 18, 1982, pp. 272-273 (there in GHz cm). Coupled: the same authors, IEEE Trans. MTT-32, 1984, pp. 83-90. Impedance: R. H. Jansen,
/// M. Kirschning, "Arguments and an accurate model for the power-current formulation of microstrip characteristic impedance", AEU 37, 1983, pp. 108-112
/// (from memory).
///
/// With solved statics the laws start from static values that hold thickness, taper and lid. Under a lid P is multiplied by `statics::lid_factor`, so that the
/// permittivity runs from the lidded static value into that of the open line; not checked against full-wave values.
///
/// The even and odd impedances take the factor of a single strip of the same width: so the coupling stays the static one and a wide gap becomes the single
/// line. The 1984 laws for them are not used: no independent value for them was at hand, and the coupling follows from a small difference of the two.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Dispersion {
    er: f64,
    u: f64,
    p1_low: f64,
    p2: f64,
    p3_low: f64,
    p4: f64,
    impedance: ImpedanceLaw,
    coupled: Option<CoupledLaw>,
}

#[derive(Clone, Copy, Debug, PartialEq)]
struct ImpedanceLaw {
    weight: f64,
    r3: f64,
    r4: f64,
    edge: f64,
    r7: f64,
    r10: f64,
    r12: f64,
    wide: f64,
    er_1_674: f64,
}

#[derive(Clone, Copy, Debug, PartialEq)]
struct CoupledLaw {
    p5: f64,
    even_gap: f64,
    p8: f64,
    p9_slope: f64,
    p11_slope: f64,
    p12_fall: f64,
    odd_gap: f64,
}

/// How far a strip's effective permittivity has risen towards the laminate's, and what the neighbour does to that.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Rise {
    /// P of the single strip.
    pub(super) single: f64,
    /// Factor on P when the neighbour has the same voltage, and the opposite one.
    pub(super) by_neighbour: EvenOdd<f64>,
}

impl Dispersion {
    /// For a single strip.
    pub(super) fn single(u: f64, er: f64) -> Dispersion {
        let rise = |x: f64| 1.0 - (-x).exp();
        let excess6 = (er - 1.0).max(0.0).powi(6);
        Dispersion {
            er,
            u,
            p1_low: 0.27488 + 0.6315 * u - 0.065683 * (-8.7513 * u).exp(),
            p2: 0.33622 * rise(0.03442 * er),
            p3_low: 0.0363 * (-4.6 * u).exp(),
            p4: 1.0 + 2.751 * rise((er / 15.916).powi(8)),
            impedance: ImpedanceLaw {
                weight: smooth_step((er - IMPEDANCE_NONE) / (IMPEDANCE_FULL - IMPEDANCE_NONE)),
                r3: 4.766 * (-3.228 * u.powf(0.641)).exp(),
                r4: 0.016 + (0.0514 * er).powf(4.524),
                edge: (-22.2 * u.powf(1.92)).exp() * excess6 / (1.0 + 10.0 * excess6),
                r7: 1.206 - 0.3144 * (-0.03891 * er.powf(1.4)).exp() * rise(0.267 * u.powi(7)),
                r10: 0.00044 * er.powf(2.136) + 0.0184,
                r12: 1.0 / (1.0 + 0.00245 * u * u),
                wide: 0.0503 * er * er * rise((u / 15.0).powi(6)),
                er_1_674: er.powf(1.674),
            },
            coupled: None,
        }
    }

    /// For a pair.
    // 0.6366 is a digit string of the source, not two over pi.
    #[allow(clippy::approx_constant)]
    pub(super) fn pair(u: f64, g: f64, er: f64) -> Dispersion {
        let p10 = 0.242 * (er - 1.0).max(0.0).powf(0.55);
        let p13 = 1.695 * p10 / (0.414 + 1.605 * p10);
        let law = CoupledLaw {
            p5: 0.334 * (-3.3 * (er / 15.0).powi(3)).exp() + 0.746,
            even_gap: 4.069 * g.powf(0.479) * (-1.347 * g.powf(0.595) - 0.17 * g.powf(2.5)).exp(),
            p8: 0.7168 * (1.0 + 1.076 / (1.0 + 0.0576 * (er - 1.0))),
            p9_slope: 0.7913 * (2.481 * (er / 8.0).powf(0.946)).atan(),
            p11_slope: 0.6366 * (1.263 * (u / 3.0).powf(1.629)).atan(),
            p12_fall: 1.0 + 1.183 * u.powf(1.376),
            odd_gap: (-p13 * g.powf(1.092)).exp(),
        };
        Dispersion { coupled: Some(law), ..Dispersion::single(u, er) }
    }

    /// P1 P2 and P3 P4 at `fn`.
    fn common(&self, f_n: f64) -> [f64; 2] {
        let p1 = self.p1_low + 0.525 * self.u / (1.0 + 0.0157 * f_n).powi(20);
        [p1 * self.p2, self.p3_low * -(-(f_n / 38.7).powf(4.97)).exp_m1() * self.p4]
    }

    /// Effective permittivity of the single strip at `fn` from its static value; `lid` multiplies P.
    pub(super) fn single_eps_eff(&self, f_n: f64, eps_eff_static: f64, lid: f64) -> f64 {
        let [p12, p34] = self.common(f_n);
        self.raised(eps_eff_static, lid * p12 * ((p34 + 0.1844) * f_n).powf(1.5763))
    }

    /// Even and odd effective permittivity at `fn` from their static values; `lid` multiplies P.
    pub(super) fn pair_eps_eff(&self, f_n: f64, eps_eff_static: EvenOdd<f64>, lid: EvenOdd<f64>) -> EvenOdd<f64> {
        let Rise { single, by_neighbour } = self.rise(f_n);
        EvenOdd {
            even: self.raised(eps_eff_static.even, lid.even * single * by_neighbour.even),
            odd: self.raised(eps_eff_static.odd, lid.odd * single * by_neighbour.odd),
        }
    }

    /// P of the laws at `fn`, taken apart: that of the single strip and what a neighbour makes of it in either mode.
    pub(super) fn rise(&self, f_n: f64) -> Rise {
        let [p12, p34] = self.common(f_n);
        let single = p12 * ((p34 + 0.1844) * f_n).powf(1.5763);
        let Some(law) = &self.coupled else { return Rise { single, by_neighbour: EvenOdd { even: 1.0, odd: 1.0 } } };
        let p6 = law.p5 * (-(f_n / 18.0).powf(0.368)).exp();
        let p7 = 1.0 + p6 * law.even_gap;
        let p9 = law.p8 + law.p9_slope * (-(f_n / 20.0).powf(1.424)).exp_m1();
        let p11 = law.p11_slope * (-0.3401 * f_n).exp_m1();
        let p12_odd = p9 + (1.0 - p9) / law.p12_fall;
        let p14 = 0.8928 - 0.1072 * (-0.42 * (f_n / 20.0).powf(3.215)).exp_m1();
        let p15 = (1.0 - 0.8928 * (1.0 + p11) * p12_odd * law.odd_gap / p14).abs();
        let even = ((p34 + 0.1844 * p7) / (p34 + 0.1844)).powf(1.5763);
        Rise { single, by_neighbour: EvenOdd { even, odd: p15.powf(1.5763) } }
    }

    /// Effective permittivity from its static value and P.
    pub(super) fn raised(&self, eps_eff_static: f64, p: f64) -> f64 {
        self.er - (self.er - eps_eff_static) / (1.0 + p)
    }

    /// Impedance at `fn` over static impedance, from the single strip's effective permittivity at zero and at `fn`.
    pub(super) fn impedance_factor(&self, f_n: f64, eps_eff_static: f64, eps_eff: f64) -> f64 {
        let law = &self.impedance;
        if law.weight == 0.0 {
            return 1.0;
        }
        let r5 = (f_n / 28.843).powi(12);
        // R5 / (1 + 1.2992 R5), finite however high the frequency.
        let r5_share = 1.0 / (1.2992 + 1.0 / r5);
        let r8 = 1.0 - 1.275 * (-0.004625 * law.r3 * law.er_1_674 * (f_n / 18.365).powf(2.745)).exp_m1();
        let r9 = 5.086 * law.r4 * r5_share / (0.3838 + 0.386 * law.r4) * law.edge;
        let r11 = 1.0 / (0.0962 + (19.47 / f_n).powi(6));
        let r13 = 0.9408 * eps_eff.powf(r8) - 0.9603;
        let r14 = (0.9408 - r9) * eps_eff_static.powf(r8) - 0.9603;
        let r15 = 0.707 * law.r10 * (f_n / 12.3).powf(1.097);
        let r16 = 1.0 + law.wide * r11;
        let r17 = law.r7 * (1.0 - 1.1241 * law.r12 / r16 * (-0.026 * f_n.powf(1.15656) - r15).exp());
        let factor = (r13 / r14).powf(r17);
        if factor.is_finite() { 1.0 + law.weight * (factor - 1.0) } else { 1.0 }
    }
}

/// 0 below 0, 1 above 1, with level ends.
fn smooth_step(x: f64) -> f64 {
    let x = x.clamp(0.0, 1.0);
    x * x * (3.0 - 2.0 * x)
}
