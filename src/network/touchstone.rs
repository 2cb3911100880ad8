//! S-parameters as a Touchstone 1.1 file, and such files read back.
//!
//! # Source
//! IBIS Open Forum, *Touchstone File Format Specification*, Rev 1.1 (2003 draft): option line, two-port order N11 N21 N12 N22, noise block.

use std::io;
use std::io::Write;

use num_complex::Complex64;

use crate::base::Place;
use crate::base::Problem;
use crate::base::spelt_out;
use crate::network::Method;
use crate::network::Response;
use crate::order::Order;

/// The network data of a file.
#[derive(Clone, Debug, PartialEq)]
pub struct Touchstone {
    /// `S`, `Y`, `Z`, `H` or `G`; all but `S` normalised to the reference, as version 1 files have them.
    pub parameter: char,
    /// Reference of each port.
    pub reference_ohm: Vec<f64>,
    /// Frequencies, strictly increasing.
    pub f_hz: Vec<f64>,
    /// At each frequency the values in the file's order: two ports 11 21 12 22, others row by row.
    pub values: Vec<Vec<Complex64>>,
    /// Noise rows: frequency in hertz, then the four numbers as they stand.
    pub noise: Vec<[f64; 5]>,
}

impl Touchstone {
    /// The S-parameters of a two-port; `None` for anything else.
    pub fn response(&self) -> Option<Response> {
        let &[one, two] = self.reference_ohm.as_slice() else { return None };
        if self.parameter != 'S' {
            return None;
        }
        let s = self.values.iter().map(|v| <[Complex64; 4]>::try_from(v.as_slice()).ok()).collect::<Option<Vec<_>>>()?;
        Some(Response { method: Method::Network, z0_ohm: [one, two], f_hz: self.f_hz.clone(), s })
    }
}

/// What a reader of a predicted response must know: order, method, reference planes, what is in it.
pub fn comments(order: &Order) -> Vec<String> {
    vec![
        format!("{}, revision {}: {}", order.name, order.revision, order.title),
        "predicted by the network model of the drawn layout, not measured".into(),
        "reference planes: port 1 and port 2 at the board's edge, where the connector touches; connectors not included".into(),
        "included: launch pads and tapers, feeds, steps, open ends with radiation estimate, dispersion, conductor loss with roughness, dielectric loss".into(),
    ]
}

/// Writes a response in hertz, real and imaginary parts, twelve decimals. The comments come first, one line each.
pub fn write(response: &Response, comments: &[String], out: &mut dyn Write) -> io::Result<()> {
    let mut out = io::BufWriter::new(out);
    for comment in comments {
        for line in comment.lines() {
            let (line, _) = spelt_out(line);
            writeln!(out, "! {line}")?;
        }
    }
    let [one, two] = response.z0_ohm;
    if one == two {
        writeln!(out, "# Hz S RI R {one}")?;
    } else {
        writeln!(out, "# Hz S RI R {one} {two}")?;
    }
    writeln!(out, "! frequency, then S11, S21, S12, S22 as real and imaginary part")?;
    for (f_hz, s) in response.f_hz.iter().zip(&response.s) {
        write!(out, "{f_hz}")?;
        // The file's order is the response's own: S11 S21 S12 S22.
        for value in s {
            write!(out, " {:.12e} {:.12e}", value.re, value.im)?;
        }
        writeln!(out)?;
    }
    out.flush()
}

#[derive(Clone, Copy)]
enum Pair {
    Decibel,
    Magnitude,
    RealImaginary,
}

impl Pair {
    fn value(self, a: f64, b: f64) -> Complex64 {
        match self {
            Pair::Decibel => Complex64::from_polar(10f64.powf(a / 20.0), b.to_radians()),
            Pair::Magnitude => Complex64::from_polar(a, b.to_radians()),
            Pair::RealImaginary => Complex64::new(a, b),
        }
    }
}

struct Options {
    unit_hz: f64,
    parameter: char,
    pair: Pair,
    reference_ohm: Vec<f64>,
}

