//! What potential does a line charge above the laminate make, beyond its own logarithm and that of its image in the surface?
//!
//! In units 1/eps0, for charge and field point in the air at heights z, z' above the laminate surface:
//! G = -(1/2 pi) (ln r_direct + g ln r_image) + R, with g = (1 - e)/(1 + e) of the top layer and R smooth on the scale of the
//! top layer or of the room under the lid. R is tabulated once per stackup: over x as piecewise cubics on a grid whose step grows with x
//! (64 cells per octave of x + 8 scales, so the cell is read off the bits of a float), over z and z' at the same few heights.
//!
//! Spectral form: the surface admittance of the layers from the ground up, as in transmission-line theory; a uniaxial layer is an isotropic
//! one of permittivity sqrt(in-plane * normal) and height h sqrt(in-plane / normal) (scaling of the z axis).
//! With side walls the integral over k becomes the sum over k = n pi / P, P the distance of the walls: exact, no images are cut off.

use super::geometry::LayerOf;
use super::logarithm::fast_ln;

/// Cells per octave of the table: 2^6.
const CELL_BITS: u32 = 6;
const CELLS_PER_OCTAVE: usize = 1 << CELL_BITS;
/// Octaves at most: x up to 8 * (2^9 - 1) scales, above the span that `check` lets pass.
pub(super) const OCTAVES_AT_MOST: usize = 9;
/// The first octave spans this many scales, so that its step is an eighth of the scale.
const FIRST_OCTAVE_SCALES: f64 = 8.0;
/// exp(-2 * this) is what is left of the remainder's spectrum where the integral stops.
const SPECTRUM_END: f64 = 13.0;
/// Relative error of the interpolation over z allowed when the number of heights is chosen.
const HEIGHT_TOLERANCE: f64 = 2e-6;
/// Heights at most.
pub(super) const HEIGHTS_AT_MOST: usize = 16;
/// Nodes and weights of the 8-point Gauss-Legendre rule on [-1, 1] (positive half).
pub(super) const GAUSS_8: [(f64, f64); 4] = [
    (0.183_434_642_495_649_8, 0.362_683_783_378_362),
    (0.525_532_409_916_329, 0.313_706_645_877_887_3),
    (0.796_666_477_413_626_7, 0.222_381_034_453_374_48),
    (0.960_289_856_497_536_3, 0.101_228_536_290_376_26),
];

/// Layers, lid and walls as the Green function sees them.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Medium {
    /// Mean permittivity and reduced thickness from the ground up.
    layers: Vec<(f64, f64)>,
    lid_m: Option<f64>,
    /// Distance of the side walls from each other.
    walls_m: Option<f64>,
    copper_thickness_m: f64,
}

impl Medium {
    pub(super) fn new(layers: &[LayerOf], lid_m: Option<f64>, walls_m: Option<f64>, copper_thickness_m: f64) -> Medium {
        let layers = layers.iter().map(|layer| (layer.mean_permittivity(), layer.reduced_thickness_m())).collect();
        Medium { layers, lid_m, walls_m, copper_thickness_m }
    }

    /// The same room with all dielectric taken out.
    pub(super) fn air(layers: &[LayerOf], lid_m: Option<f64>, walls_m: Option<f64>, copper_thickness_m: f64) -> Medium {
        let height = layers.iter().map(|layer| layer.thickness_m).sum();
        Medium { layers: vec![(1.0, height)], lid_m, walls_m, copper_thickness_m }
    }

    /// Reflection of the laminate surface for the highest k: weight of the image.
    pub(super) fn image_weight(&self) -> f64 {
        let top = self.layers.last().map_or(1.0, |layer| layer.0);
        (1.0 - top) / (1.0 + top)
    }

