//! Widths and impedances printed with worked examples, against the closed form of E. Hammerstad, O. Jensen, IEEE MTT-S Digest 1980.

use stripwright::line::Strip;

use crate::rows::Table;
use crate::rows::thin;

pub fn rows() -> Result<usize, String> {
    let mut table = Table::new("Hammerstad & Jensen 1980");
    // Hong & Lancaster, stepped low-pass, er 10.8, h 1.27 mm: widths of 50, 93, 24 and 14 ohm printed, and guided wavelength at 1 GHz in mm.
    // Printed impedances have two digits (0.6 of the last; the book's 93 is 91.95 exactly, so 1.3 ohm), wavelengths three digits and the same line: 1 %.
    for (width_mm, z0_ohm, tolerance, wavelength_mm) in
        [(1.1, 50.0, 0.6, 112.0), (0.2, 93.0, 1.3, 118.0), (4.0, 24.0, 0.6, 105.0), (8.0, 14.0, 0.6, 101.0)]
    {
        let strip = Strip::new(&thin(10.8, 1.27e-3), width_mm * 1e-3);
        table.absolute(&format!("{width_mm} mm Z0"), strip.static_z0_ohm(), z0_ohm, tolerance);
        table.relative(&format!("{width_mm} mm wavelength"), strip.at(1e9).wavelength_m(1e9) * 1e3, wavelength_mm, 0.01);
    }
    // Hong & Lancaster, hairpin, er 6.15, h 1.27 mm: 1.0 mm is 68.3 ohm, 1.85 mm 50 ohm (three and two digits).
    let at = |er: f64, h_mm: f64, width_mm: f64| Strip::new(&thin(er, h_mm * 1e-3), width_mm * 1e-3);
    table.absolute("1.0 mm", at(6.15, 1.27, 1.0).static_z0_ohm(), 68.3, 0.15);
    table.absolute("1.85 mm", at(6.15, 1.27, 1.85).static_z0_ohm(), 50.0, 0.6);
    // Pozar, stepped-impedance example 8.6: er 4.2, h 1.58 mm: 11.3 mm is 20 ohm, 0.428 mm 120 ohm; eps_eff at 2.5 GHz 3.6797 and 2.8843 recomputed from the
    // printed lengths. The print rounds the width to three digits: 0.5 %.
    table.relative("11.3 mm", at(4.2, 1.58, 11.3).static_z0_ohm(), 20.0, 5e-3);
    table.relative("0.428 mm", at(4.2, 1.58, 0.428).static_z0_ohm(), 120.0, 5e-3);
    // Section lengths in mm printed for these degrees at 2.5 GHz: half of the last digit, and the degrees have three digits (0.4 %).
    for (width_mm, degrees, length_mm) in
        [(11.3, 11.8, 2.05), (0.428, 33.8, 6.63), (11.3, 44.3, 7.69), (0.428, 46.1, 9.04), (11.3, 32.4, 5.63), (0.428, 12.3, 2.41)]
    {
        let wavelength_mm = at(4.2, 1.58, width_mm).at(2.5e9).wavelength_m(2.5e9) * 1e3;
        table.absolute(&format!("{width_mm} mm, {degrees} deg"), wavelength_mm * degrees / 360.0, length_mm, 0.006);
    }
    table.finish()
}
