//! What does a radial stub put in shunt: the input admittance of a sector of copper, fed at its point.

use num_complex::Complex64;

use super::AsBuilt;
use super::C_M_PER_S;
use super::ETA0_OHM;
use super::StaticsModel;
use super::Strip;
use super::covered::outside;
use super::open_end;
use crate::base::Problem;

/// Rings the sector is cut into, at equal ratios of radius: the input reactance moves by less than 2e-3 of itself (away from its zero) with twice as many.
const RINGS: usize = 48;

/// A sector between two radii, open at the outer one.
#[derive(Clone, Debug, PartialEq)]
pub struct RadialStub {
    /// From the mouth outwards: strip of the arc's width, and the ring's depth.
    rings: Vec<(Strip, f64)>,
    inner_radius_m: f64,
    outer_radius_m: f64,
    angle_rad: f64,
}

/// A radial stub between `inner_radius_m`, where it is fed over the whole arc, and `outer_radius_m`.
///
/// A chain of microstrip rings, each with the impedance, effective permittivity (with dispersion) and loss of a strip as wide as the ring's arc, and the open-end
/// extension of the outermost. The rings' constants are the closed forms, which are good to a fraction of a per cent.
///
/// # Valid range
/// Angles of 20 to 120 degrees; [`RadialStub::problems`] tells. Without fringing it becomes [`radial_line_reactance_ohm`] exactly.
///
/// # Source
/// H. A. Atwater, "Microstrip reactive circuit elements", IEEE Trans. MTT-31, 1983, pp. 488-491, and S. L. March, "Analyzing lossy radial-line stubs", IEEE Trans.
/// MTT-33, 1985, pp. 269-271 (both from memory): a radial line whose effective permittivity is the microstrip's. Here ring by ring, with the impedance too.
pub fn radial_stub(board: &AsBuilt, inner_radius_m: f64, outer_radius_m: f64, angle_rad: f64) -> RadialStub {
    radial_stub_in_rings(board, inner_radius_m, outer_radius_m, angle_rad, RINGS)
}

fn radial_stub_in_rings(board: &AsBuilt, inner_radius_m: f64, outer_radius_m: f64, angle_rad: f64, count: usize) -> RadialStub {
    let board = board.with_statics(StaticsModel::ClosedForm);
    let ratio = (outer_radius_m / inner_radius_m).ln();
    let radius = |i: usize| inner_radius_m * (ratio * i as f64 / count as f64).exp();
    let rings = (0..count)
        .map(|i| {
            let (from, to) = (radius(i), radius(i + 1));
            (Strip::new(&board, 0.5 * (from + to) * angle_rad), to - from)
        })
        .collect();
    RadialStub { rings, inner_radius_m, outer_radius_m, angle_rad }
}

impl RadialStub {
    /// Input admittance (S) at the inner arc.
    pub fn admittance_s(&self, f_hz: f64) -> Complex64 {
        let mut admittance = Complex64::new(0.0, 0.0);
        for (number, (strip, depth_m)) in self.rings.iter().enumerate().rev() {
            let mode = strip.at(f_hz);
            let mut length_m = *depth_m;
            if number + 1 == self.rings.len() {
                length_m += open_end::extension_m(strip);
                admittance += open_end::radiation_conductance_s(strip, f_hz);
            }
            let gamma = Complex64::new(mode.alpha_np_per_m(), mode.beta_rad_per_m(f_hz)) * length_m;
            let (y0, t) = (1.0 / mode.z0_ohm, gamma.tanh());
            admittance = y0 * (admittance + y0 * t) / (y0 + admittance * t);
        }
        admittance
    }

    /// Warnings `discontinuity-out-of-range`.
    pub fn problems(&self) -> Vec<Problem> {
        let source = "Atwater 1983; March 1985";
        [
            outside(source, "angle of a radial stub in degrees", self.angle_rad.to_degrees(), 20.0..=120.0),
            outside(source, "outer over inner radius of a radial stub", self.outer_radius_m / self.inner_radius_m, 1.5..=100.0),
        ]
        .into_iter()
        .flatten()
        .collect()
    }
}