    /// The nearest image that stays in the remainder is twice this far away.
    pub(super) fn scale_m(&self) -> f64 {
        let top = self.layers.last().map_or(f64::INFINITY, |layer| layer.1);
        let room = self.lid_m.map_or(f64::INFINITY, |lid| lid - self.copper_thickness_m);
        // The nearest repetition between walls is a whole distance of the walls away.
        let walls = self.walls_m.map_or(f64::INFINITY, |walls| 0.5 * walls);
        top.min(room).min(walls)
    }

    fn depth_m(&self) -> f64 {
        self.layers.iter().map(|layer| layer.1).sum()
    }

    /// Reflection coefficient of the surface seen from the air at wave number k.
    fn reflection(&self, k: f64) -> f64 {
        let mut admittance = f64::INFINITY;
        for &(permittivity, height) in &self.layers {
            let tangent = (k * height).tanh();
            admittance = if admittance.is_infinite() {
                permittivity / tangent
            } else {
                permittivity * (admittance + permittivity * tangent) / (permittivity + admittance * tangent)
            };
        }
        (1.0 - admittance) / (1.0 + admittance)
    }

    /// Heights at which the remainder is tabulated: Chebyshev-Lobatto from the foot to the top.
    pub(super) fn heights_m(&self) -> Vec<f64> {
        let thickness = self.copper_thickness_m;
        if thickness == 0.0 {
            return vec![0.0];
        }
        // Bernstein ellipse through the nearest image, 2 scales beyond the end of the interval.
        let half = 0.5 * thickness;
        let far = (2.0 * self.scale_m() + half) / half;
        let rho = far + (far * far - 1.0).sqrt();
        let needed = (HEIGHT_TOLERANCE.ln() / -rho.ln()).ceil();
        let count = (needed as usize).clamp(3, HEIGHTS_AT_MOST);
        (0..count)
            .map(|i| if i + 1 == count { thickness } else { half * (1.0 - (std::f64::consts::PI * i as f64 / (count - 1) as f64).cos()) })
            .collect()
    }
}

/// Antiderivative of R over x, and R, for every pair of heights.
pub(super) struct Table {
    heights: usize,
    cells: usize,
    inverse_first: f64,
    /// Pair by pair, cell by cell: cubic coefficients of the antiderivative in the local coordinate.
    cubics: Vec<[f64; 4]>,
    /// With walls: half period of the table.
    fold_m: Option<f64>,
    /// Antiderivative at the fold, pair by pair.
    at_fold: Vec<f64>,
}

/// Which sum of images a table holds.
#[derive(Clone, Copy, PartialEq)]
enum Kind {
    /// No walls.
    Open,
    /// Between walls, as a function of x - x', without its two logarithms.
    Difference,
    /// Between walls, as a function of x + x' from the left wall, without the logarithms of the mirrors in both walls.
    Sum,
}

/// Everything the assembly needs to know of one medium.
pub(super) struct Kernel {
    pub(super) image_weight: f64,
    pub(super) table: Table,
    /// With walls: the part that depends on x + x'.
    pub(super) mirror_table: Option<Table>,
}

impl Kernel {
    /// Tables that reach over `octaves` octaves.
    pub(super) fn build(medium: &Medium, heights: &[f64], octaves: usize) -> Kernel {
        let image_weight = medium.image_weight();
        if medium.walls_m.is_some() {
            let table = build_table(medium, heights, octaves, Kind::Difference);
            let mirror_table = Some(build_table(medium, heights, octaves, Kind::Sum));
            Kernel { image_weight, table, mirror_table }
        } else {
            Kernel { image_weight, table: build_table(medium, heights, octaves, Kind::Open), mirror_table: None }
        }
    }

    /// Octaves a table needs to reach `reach_m`; none when that is beyond the largest.
    pub(super) fn octaves_for(medium: &Medium, reach_m: f64) -> Option<usize> {
        let first = FIRST_OCTAVE_SCALES * medium.scale_m();
        // A distance that is the table's end but for rounding must not fall behind it.
        let reach_m = reach_m * (1.0 + 1e-9);
        (1..=OCTAVES_AT_MOST).find(|&octaves| first * ((1u64 << octaves) as f64 - 1.0) > reach_m)
    }
}

