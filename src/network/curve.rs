//! Line constants over frequency: computed at a few Chebyshev nodes, evaluated everywhere.
//!
//! The variable is the square root of frequency, in which conductor loss is smooth; the error is checked between the nodes.

/// Relative error at which the number of nodes stops growing; the S-parameters must be right to 1e-6.
const ACCURACY: f64 = 2e-8;
/// First and greatest number of nodes; the last is reached only by laws with a kink, whose error is then below 1e-6 by test.
const NODES: [usize; 4] = [12, 20, 32, 64];

/// K smooth functions of frequency over one band, as Chebyshev series of equal length.
#[derive(Clone, Debug)]
pub struct Curves<const K: usize> {
    low: f64,
    scale: f64,
    /// Coefficients, highest order last; one lane per function.
    coefficients: Vec<[f64; K]>,
}

impl<const K: usize> Curves<K> {
    /// Fits `functions` (frequency in hertz to K values) between `from_hz` and `to_hz`.
    pub fn fit(from_hz: f64, to_hz: f64, functions: impl Fn(f64) -> [f64; K]) -> Curves<K> {
        let (low, high) = (from_hz.sqrt(), to_hz.sqrt().max(from_hz.sqrt() * (1.0 + 1e-9)));
        let scale = 2.0 / (high - low);
        let mut curves = Curves { low, scale, coefficients: Vec::new() };
        for nodes in NODES {
            let samples: Vec<[f64; K]> = (0..nodes)
                .map(|i| {
                    let x = (std::f64::consts::PI * (i as f64 + 0.5) / nodes as f64).cos();
                    let root = low + (x + 1.0) / scale;
                    functions(root * root)
                })
                .collect();
            curves.coefficients = (0..nodes)
                .map(|order| {
                    let mut sum = [0.0; K];
                    for (i, sample) in samples.iter().enumerate() {
                        let c = (std::f64::consts::PI * order as f64 * (i as f64 + 0.5) / nodes as f64).cos();
                        for lane in 0..K {
                            sum[lane] += c * sample[lane];
                        }
                    }
                    sum.map(|v| v * if order == 0 { 1.0 } else { 2.0 } / nodes as f64)
                })
                .collect();
            // Midpoints between nodes are where a Chebyshev interpolant errs most.
            let worst = (0..nodes).step_by(3).map(|i| {
                let x = (std::f64::consts::PI * (i as f64 + 1.0) / nodes as f64).cos();
                let root = low + (x + 1.0) / scale;
                let (fitted, exact) = (curves.at(root * root), functions(root * root));
                (0..K).map(|lane| (fitted[lane] - exact[lane]).abs() / exact[lane].abs().max(1e-12)).fold(0.0, f64::max)
            });
            if worst.fold(0.0, f64::max) < ACCURACY {
                break;
            }
        }
        curves.drop_negligible_orders();
        curves
    }

    /// The K values at `f_hz` (Clenshaw's recurrence).
    pub fn at(&self, f_hz: f64) -> [f64; K] {
        let x = (f_hz.sqrt() - self.low) * self.scale - 1.0;
        let (mut b1, mut b2) = ([0.0; K], [0.0; K]);
        for c in self.coefficients.iter().skip(1).rev() {
            for lane in 0..K {
                let b0 = c[lane] + 2.0 * x * b1[lane] - b2[lane];
                b2[lane] = b1[lane];
                b1[lane] = b0;
            }
        }
        let first = self.coefficients.first().copied().unwrap_or([0.0; K]);
        std::array::from_fn(|lane| first[lane] + x * b1[lane] - b2[lane])
    }

    fn drop_negligible_orders(&mut self) {
        let first = self.coefficients.first().copied().unwrap_or([0.0; K]);
        let negligible = |c: &[f64; K]| c.iter().zip(&first).all(|(c, f)| c.abs() <= 0.1 * ACCURACY * f.abs().max(1e-12));
        while self.coefficients.len() > 1 && self.coefficients.last().is_some_and(negligible) {
            self.coefficients.pop();
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn fits_smooth_laws_to_the_claimed_accuracy() {
        let law = |f: f64| [3.0 + f / (f + 7e9), 0.01 * f.sqrt() / 1e5 + f / 1e11];
        let curves = Curves::fit(0.3e9, 12e9, law);
        for i in 0..500 {
            let f = 0.3e9 + i as f64 * (11.7e9 / 499.0);
            for lane in 0..2 {
                assert!((curves.at(f)[lane] / law(f)[lane] - 1.0).abs() < 1e-7);
            }
        }
    }
}
