//! Quantities in files and arguments always carry their unit; inside, everything is SI.

/// What a quantity measures; decides which units are allowed.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Dimensionality {
    /// Metres inside; `nm`, `um`, `mm`, `cm`, `m`, `mil`, `in`.
    Length,
    /// Metres inside; the length units, and `oz` (copper foil weight per square foot, 34.3 um each).
    CopperThickness,
    /// Hertz inside; `Hz`, `kHz`, `MHz`, `GHz`.
    Frequency,
    /// Decibel inside; `dB`.
    Level,
    /// Ohm inside; `ohm`.
    Impedance,
    /// Seconds inside; `ps`, `ns`, `us`, `s`.
    Time,
    /// Degrees inside; `deg`.
    Angle,
    /// Siemens per metre inside; `MS/m`, `S/m`.
    Conductivity,
}

impl Dimensionality {
    /// Allowed units with their factor to the inside unit, the usual one first.
    pub fn units(self) -> &'static [(&'static str, f64)] {
        // 1 oz/ft2 of copper: 305 g/m2 over 8.89 g/cm3, the nominal 34.3 um of foil standards.
        const COPPER: &[(&str, f64)] =
            &[("um", 1e-6), ("oz", 34.3e-6), ("mm", 1e-3), ("mil", 25.4e-6), ("nm", 1e-9), ("cm", 1e-2), ("m", 1.0), ("in", 25.4e-3)];
        const LENGTH: &[(&str, f64)] =
            &[("mm", 1e-3), ("um", 1e-6), ("mil", 25.4e-6), ("nm", 1e-9), ("cm", 1e-2), ("m", 1.0), ("in", 25.4e-3)];
        match self {
            Dimensionality::Length => LENGTH,
            Dimensionality::CopperThickness => COPPER,
            Dimensionality::Frequency => &[("GHz", 1e9), ("MHz", 1e6), ("kHz", 1e3), ("Hz", 1.0)],
            Dimensionality::Level => &[("dB", 1.0)],
            Dimensionality::Impedance => &[("ohm", 1.0)],
            Dimensionality::Time => &[("ns", 1e-9), ("ps", 1e-12), ("us", 1e-6), ("s", 1.0)],
            Dimensionality::Angle => &[("deg", 1.0)],
            Dimensionality::Conductivity => &[("MS/m", 1e6), ("S/m", 1.0)],
        }
    }

    /// What the quantity is called in messages, with its article.
    pub fn noun(self) -> &'static str {
        match self {
            Dimensionality::Length => "a length",
            Dimensionality::CopperThickness => "a copper thickness",
            Dimensionality::Frequency => "a frequency",
            Dimensionality::Level => "a level in dB",
            Dimensionality::Impedance => "an impedance",
            Dimensionality::Time => "a time",
            Dimensionality::Angle => "an angle",
            Dimensionality::Conductivity => "a conductivity",
        }
    }
}

/// Reads `"0.762 mm"` into SI (dB and degrees stay as they are). The error says what is wrong and what is allowed.
pub fn parse_quantity(text: &str, kind: Dimensionality) -> Result<f64, String> {
    let text = text.trim();
    // The unit is the trailing run of letters (and the stroke of a quotient); an exponent's `e` is always followed by a digit or sign, so it stays with the number.
    let unit_at = text
        .rfind(|c: char| !c.is_alphabetic() && c != 'µ' && c != '/')
        .map_or(0, |i| i + text[i..].chars().next().map_or(1, char::len_utf8));
    let (number, unit) = (text[..unit_at].trim(), text[unit_at..].trim());
    let units = || kind.units().iter().map(|u| u.0).collect::<Vec<_>>().join(", ");
    if unit.is_empty() {
        return Err(format!("\"{text}\" has no unit; {} takes {}", kind.noun(), units()));
    }
    if number.is_empty() {
        return Err(format!("\"{text}\" is not a number with a unit; {} looks like \"1.5 {}\"", kind.noun(), kind.units()[0].0));
    }
    let Some((_, factor)) = kind.units().iter().find(|u| u.0 == unit || (unit == "µm" && u.0 == "um")) else {
        let alike =
            kind.units().iter().find(|u| u.0.eq_ignore_ascii_case(unit)).map_or(String::new(), |u| format!(" (did you mean {}?)", u.0));
        return Err(format!("unit \"{unit}\" does not measure {}; allowed: {}{alike}", kind.noun(), units()));
    };
    match number.parse::<f64>() {
        Ok(value) if value.is_finite() && scaled(number, value, *factor).is_finite() => Ok(scaled(number, value, *factor)),
        Ok(_) => Err(format!("\"{text}\" is not finite")),
        Err(_) => Err(format!("\"{number}\" is not a number; {} looks like \"1.5 {}\"", kind.noun(), kind.units()[0].0)),
    }
}

/// `value` (as written in `number`) times a unit's factor. A power of ten moves the decimal point of the text, so that the result
/// is the double nearest to the decimal number that was written; a product would be one rounding off now and then.
fn scaled(number: &str, value: f64, factor: f64) -> f64 {
    let Some(power) = power_of_ten(factor) else { return value * factor };
    let (mantissa, exponent) = match number.split_once(['e', 'E']) {
        Some((mantissa, exponent)) => (mantissa, exponent.parse::<i32>().ok()),
        None => (number, Some(0)),
    };
    exponent.and_then(|e| format!("{mantissa}e{}", e.saturating_add(power)).parse().ok()).unwrap_or(value * factor)
}