impl Table {
    #[inline(always)]
    fn cubic(&self, pair: usize, distance: f64) -> (&[f64; 4], f64) {
        let y = distance * self.inverse_first + 1.0;
        let shift = 52 - CELL_BITS;
        let bits = y.to_bits();
        let cell = ((bits >> shift) as usize).wrapping_sub(1023 << CELL_BITS).min(self.cells - 1);
        let start = f64::from_bits(bits >> shift << shift);
        (&self.cubics[pair * self.cells + cell], y - start)
    }

    /// Index of a pair of heights.
    #[inline(always)]
    pub(super) fn pair(&self, one: usize, other: usize) -> usize {
        one * self.heights + other
    }

    /// Integral of R from 0 to x: odd in x.
    #[inline(always)]
    pub(super) fn antiderivative(&self, pair: usize, x: f64) -> f64 {
        let distance = x.abs();
        let value = match self.fold_m {
            Some(fold) if distance > fold => 2.0 * self.at_fold[pair] - self.antiderivative_within(pair, 2.0 * fold - distance),
            _ => self.antiderivative_within(pair, distance),
        };
        if x < 0.0 { -value } else { value }
    }

    #[inline(always)]
    fn antiderivative_within(&self, pair: usize, distance: f64) -> f64 {
        let (c, d) = self.cubic(pair, distance);
        c[0] + d * (c[1] + d * (c[2] + d * c[3]))
    }

    /// R at x: even in x.
    #[inline(always)]
    pub(super) fn value(&self, pair: usize, x: f64) -> f64 {
        let distance = match self.fold_m {
            Some(fold) if x.abs() > fold => (2.0 * fold - x.abs()).max(0.0),
            _ => x.abs(),
        };
        let (c, d) = self.cubic(pair, distance);
        (c[1] + d * (2.0 * c[2] + 3.0 * d * c[3])) * self.inverse_first
    }
}

impl Table {
    /// dR/dx at x, to the accuracy of the cubics' second derivative: for the coat's correction only.
    pub(super) fn slope(&self, pair: usize, x: f64) -> f64 {
        let (distance, turn) = match self.fold_m {
            Some(fold) if x.abs() > fold => ((2.0 * fold - x.abs()).max(0.0), -1.0),
            _ => (x.abs(), 1.0),
        };
        let (c, d) = self.cubic(pair, distance);
        turn * x.signum() * (2.0 * c[2] + 6.0 * d * c[3]) * self.inverse_first * self.inverse_first
    }
}

/// Wave numbers with weights of the integral (1/pi) Int dk / (2k), or of its sum between walls.
fn wave_numbers(medium: &Medium, reach_m: f64) -> Vec<(f64, f64)> {
    let pi = std::f64::consts::PI;
    let end = SPECTRUM_END / medium.scale_m();
    if let Some(walls) = medium.walls_m {
        let count = (end * walls / pi).ceil().max(1.0) as usize;
        return (1..=count)
            .map(|n| {
                let k = n as f64 * pi / walls;
                (k, 1.0 / (2.0 * k * walls))
            })
            .collect();
    }
    // Panels short against one turn of cos(kx) and against the bend of the spectrum of the deepest layer or the lid.
    let highest = medium.depth_m().max(medium.lid_m.unwrap_or(0.0));
    let panel = (5.0 / reach_m).min(1.5 / highest);
    let count = (end / panel).ceil().max(1.0) as usize;
    let half = 0.5 * end / count as f64;
    let mut out = Vec::with_capacity(8 * count);
    for index in 0..count {
        let middle = (2 * index + 1) as f64 * half;
        for (node, weight) in GAUSS_8 {
            for k in [middle - half * node, middle + half * node] {
                out.push((k, weight * half / (2.0 * pi * k)));
            }
        }
    }
    out
}