/// Input reactance (ohm) of a sector of a radial line between plates, open at the outer radius, without fringing or loss.
///
/// # Source
/// J. P. Vinding, "Radial line stubs as elements in strip line circuits", NEREM Record 1967, pp. 108-109: exact for the radial TEM wave,
/// X = eta h / (angle ri) (J0(k ri) Y1(k ro) - Y0(k ri) J1(k ro)) / (J1(k ri) Y1(k ro) - Y1(k ri) J1(k ro)).
pub fn radial_line_reactance_ohm(er: f64, h_m: f64, inner_radius_m: f64, outer_radius_m: f64, angle_rad: f64, f_hz: f64) -> f64 {
    let k = 2.0 * std::f64::consts::PI * f_hz * er.sqrt() / C_M_PER_S;
    let (a, b) = (k * inner_radius_m, k * outer_radius_m);
    let numerator = libm::j0(a) * libm::y1(b) - libm::y0(a) * libm::j1(b);
    let denominator = libm::j1(a) * libm::y1(b) - libm::y1(a) * libm::j1(b);
    ETA0_OHM / er.sqrt() * h_m / (angle_rad * inner_radius_m) * numerator / denominator
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn without_fringing_it_is_the_radial_line() {
        // A laminate of 5 um: fringing and the open end vanish (each below 0.5 %).
        let board = AsBuilt { thickness_m: 5e-6, ..AsBuilt::for_tests(3.0, 0.0) }.without_loss();
        let (ri, ro, angle) = (0.5e-3, 8e-3, 1.2);
        let stub = radial_stub(&board, ri, ro, angle);
        for f in [0.3e9, 1e9, 3e9] {
            let exact = radial_line_reactance_ohm(3.0, 5e-6, ri, ro, angle, f);
            let ours = stub.admittance_s(f).inv();
            // The reactance runs through zero above 3 GHz: held against its capacitive part, whose two per cent are fringe and open end.
            let capacitive = 5e-6 / (2.0 * std::f64::consts::PI * f * 8.854188e-12 * 3.0 * 0.5 * angle * (ro * ro - ri * ri));
            assert!(ours.re.abs() < 1e-9 && (ours.im - exact).abs() < 0.02 * capacitive, "{f}: {ours} {exact}");
        }
    }

    #[test]
    fn twice_as_many_rings_change_nothing() {
        let board = AsBuilt::for_tests(9.8, 0.0).without_loss();
        for f in [0.5e9, 1.5e9] {
            let [a, b] = [RINGS, 2 * RINGS].map(|n| radial_stub_in_rings(&board, 0.3e-3, 6e-3, 1.0, n).admittance_s(f).im);
            // The accuracy claimed of the rings.
            assert!((a / b - 1.0).abs() < 2e-3, "{f}: {a} {b}");
        }
    }

    #[test]
    fn fringing_makes_it_larger() {
        let board = AsBuilt::for_tests(3.0, 0.0).without_loss();
        let (ri, ro, angle, f) = (0.4e-3, 5e-3, std::f64::consts::FRAC_PI_2, 1e8);
        let plain = -1.0 / radial_line_reactance_ohm(3.0, 0.762e-3, ri, ro, angle, f);
        let ours = radial_stub(&board, ri, ro, angle).admittance_s(f).im;
        // Fringe of some 0.5 h all round a sector 5 mm deep: a quarter to a half more than plates alone.
        assert!(ours > 1.15 * plain && ours < 1.7 * plain, "{ours} {plain}");
        assert_eq!(radial_stub(&board, ri, ro, angle).problems(), vec![]);
        assert_eq!(radial_stub(&board, ri, ro, 3.0).problems().len(), 1);
    }
}
