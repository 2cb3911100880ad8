//! Touchstone files against the worked examples of the IBIS Open Forum's *Touchstone File Format Specification* (Rev 1.1), and round trips.

use num_complex::Complex64;
use stripwright::network::touchstone::{read, write};
use stripwright::network::{Method, Response};

/// The specification prints three to six digits; the products below are exact to `f64`.
const EXACT: f64 = 1e-12;

fn close(found: Complex64, re: f64, im: f64, tolerance: f64) {
    assert!((found - Complex64::new(re, im)).norm() < tolerance, "{found} is not {re} {im}");
}

#[test]
fn one_port_s_in_magnitude_and_angle() {
    // Example of a 1-port S file; the values as polar numbers worked out by hand to 15 digits.
    let file = read("! 1-port S-parameter file\n# MHz S MA R 50\n2.000 0.894 -12.136\n", 1).unwrap();
    assert_eq!(file.f_hz, [2e6]);
    close(file.values[0][0], 0.874020294860635, -0.187948195446853, EXACT);
}

#[test]
fn one_port_z_is_normalised_in_version_1() {
    let text = "# MHz Z MA R 75\n100 0.99 -4\n200 0.80 -22\n300 0.707 -45\n400 0.40 -62\n500 0.01 -89\n";
    let file = read(text, 1).unwrap();
    assert_eq!((file.parameter, file.f_hz.len()), ('Z', 5));
    // 75 ohm times 0.99 at -4 degrees; seven decimals are printed.
    close(file.values[0][0] * file.reference_ohm[0], 74.0691307, -5.1794182, 1e-7);
}

#[test]
fn two_ports_run_11_21_12_22() {
    let file = read("# kHz H MA R 1\n2 .95 -26 3.57 157 .04 76 .66 -14\n", 2).unwrap();
    close(file.values[0][1], -3.2862023, 1.3949101, 1e-7);
    close(file.values[0][2], 0.0096769, 0.0388118, 1e-7);
    assert_eq!(file.f_hz, [2e3]);
}

#[test]
fn two_port_s_as_real_and_imaginary() {
    let text = "# GHz S RI R 50.0\n\
        1.0000 0.3926 -0.1211 -0.0003 -0.0021 -0.0003 -0.0021 0.3926 -0.1211\n\
        2.0000 0.3517 -0.3054 -0.0096 -0.0298 -0.0096 -0.0298 0.3517 -0.3054\n\
        10.000 0.3419 0.3336 -0.0134 0.0379 -0.0134 0.0379 0.3419 0.3336\n";
    let response = read(text, 2).unwrap().response().unwrap();
    assert_eq!(response.f_hz, [1e9, 2e9, 10e9]);
    close(response.s[2][1], -0.0134, 0.0379, EXACT);
}

#[test]
fn a_bare_option_line_and_a_noise_block() {
    let text = "#\n2 .95 -26 3.57 157 .04 76 .66 -14\n22 .60 -144 1.30 40 .14 40 .56 -85\n! NOISE PARAMETERS\n4 .7 .64 69 .38\n18 2.7 .46 -33 .40\n";
    let file = read(text, 2).unwrap();
    assert_eq!(
        (file.parameter, file.reference_ohm.as_slice(), file.f_hz.as_slice()),
        ('S', [50.0, 50.0].as_slice(), [2e9, 22e9].as_slice())
    );
    assert!((file.values[0][1].norm() - 3.57).abs() < EXACT && (file.values[0][2].norm() - 0.04).abs() < EXACT);
    assert_eq!(file.noise, [[4e9, 0.7, 0.64, 69.0, 0.38], [18e9, 2.7, 0.46, -33.0, 0.40]]);
}

#[test]
fn four_ports_row_by_row_over_several_lines() {
    let text = "# GHz S MA R 50\n5.00000 0.60 161.24 0.40 -42.20 0.42 -66.58 0.53 -79.34 ! row 1\n\
        \t0.40 -42.20 0.60 161.20 0.53 -79.34 0.42 -66.58\r\n\
        0.42 -66.58 0.53 -79.34 0.60 161.24 0.40 -42.20\n0.53 -79.34 0.42 -66.58 0.40 -42.20 0.60 161.24\n";
    let file = read(text, 4).unwrap();
    assert_eq!(file.values[0].len(), 16);
    // S22 alone has 161.20 degrees in the printed example.
    assert!((file.values[0][5].arg().to_degrees() - 161.20).abs() < 1e-9);
}

#[test]
fn what_is_written_reads_back() {
    // Not reciprocal and not symmetric, so that a swapped order shows; a zero and a frequency that is no whole hertz besides.
    let c = Complex64::new;
    let s =
        vec![[c(0.1, 0.2), c(0.3, -0.4), c(-0.5, 0.6), c(0.7, 0.01)], [c(0.0, 0.0), c(1.0 / 3.0, 0.0), c(0.0, -2.0 / 3.0), c(1e-9, 0.0)]];
    for z0_ohm in [[50.0, 50.0], [50.0, 75.0]] {
        let response = Response { method: Method::Network, z0_ohm, f_hz: vec![1.0e9, 1.0e9 + 1.0 / 3.0], s: s.clone() };
        let mut text = Vec::new();
        write(&response, &["plane: 50 \u{3a9}\nsecond line".into()], &mut text).unwrap();
        let text = String::from_utf8(text).unwrap();
        assert!(text.starts_with("! plane: 50 ohm\n! second line\n# Hz S RI R 50"), "{text}");
        let back = read(&text, 2).unwrap().response().unwrap();
        assert_eq!((back.z0_ohm, &back.f_hz), (z0_ohm, &response.f_hz));
        for (mine, theirs) in back.s.iter().flatten().zip(response.s.iter().flatten()) {
            // Thirteen significant digits are written.
            assert!((mine - theirs).norm() < 1e-12, "{mine} {theirs}");
        }
    }
}

#[test]
fn formats_agree() {
    let polar = read("# GHz S MA R 50\n1 0.5 30\n", 1).unwrap().values[0][0];
    let level = read("# DB R 50 S GHz\n1 -6.020599913279624 30\n", 1).unwrap().values[0][0];
    // -20 log10 2 to sixteen digits.
    assert!((polar - level).norm() < EXACT);
}

#[test]
fn faults_are_named_with_their_line() {
    for (text, ports, what) in [
        ("1 2 3\n", 1, "line 1"),
        ("# GHz S MA R 50\n1 x 3\n", 1, "\"x\""),
        ("# GHz S MA R 50\n1 nan 3\n", 1, "finite"),
        ("# GHz S MA R 50\n1 2\n", 1, "takes 3"),
        ("# GHz Q MA R 50\n", 1, "\"Q\""),
        ("# GHz S MA R -50\n1 1 1\n", 1, "not positive"),
        ("# GHz S MA R 50\n2 1 1\n1 1 1\n", 1, "not above"),
        ("[Version] 2.0\n", 2, "version 2"),
        ("# GHz S MA R 50\n", 2, "no numbers"),
        ("", 2, "no option line"),
        ("# GHz H MA R 50\n1 2 3\n", 1, "two ports"),
    ] {
        let problem = read(text, ports).unwrap_err();
        assert!(problem.message.contains(what), "{text:?}: {problem}");
    }
}
