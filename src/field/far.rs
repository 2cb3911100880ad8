//! What does the box add: the smooth part of the potential integrals as a sum over a few hundred modes, once per frequency.

use std::f64::consts::PI;

use faer::linalg::matmul::matmul;
use faer::{Accum, Mat, Par};
use num_complex::Complex64;
use rayon::prelude::*;

use super::grid::{Axis, Family, Patch, Profile};
use super::kernel::{Kernels, near_share};
use super::near::{Near, rows_of_groups};
use super::stack::{EPS0, MU0, Stack};

/// Where the far part may stop; see `Modes::new`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Split {
    /// The highest mode decays as exp(-2 times this) over the thinner layer at the copper.
    pub layer_decay: f64,
    /// Argument of the error function at the highest mode.
    pub gaussian: f64,
}

impl Default for Split {
    /// Changes S by some 1e-7 against twice as many modes.
    fn default() -> Split {
        Split { layer_decay: 6.5, gaussian: 3.6 }
    }
}

/// The modes of the far part and the Gaussian cut that goes with them.
#[derive(Clone, Debug, PartialEq)]
pub struct Modes {
    size_m: [f64; 2],
    /// Greatest transverse wave number, 1/m.
    pub k_max: f64,
    /// Where the near part ends.
    pub cut_m: f64,
    /// Number of modes along x and y, the zeroth included.
    pub count: [usize; 2],
    /// What of `1/k` and `1/k^3` the near part has, for every mode; empty until [`Modes::prepared`].
    shares: Vec<(f64, f64)>,
}

impl Modes {
    /// Enough modes for a stack in a box up to a frequency.
    pub fn new(stack: &Stack, size_m: [f64; 2], highest_hz: f64, split: Split) -> Modes {
        let medium = 2.0 * PI * highest_hz * (MU0 * EPS0 * stack.greatest_permittivity()).sqrt();
        let shorter = size_m[0].min(size_m[1]);
        // One mirror image per wall is enough for the near part as long as the cut is a sixteenth of the box.
        let k_max = (split.layer_decay / stack.nearest_interface_m()).max(8.0 * medium).max(16.0 * split.gaussian / shorter);
        let count = size_m.map(|length| (k_max * length / PI).floor() as usize + 1);
        Modes { size_m, k_max, cut_m: split.gaussian / k_max, count, shares: Vec::new() }
    }

    /// The same with what does not change with frequency.
    pub fn prepared(mut self) -> Modes {
        let modes = self.count[0] * self.count[1];
        self.shares = (0..modes).into_par_iter().map(|i| near_share(self.wave_number(i), self.cut_m)).collect();
        self
    }

    /// Transverse wave number of a mode, numbered along y first.
    fn wave_number(&self, mode: usize) -> f64 {
        let columns = self.count[1];
        ((mode / columns) as f64 * PI / self.size_m[0]).hypot((mode % columns) as f64 * PI / self.size_m[1])
    }

    /// The far kernels of vector and scalar potential of every mode, x along the rows.
    pub fn kernels(&self, kernels: &Kernels) -> [Spectrum; 2] {
        let [columns, rows] = [self.count[1], self.count[0]];
        let values: Vec<[Complex64; 2]> = (0..rows * columns)
            .into_par_iter()
            .zip(&self.shares)
            .map(|(i, &(one, three))| {
                let k = self.wave_number(i);
                // The zeroth mode carries no current along either axis.
                if i == 0 || k > self.k_max {
                    return [Complex64::from(0.0); 2];
                }
                let (l, p) = kernels.at(k);
                [l - kernels.l1 * one - kernels.l3 * three, p - kernels.p1 * one - kernels.p3 * three]
            })
            .collect();
        [0, 1].map(|which| Spectrum {
            real: Mat::from_fn(rows, columns, |m, n| values[m * columns + n][which].re),
            imaginary: Mat::from_fn(rows, columns, |m, n| values[m * columns + n][which].im),
        })
    }
}

/// A kernel for every mode.
pub struct Spectrum {
    real: Mat<f64>,
    imaginary: Mat<f64>,
}

/// Transforms of a family's functions: how much of each mode they carry.
#[derive(Clone, Debug)]
pub struct Transforms {
    /// Inner functions of each patch: modes by functions.
    inner: Vec<Mat<f64>>,
    /// Outer functions of each patch: modes by functions.
    outer: Vec<Mat<f64>>,
}

impl Transforms {
    /// Transforms of every function of a family.
    pub fn new(family: &Family, patches: &[Patch], modes: &Modes) -> Transforms {
        let of = |axis: Axis, profile: Profile| {
            let at = if axis == Axis::X { 0 } else { 1 };
            patches.iter().map(|patch| transform(patch.lines(axis), profile, modes.size_m[at], modes.count[at])).collect()
        };
        Transforms { inner: of(Axis::X, family.inner), outer: of(Axis::Y, family.outer) }
    }
}

