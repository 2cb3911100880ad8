//! What is at a right-angle bend of a strip: a T of two series inductances and a shunt capacitance, or a curved line.

use std::f64::consts::FRAC_PI_2;

use super::C_M_PER_S;
use super::ETA0_OHM;
use super::Strip;
use super::covered::outside;
use crate::base::Problem;

const SOURCE: &str = "Kirschning, Jansen & Koster 1983";
/// Width over height below which no optimum cut is published.
const NARROWEST_FOR_OPTIMUM: f64 = 0.25;

/// How much of a corner is cut away.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Mitre {
    /// The least reflection, [`optimum_cut`].
    Optimum,
    /// Removed part of the diagonal of the corner square, 0 to 1; 0.5 cuts from mouth to mouth.
    Cut(f64),
}

/// The outer corner of a bend.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Corner {
    /// Nothing cut away.
    Square,
    /// A straight cut across the outer corner.
    Mitred(Mitre),
}

/// A bend as a T between its mouths: `series_h`, then `shunt_f` to ground, then `series_h`.
///
/// The planes are the two mouths of the corner square, both through the inner corner: neither strip's length holds any part of the square. A bend is wholly
/// in these elements; no length is to be added or taken out.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Bend {
    /// On each side; negative for narrow strips on square corners, where the path is shorter than the planes suggest.
    pub series_h: f64,
    /// In the middle.
    pub shunt_f: f64,
    width_over_height: f64,
    permittivity: f64,
    cut: f64,
}

impl Bend {
    /// The line of the same delay (m, of the strip it was made for), when the bend is taken as matched.
    pub fn delay_length_m(&self, strip: &Strip) -> f64 {
        let z0 = strip.static_z0_ohm();
        0.5 * (2.0 * self.series_h / z0 + self.shunt_f * z0) * C_M_PER_S / strip.static_eps_eff().sqrt()
    }

    /// Warnings `discontinuity-out-of-range`.
    pub fn problems(&self) -> Vec<Problem> {
        [
            outside(SOURCE, "width over thickness of the laminate at a bend", self.width_over_height, 0.2..=6.0),
            outside(SOURCE, "permittivity at a bend", self.permittivity, 2.36..=10.4),
            outside(SOURCE, "cut share of a bend's corner", self.cut, 0.0..=1.0),
        ]
        .into_iter()
        .flatten()
        .collect()
    }
}

/// A right-angle bend of one strip.
///
/// # Valid range
/// 0.2 <= w/h <= 6, 2.36 <= er <= 10.4 and up to about 12 GHz mm, square corner and half cut. [`Bend::problems`] tells. Shallower cuts by interpolation over
/// the area cut away; deeper ones go over to the optimum, taken as matched (Douville & James 1978) with the half cut's delay.
///
/// # Accuracy
/// Against our full-wave solver at 4 GHz (`cargo bench --bench discontinuities`), 50-ohm strips on er 3.0, 0.762 mm and er 10.2, 0.635 mm: |S11| of the square
/// corner and of the half cut within 1 dB (-21 to -35 dB); the optimum cut solved at -43 and -47 dB. Delay, as a length of the strip: square 0.27 h and
/// 0.19 h too short, half cut 0.04 h too short and 0.10 h too long.
///
/// # Source
/// M. Kirschning, R. H. Jansen, N. H. L. Koster, "Measurement and computer-aided modeling of microstrip discontinuities by an improved resonator method",
/// IEEE MTT-S Digest 1983, pp. 495-497 (from memory).
pub fn bend(strip: &Strip, corner: Corner) -> Bend {
    let h = strip.board.thickness_m;
    let (u, er) = (strip.built_width_m / h, strip.board.permittivity);
    let cut = match corner {
        Corner::Square => 0.0,
        Corner::Mitred(Mitre::Optimum) => optimum_cut(strip),
        Corner::Mitred(Mitre::Cut(cut)) => cut,
    };
    let square =
        (220e-9 * h * (1.0 - 1.35 * (-0.18 * u.powf(1.39)).exp()), 1e-12 * h * ((10.35 * er + 2.5) * u * u + (2.6 * er + 5.64) * u));
    let half =
        (440e-9 * h * (1.0 - 1.062 * (-0.177 * u.powf(0.947)).exp()), 1e-12 * h * ((3.93 * er + 0.62) * u * u + (7.6 * er + 3.8) * u));
    // What a cut takes away grows as its area, the square of its depth.
    let share = (2.0 * cut.clamp(0.0, 0.5)).powi(2);
    let mut series_h = square.0 + share * (half.0 - square.0);
    let mut shunt_f = square.1 + share * (half.1 - square.1);
    if cut > 0.5 {
        // From the half cut to the optimum, which is matched, with the half cut's delay; a deeper cut as the optimum.
        let z0 = strip.static_z0_ohm();
        let delay_s = 0.5 * (2.0 * half.0 / z0 + half.1 * z0);
        let towards = ((cut - 0.5) / (optimum_cut(strip) - 0.5)).min(1.0);
        series_h += towards * (0.5 * delay_s * z0 - series_h);
        shunt_f += towards * (delay_s / z0 - shunt_f);
    }
    Bend { series_h, shunt_f, width_over_height: u, permittivity: er, cut }
}

