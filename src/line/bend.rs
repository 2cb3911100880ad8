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
/// 0.2 <= w/h <= 6, 2.36 <= er <= 10.4 and up to about 12 GHz mm, square corner and half cut; other cuts by interpolation over the area cut away.
/// [`Bend::problems`] tells.
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
    let share = (2.0 * cut).powi(2);
    let series_h = square.0 + share * (half.0 - square.0);
    let shunt_f = square.1 + share * (half.1 - square.1);
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
/// Radius of 1.5 widths and more, D below 1.8 radii; below a tenth of a guided wavelength across. From three widths up it is a straight line within 1 %.
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