/// The exponent when `factor` is one of the powers of ten that units use.
fn power_of_ten(factor: f64) -> Option<i32> {
    (-12..=12).find(|&power| format!("1e{power}").parse() == Ok(factor))
}

/// Writes an SI value so that [`parse_quantity`] reads the same `f64` back; `unit` must be one of the kind's units.
///
/// Units that are a power of ten of the inside unit are exact for every finite value; `mil`, `in` and `oz` where a decimal exists.
pub fn format_quantity(value: f64, kind: Dimensionality, unit: &str) -> String {
    let factor = kind.units().iter().find(|u| u.0 == unit).map_or(1.0, |u| u.1);
    if let Some(power) = power_of_ten(factor).filter(|_| value.is_finite()) {
        return format!("{} {unit}", shifted(value, -power));
    }
    let scaled = value / factor;
    // Shortest of the decimals that reads back to the same bits, so that files do not show 0.30000000000000004.
    (0..=17)
        .map(|digits| format!("{scaled:.digits$}"))
        .find(|text| text.parse::<f64>().is_ok_and(|v| v * factor == value))
        .map_or_else(|| format!("{scaled} {unit}"), |text| format!("{text} {unit}"))
}

/// The shortest decimal of `value` with its point moved `by` places to the right.
fn shifted(value: f64, by: i32) -> String {
    /// Beyond this many places the plain notation is a row of zeros nobody counts.
    const PLAIN: i32 = 15;
    let text = format!("{value:e}");
    let (mantissa, exponent) = text.split_once('e').unwrap_or((&text, "0"));
    let exponent = exponent.parse::<i32>().unwrap_or(0) + by;
    let (sign, mantissa) = mantissa.strip_prefix('-').map_or(("", mantissa), |m| ("-", m));
    let digits: String = mantissa.chars().filter(char::is_ascii_digit).collect();
    if digits == "0" {
        return format!("{sign}0");
    }
    if !(-PLAIN..=PLAIN).contains(&exponent) {
        return format!("{sign}{mantissa}e{exponent}");
    }
    if exponent < 0 {
        return format!("{sign}0.{}{digits}", "0".repeat((-exponent - 1) as usize));
    }
    let whole = exponent as usize + 1;
    match digits.len() {
        n if n <= whole => format!("{sign}{digits}{}", "0".repeat(whole - n)),
        _ => format!("{sign}{}.{}", &digits[..whole], &digits[whole..]),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn reads_units_and_refuses_what_is_not_one() {
        let length = |t| parse_quantity(t, Dimensionality::Length);
        assert!((length("0.762 mm").unwrap_or(0.0) - 0.762e-3).abs() < 1e-18);
        assert!((length("30mil").unwrap_or(0.0) - 0.762e-3).abs() < 1e-18);
        assert!((length("1e-1 mm").unwrap_or(0.0) - 1e-4).abs() < 1e-18);
        for bad in ["0.762", "mm", "", "nan mm", "inf mm", "1 GHz", "1 MM", "1,5 mm", "1e400 mm", "- mm", "é", "1 é"] {
            assert!(length(bad).is_err(), "{bad} must be refused");
        }
    }

    #[test]
    fn writes_what_reads_back_to_the_same_bits() {
        for value in [0.762e-3, 1.0 / 3.0 * 1e-3, 17.5e-6, 1e-9, 123.456789e-3] {
            let text = format_quantity(value, Dimensionality::Length, "mm");
            assert_eq!(parse_quantity(&text, Dimensionality::Length), Ok(value), "{text}");
        }
    }

    #[test]
    fn every_double_survives_a_decimal_unit() {
        // A walk over the doubles by a fixed odd stride of their bits: all magnitudes a board can have, no pattern in the digits.
        let mut bits = 1e-9f64.to_bits();
        while f64::from_bits(bits) < 10.0 {
            let value = f64::from_bits(bits);
            for unit in ["mm", "um", "nm", "m"] {
                let text = format_quantity(value, Dimensionality::Length, unit);
                assert_eq!(parse_quantity(&text, Dimensionality::Length), Ok(value), "{text}");
            }
            bits += 12_345_678_912_345;
        }
        assert_eq!(format_quantity(-0.031e-3, Dimensionality::Length, "mm"), "-0.031 mm");
        assert_eq!(format_quantity(2.45e9, Dimensionality::Frequency, "GHz"), "2.45 GHz");
        assert_eq!(format_quantity(5.8e7, Dimensionality::Conductivity, "MS/m"), "58 MS/m");
        assert_eq!(parse_quantity("58 MS/m", Dimensionality::Conductivity), Ok(5.8e7));
        assert_eq!(format_quantity(1e-3, Dimensionality::Length, "mm"), "1 mm");
        assert_eq!(format_quantity(0.0, Dimensionality::Length, "mm"), "0 mm");
    }
}