/// The remainder's spectrum times its weight for every wave number and pair of heights (lower height first).
fn spectrum(medium: &Medium, heights: &[f64], numbers: &[(f64, f64)]) -> Vec<Vec<f64>> {
    let weight_of_image = medium.image_weight();
    let depth = medium.depth_m();
    let open = medium.walls_m.is_none();
    let mut out = vec![Vec::with_capacity(numbers.len()); heights.len() * (heights.len() + 1) / 2];
    let mut decay = vec![0.0; heights.len()];
    for &(k, weight) in numbers {
        let reflection = medium.reflection(k);
        for (d, z) in decay.iter_mut().zip(heights) {
            *d = (-k * z).exp();
        }
        let far = if open { (1.0 + weight_of_image) * (-2.0 * k * depth).exp() } else { 0.0 };
        let lid = medium.lid_m.map(|lid| (-2.0 * k * lid).exp());
        let mut pair = 0;
        for one in 0..heights.len() {
            for other in one..heights.len() {
                let sum = decay[one] * decay[other];
                let bracket = match lid {
                    None => reflection * sum,
                    Some(lid) => {
                        let ratio = decay[other] / decay[one];
                        (reflection * sum - lid / sum - reflection * lid * (ratio + 1.0 / ratio)) / (1.0 + reflection * lid)
                    }
                };
                out[pair].push(weight * (bracket - weight_of_image * sum + far * sum));
                pair += 1;
            }
        }
    }
    out
}

/// The part of R that is known in closed form.
fn closed_part(medium: &Medium, kind: Kind, x: f64, low: f64, high: f64) -> f64 {
    let pi = std::f64::consts::PI;
    let weight = medium.image_weight();
    let sum = low + high;
    let plain = |x: f64, z: f64| 0.5 * fast_ln(x * x + z * z);
    match (kind, medium.walls_m) {
        (Kind::Open, _) | (_, None) => (1.0 + weight) / (2.0 * pi) * plain(x, sum + 2.0 * medium.depth_m()),
        (Kind::Difference, Some(walls)) => {
            let smooth = |z: f64| {
                let squared = x * x + z * z;
                // Near zero the quotient tends to (pi/P)^2; its next term is below rounding there.
                if squared < 1e-12 * walls * walls { (pi / walls).ln() } else { periodic(x, z, walls) - 0.5 * squared.ln() }
            };
            -(smooth(high - low) + weight * smooth(sum)) / (2.0 * pi)
        }
        (Kind::Sum, Some(walls)) => {
            // Mirrors in the left wall at distance x and in the right wall at 2P - x have their own panels.
            let smooth = |z: f64| {
                let near = x * x + z * z;
                let first = if near < 1e-12 * walls * walls { (pi / walls).ln() } else { periodic(x, z, walls) - 0.5 * near.ln() };
                first - plain(2.0 * walls - x, z)
            };
            -(smooth(high - low) + weight * smooth(sum)) / (2.0 * pi)
        }
    }
}

/// ln |2 sinh(pi (z + i x) / 2P)|: the logarithms of a charge and all its repetitions at distances 2P, but for a constant.
fn periodic(x: f64, z: f64, walls: f64) -> f64 {
    let pi = std::f64::consts::PI;
    let sine = (0.5 * pi * x / walls).sin();
    let hyperbolic = (0.5 * pi * z / walls).sinh();
    0.5 * (4.0 * (sine * sine + hyperbolic * hyperbolic)).ln()
}