/// Reads a version 1 file of `ports` ports (the file itself does not say how many; its ending does: `.s2p`).
///
/// # Errors
/// `touchstone-unreadable`, with the line.
pub fn read(text: &str, ports: usize) -> Result<Touchstone, Problem> {
    let fault = |line: usize, what: String| {
        let message = if line == 0 { what } else { format!("line {line}: {what}") };
        Problem::error("touchstone-unreadable", Place::Whole, message, "a version 1 file has one line `# GHz S MA R 50`, then numbers")
    };
    if ports == 0 {
        return Err(fault(0, "a network has at least one port".into()));
    }
    let mut options: Option<Options> = None;
    // Each number with its line; a row begins with the number of ports, not with the line, since rows may continue.
    let mut numbers: Vec<(usize, f64)> = Vec::new();
    for (line, text) in (1..).zip(text.lines()) {
        let text = text.split('!').next().unwrap_or_default().trim();
        if text.is_empty() {
            continue;
        }
        if text.starts_with('[') {
            return Err(fault(line, format!("\"{text}\" is a keyword of version 2; only version 1 is read")));
        }
        if let Some(rest) = text.strip_prefix('#') {
            // Later option lines are ignored, as the format says.
            if options.is_none() {
                options = Some(read_options(rest, ports).map_err(|what| fault(line, what))?);
            }
            continue;
        }
        if options.is_none() {
            return Err(fault(line, "numbers before the option line".into()));
        }
        for token in text.split_whitespace() {
            match token.parse::<f64>() {
                Ok(value) if value.is_finite() => numbers.push((line, value)),
                _ => return Err(fault(line, format!("\"{token}\" is not a finite number"))),
            }
        }
    }
    let Some(options) = options else { return Err(fault(0, "there is no option line".into())) };
    if matches!(options.parameter, 'H' | 'G') && ports != 2 {
        return Err(fault(0, format!("{} parameters describe two ports, not {ports}", options.parameter)));
    }
    let Options { unit_hz, parameter, pair, reference_ohm } = options;
    let mut found = Touchstone { parameter, reference_ohm, f_hz: Vec::new(), values: Vec::new(), noise: Vec::new() };
    let row = 1 + 2 * ports * ports;
    let mut rest = numbers.as_slice();
    while let Some(&(line, frequency)) = rest.first() {
        let f_hz = frequency * unit_hz;
        let falls_back = found.f_hz.last().is_some_and(|last| f_hz <= *last);
        if falls_back && ports == 2 {
            break;
        }
        if falls_back || f_hz < 0.0 {
            return Err(fault(line, format!("frequency {frequency} is not above the one before")));
        }
        let Some((taken, left)) = rest.split_at_checked(row) else {
            return Err(fault(line, format!("{} numbers where a frequency of {ports} port(s) takes {row}", rest.len())));
        };
        found.f_hz.push(f_hz);
        let (pairs, _) = taken[1..].as_chunks::<2>();
        found.values.push(pairs.iter().map(|[(_, a), (_, b)]| pair.value(*a, *b)).collect());
        rest = left;
    }
    // What falls back in frequency is the noise block: five numbers a row.
    while let Some(&(line, frequency)) = rest.first() {
        let Some((&[(_, f), (_, a), (_, b), (_, c), (_, d)], left)) = rest.split_first_chunk::<5>() else {
            return Err(fault(line, format!("{} numbers where a row of noise takes 5", rest.len())));
        };
        if found.noise.last().is_some_and(|last| f * unit_hz <= last[0]) {
            return Err(fault(line, format!("frequency {frequency} is not above the one before")));
        }
        found.noise.push([f * unit_hz, a, b, c, d]);
        rest = left;
    }
    if found.f_hz.is_empty() {
        return Err(fault(0, "there are no numbers".into()));
    }
    Ok(found)
}

/// `GHz S MA R 50` in any order; what is left out is just that.
fn read_options(text: &str, ports: usize) -> Result<Options, String> {
    let mut options = Options { unit_hz: 1e9, parameter: 'S', pair: Pair::Magnitude, reference_ohm: vec![50.0] };
    let mut tokens = text.split_whitespace().peekable();
    while let Some(token) = tokens.next() {
        match token.to_ascii_uppercase().as_str() {
            "HZ" => options.unit_hz = 1.0,
            "KHZ" => options.unit_hz = 1e3,
            "MHZ" => options.unit_hz = 1e6,
            "GHZ" => options.unit_hz = 1e9,
            "S" => options.parameter = 'S',
            "Y" => options.parameter = 'Y',
            "Z" => options.parameter = 'Z',
            "H" => options.parameter = 'H',
            "G" => options.parameter = 'G',
            "DB" => options.pair = Pair::Decibel,
            "MA" => options.pair = Pair::Magnitude,
            "RI" => options.pair = Pair::RealImaginary,
            "R" => {
                options.reference_ohm.clear();
                while let Some(value) = tokens.peek().and_then(|token| token.parse::<f64>().ok()) {
                    if !(value > 0.0 && value.is_finite()) {
                        return Err(format!("a reference of {value} ohm is not positive"));
                    }
                    options.reference_ohm.push(value);
                    tokens.next();
                }
            }
            _ => return Err(format!("\"{token}\" is no option; known: Hz kHz MHz GHz, S Y Z H G, DB MA RI, R with ohms")),
        }
    }
    if let [one] = options.reference_ohm.as_slice() {
        options.reference_ohm = vec![*one; ports];
    }
    if options.reference_ohm.len() != ports {
        return Err(format!("{} references for {ports} port(s)", options.reference_ohm.len()));
    }
    Ok(options)
}