/// Cut of least reflection as a share of the corner square's diagonal. For strips narrower than a quarter of the height, where no cut is published, that of
/// a quarter (there the whole corner hardly matters).
///
/// # Source
/// R. J. P. Douville, D. S. James, "Experimental study of symmetric microstrip bends and their compensation", IEEE Trans. MTT-26, 1978, pp. 175-182:
/// 0.52 + 0.65 exp(-1.35 w/h) for w/h >= 0.25 and er <= 25.
pub fn optimum_cut(strip: &Strip) -> f64 {
    let u = (strip.built_width_m / strip.board.thickness_m).max(NARROWEST_FOR_OPTIMUM);
    0.52 + 0.65 * (-1.35 * u).exp()
}

/// A rounded bend: a line of its own length and impedance.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Curve {
    /// Length of the straight line of the same delay, beside the arc of the centre line a little shorter.
    pub length_m: f64,
    /// Impedance over that of the straight strip.
    pub impedance_ratio: f64,
    radius_over_width: f64,
}

impl Curve {
    /// Warnings `discontinuity-out-of-range`.
    pub fn problems(&self) -> Vec<Problem> {
        let source = "static field between curved plates";
        outside(source, "radius of a bend's centre line over the strip's width", self.radius_over_width, 1.5..=f64::INFINITY)
            .into_iter()
            .collect()
    }
}

/// A strip that turns by `angle_rad` on a centre line of radius `radius_m`.
///
/// The current keeps to the inner side: the inductance is that of plates of the strip's effective width D bent to the radius R, (D/R) / ln((R+D/2)/(R-D/2))
/// of the straight one, and the capacitance stays.
///
/// # Valid range
/// Radius of 1.5 widths and more, D below 1.8 radii; below a tenth of a guided wavelength across. From three widths up it is a straight line within 2 %.
///
/// # Source
/// Exact static field of curved plates with magnetic side walls; D = eta0 h / (Z0 sqrt(eps_eff)).
pub fn curve(strip: &Strip, radius_m: f64, angle_rad: f64) -> Curve {
    let plate_m = ETA0_OHM * strip.board.thickness_m / (strip.static_z0_ohm() * strip.static_eps_eff().sqrt());
    let x = (plate_m / radius_m).clamp(0.0, 1.8);
    // x / (2 artanh(x/2)), with its limit at x = 0.
    let inductance = if x < 1e-4 { 1.0 - x * x / 12.0 } else { x / ((2.0 + x) / (2.0 - x)).ln() };
    Curve {
        length_m: radius_m * angle_rad * inductance.sqrt(),
        impedance_ratio: inductance.sqrt(),
        radius_over_width: radius_m / strip.built_width_m,
    }
}

/// A quarter turn: [`curve`] by a right angle.
pub fn rounded_bend(strip: &Strip, radius_m: f64) -> Curve {
    curve(strip, radius_m, FRAC_PI_2)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::line::AsBuilt;

    #[test]
    fn the_optimum_is_matched_and_the_square_corner_is_not() {
        for (er, w_m) in [(3.0, 1.9e-3), (10.2, 0.7e-3)] {
            let strip = Strip::new(&AsBuilt::for_tests(er, 0.0), w_m);
            let z0 = strip.static_z0_ohm();
            let ratio = |corner| {
                let bend = bend(&strip, corner);
                2.0 * bend.series_h / (bend.shunt_f * z0 * z0)
            };
            assert!((ratio(Corner::Mitred(Mitre::Optimum)) - 1.0).abs() < 1e-12);
            assert!(ratio(Corner::Square) < 0.5);
            // The two ways of saying one cut agree, and nothing jumps at the half cut.
            let cut = optimum_cut(&strip);
            assert_eq!(bend(&strip, Corner::Mitred(Mitre::Cut(cut))), bend(&strip, Corner::Mitred(Mitre::Optimum)));
            let [below, above] = [0.5 - 1e-9, 0.5 + 1e-9].map(|cut| ratio(Corner::Mitred(Mitre::Cut(cut))));
            assert!((above - below).abs() < 1e-5);
            // The delay of a cut bend is that of a part of the square's two half widths.
            let length_m = bend(&strip, Corner::Mitred(Mitre::Optimum)).delay_length_m(&strip);
            assert!(length_m > 0.2 * w_m && length_m < w_m, "{length_m}");
        }
    }

    #[test]
    fn range_is_told() {
        let board = AsBuilt::for_tests(3.0, 0.0);
        assert_eq!(bend(&Strip::new(&board, 1.9e-3), Corner::Square).problems(), vec![]);
        assert_eq!(bend(&Strip::new(&board, 0.1e-3), Corner::Mitred(Mitre::Cut(1.2))).problems().len(), 2);
        assert_eq!(rounded_bend(&Strip::new(&board, 1.9e-3), 1.9e-3).problems().len(), 1);
    }

    #[test]
    fn a_wide_curve_is_its_arc() {
        let strip = Strip::new(&AsBuilt::for_tests(3.0, 0.0), 1.9e-3);
        let far = rounded_bend(&strip, 1.0);
        assert!((far.length_m / FRAC_PI_2 - 1.0).abs() < 1e-5 && (far.impedance_ratio - 1.0).abs() < 1e-5);
        let near = rounded_bend(&strip, 3.0 * 1.9e-3);
        // The two per cent claimed.
        assert!(near.length_m < FRAC_PI_2 * 5.7e-3 && near.impedance_ratio > 0.98);
    }
}