fn build_table(medium: &Medium, heights: &[f64], octaves: usize, kind: Kind) -> Table {
    let count = heights.len();
    let pairs = count * (count + 1) / 2;
    let first = FIRST_OCTAVE_SCALES * medium.scale_m();
    let cells = octaves * CELLS_PER_OCTAVE;
    let mut triangle: Vec<Vec<[f64; 4]>> = vec![Vec::with_capacity(cells); pairs];
    let mut integral = vec![0.0; pairs];
    for octave in 0..octaves {
        let start = first * ((1u64 << octave) as f64 - 1.0);
        let step = first * (1u64 << octave) as f64 / CELLS_PER_OCTAVE as f64;
        let numbers = wave_numbers(medium, start + step * CELLS_PER_OCTAVE as f64);
        let spectra = spectrum(medium, heights, &numbers);
        // Cell ends and middles.
        let samples = sample_cosines(&numbers, &spectra, start, 0.5 * step, 2 * CELLS_PER_OCTAVE + 1);
        let local = 1.0 / CELLS_PER_OCTAVE as f64 * (1u64 << octave) as f64;
        let mut pair = 0;
        for one in 0..count {
            for other in one..count {
                let at =
                    |i: usize| samples[pair][i] + closed_part(medium, kind, start + 0.5 * step * i as f64, heights[one], heights[other]);
                let mut left = at(0);
                for cell in 0..CELLS_PER_OCTAVE {
                    let middle = at(2 * cell + 1);
                    let right = at(2 * cell + 2);
                    let area = (left + 4.0 * middle + right) * step / 6.0;
                    // Hermite cubic through the integral with slopes R at both ends; coordinate x / first.
                    let slope_left = left * first;
                    let slope_right = right * first;
                    let c2 = (3.0 * area / local - 2.0 * slope_left - slope_right) / local;
                    let c3 = (slope_left + slope_right - 2.0 * area / local) / (local * local);
                    triangle[pair].push([integral[pair], slope_left, c2, c3]);
                    integral[pair] += area;
                    left = right;
                }
                pair += 1;
            }
        }
    }
    let index = |one: usize, other: usize| {
        let (low, high) = if one < other { (one, other) } else { (other, one) };
        low * count - low * (low + 1) / 2 + high
    };
    let mut cubics = Vec::with_capacity(count * count * cells);
    for one in 0..count {
        for other in 0..count {
            cubics.extend_from_slice(&triangle[index(one, other)]);
        }
    }
    let mut table = Table { heights: count, cells, inverse_first: 1.0 / first, cubics, fold_m: None, at_fold: Vec::new() };
    if let Some(walls) = medium.walls_m {
        table.at_fold = (0..count * count).map(|pair| table.antiderivative_within(pair, walls)).collect();
        table.fold_m = Some(walls);
    }
    table
}

/// Sum of spectrum times cos(kx) at equally spaced x, by the recurrence cos(k(x+d)) = 2 cos(kd) cos(kx) - cos(k(x-d)).
fn sample_cosines(numbers: &[(f64, f64)], spectra: &[Vec<f64>], start: f64, step: f64, count: usize) -> Vec<Vec<f64>> {
    let twice: Vec<f64> = numbers.iter().map(|&(k, _)| 2.0 * (k * step).cos()).collect();
    let mut before: Vec<f64> = numbers.iter().map(|&(k, _)| (k * (start - step)).cos()).collect();
    let mut now: Vec<f64> = numbers.iter().map(|&(k, _)| (k * start).cos()).collect();
    let mut out = vec![Vec::with_capacity(count); spectra.len()];
    for _ in 0..count {
        for (samples, spectrum) in out.iter_mut().zip(spectra) {
            samples.push(dot(spectrum, &now));
        }
        for ((b, n), t) in before.iter_mut().zip(&now).zip(&twice) {
            *b = t * n - *b;
        }
        std::mem::swap(&mut before, &mut now);
    }
    out
}

/// Dot product in four lanes, always added in the same order.
#[inline(always)]
pub(super) fn dot(one: &[f64], other: &[f64]) -> f64 {
    let mut lanes = [0.0; 4];
    let head = one.chunks_exact(4);
    let tail = head.remainder().iter().zip(other.chunks_exact(4).remainder());
    for (a, b) in head.zip(other.chunks_exact(4)) {
        for lane in 0..4 {
            lanes[lane] += a[lane] * b[lane];
        }
    }
    lanes[0] + lanes[1] + lanes[2] + lanes[3] + tail.map(|(a, b)| a * b).sum::<f64>()
}