/// Pulses in the sine, triangles in the cosine series of the interval, normalised so that the heat kernel's coefficients are its eigenvalues.
fn transform(lines: &[f64], profile: Profile, length_m: f64, modes: usize) -> Mat<f64> {
    let functions = match profile {
        Profile::Pulse => lines.len() - 1,
        Profile::Triangle => lines.len(),
    };
    Mat::from_fn(modes, functions, |m, i| {
        let k = m as f64 * PI / length_m;
        let norm = (2.0 / length_m).sqrt();
        match profile {
            // Products instead of differences of cosines: no digits lost for small k.
            Profile::Pulse => {
                let (middle, half) = (0.5 * (lines[i] + lines[i + 1]), 0.5 * (lines[i + 1] - lines[i]));
                norm * 2.0 * half * (k * middle).sin() * sinc(k * half)
            }
            Profile::Triangle => {
                let below = if i > 0 { lines[i] - lines[i - 1] } else { 0.0 };
                let above = if i + 1 < lines.len() { lines[i + 1] - lines[i] } else { 0.0 };
                if m == 0 {
                    return 0.5 * (below + above) / length_m.sqrt();
                }
                let (sine, cosine) = (k * lines[i]).sin_cos();
                // int_0^h (1 - u/h) cos(ku) du and the same with the sine.
                let even = |h: f64| 0.5 * h * sinc(0.5 * k * h).powi(2);
                let odd = |h: f64| if h > 0.0 { one_minus_sinc(k * h) / k } else { 0.0 };
                norm * (cosine * (even(below) + even(above)) + sine * (odd(below) - odd(above)))
            }
        }
    })
}

fn sinc(x: f64) -> f64 {
    if x.abs() < 1e-8 { 1.0 } else { x.sin() / x }
}

/// `1 - sin(x)/x`, without cancellation.
fn one_minus_sinc(x: f64) -> f64 {
    if x.abs() < 1e-2 { x * x / 6.0 * (1.0 - x * x / 20.0 * (1.0 - x * x / 42.0)) } else { 1.0 - x.sin() / x }
}

/// A symmetric matrix over a family, row-major, filled up to the end of each row's own group.
#[derive(Clone, Debug)]
pub struct Potential {
    /// Real part.
    pub real: Vec<f64>,
    /// Imaginary part; empty without loss.
    pub imaginary: Vec<f64>,
}

/// Near and far part together at one frequency: `first` and `third` are the large-k coefficients of the kernel.
pub fn potential(
    family: &Family,
    near: &Near,
    transforms: &Transforms,
    spectrum: &Spectrum,
    [first, third]: [Complex64; 2],
    lossless: bool,
) -> Potential {
    let n = family.size;
    let mix = |one: f64, three: f64| -> Vec<f64> { near.first.par_iter().zip(&near.third).map(|(a, b)| one * a + three * b).collect() };
    let real = mix(first.re, third.re);
    let imaginary = if lossless { Vec::new() } else { mix(first.im, third.im) };
    let mut potential = Potential { real, imaginary };
    for (matrix, kernel) in [(&mut potential.real, &spectrum.real), (&mut potential.imaginary, &spectrum.imaginary)] {
        if matrix.is_empty() {
            continue;
        }
        let work: Vec<_> = family.groups.iter().zip(rows_of_groups(family, matrix)).enumerate().collect();
        work.into_par_iter().for_each(|(g, (group, rows))| {
            let others = &family.groups[..=g];
            let mine = transforms.outer[group.patch].col(group.outer);
            let products = Mat::from_fn(kernel.ncols(), others.len(), |mode, o| {
                mine[mode] * transforms.outer[others[o].patch][(mode, others[o].outer)]
            });
            let mut weights = Mat::<f64>::zeros(kernel.nrows(), others.len());
            matmul(weights.as_mut(), Accum::Replace, kernel.as_ref(), products.as_ref(), 1.0, Par::Seq);
            let inner = &transforms.inner[group.patch];
            let (modes, count) = (kernel.nrows(), group.inner.len());
            let mut start = 0;
            // Neighbouring groups mostly have the same inner functions: one product for each run of them.
            while let Some(first) = others.get(start) {
                let run = others[start..].iter().take_while(|other| (other.patch, &other.inner) == (first.patch, &first.inner)).count();
                let scaled =
                    Mat::from_fn(modes, count * run, |mode, i| inner[(mode, group.inner[i % count])] * weights[(mode, start + i / count)]);
                let theirs = &transforms.inner[first.patch];
                let gathered = Mat::from_fn(modes, first.inner.len(), |mode, column| theirs[(mode, first.inner[column])]);
                // Transposed, so that its columns are stretches of the row-major rows.
                let mut block = Mat::<f64>::zeros(first.inner.len(), count * run);
                matmul(block.as_mut(), Accum::Replace, gathered.transpose(), scaled.as_ref(), 1.0, Par::Seq);
                for (o, other) in others[start..start + run].iter().enumerate() {
                    for row in 0..count {
                        let at = row * n + other.start;
                        let sums = block.col(o * count + row);
                        for (value, sum) in rows[at..at + other.inner.len()].iter_mut().zip(sums.iter()) {
                            *value += sum;
                        }
                    }
                }
                start += run;
            }
        });
    }
    potential
}
