//! What potential does charge on a grounded slab make: point, rectangle and half-infinite strip, by images. Lengths are in slab heights.

/// Images after which the rest is put at one place: their weight has fallen to 1e-4, or there are this many.
const MOST_IMAGES: usize = 64;
const SMALLEST_WEIGHT: f64 = 1e-4;
/// Nodes of the table of the images' sum.
const NODES: usize = 1024;
/// Distance, in the larger side of a panel, from which it is a point to the direct term: 0.1 % of its own potential.
const FAR: f64 = 5.0;

/// Images of a charge on the surface of a slab of relative permittivity `er` and height 1 over a ground plane.
///
/// Potential of a unit charge, times 2 pi eps0 (1 + er): 1/r - (1 + K) sum (-K)^(n-1) / sqrt(r^2 + (2 n)^2), K = (er - 1)/(er + 1). The weights sum to zero, and
/// are kept so when the sum is cut: all that is left goes to the last image.
pub(super) struct Kernel {
    /// Squared distance and weight of each image.
    images: Vec<(f64, f64)>,
    /// Sum over the images at even steps of arsinh(r).
    table: Vec<f64>,
    step: f64,
}

impl Kernel {
    pub(super) fn new(er: f64, farthest: f64) -> Kernel {
        let k = (er - 1.0) / (er + 1.0);
        let mut images = Vec::new();
        let mut left: f64 = -1.0;
        for n in 1..=MOST_IMAGES {
            let distance2 = (2.0 * n as f64).powi(2);
            if left.abs() < SMALLEST_WEIGHT || n == MOST_IMAGES {
                images.push((distance2, left));
                break;
            }
            let weight = (1.0 + k) * left;
            images.push((distance2, weight));
            left -= weight;
        }
        let step = farthest.asinh() / (NODES - 4) as f64;
        let table = (0..NODES)
            .map(|i| {
                let r = ((i as f64 - 1.0) * step).sinh();
                images.iter().map(|(d2, weight)| weight / (r * r + d2).sqrt()).sum()
            })
            .collect();
        Kernel { images, table, step }
    }

    /// The images' part at a distance; 1/r comes on top.
    fn smooth(&self, r: f64) -> f64 {
        let place = r.asinh() / self.step + 1.0;
        let at = (place as usize).clamp(1, NODES - 3);
        let t = place - at as f64;
        let Some(&[a, b, c, d]) = self.table.get(at - 1..at + 3) else { return 0.0 };
        // Cubic through four neighbours.
        b + 0.5 * t * (c - a + t * (2.0 * a - 5.0 * b + 4.0 * c - d + t * (3.0 * (b - c) + d - a)))
    }

    /// Potential at the origin of unit charge density on a rectangle.
    pub(super) fn rectangle(&self, [x0, x1]: [f64; 2], [y0, y1]: [f64; 2]) -> f64 {
        let (lx, ly) = (x1 - x0, y1 - y0);
        let (mx, my) = (0.5 * (x0 + x1), 0.5 * (y0 + y1));
        let direct = if mx.hypot(my) > FAR * lx.max(ly) {
            lx * ly / mx.hypot(my)
        } else {
            corner(x1, y1) - corner(x0, y1) - corner(x1, y0) + corner(x0, y0)
        };
        let nearest = (mx.abs() - 0.5 * lx).max(0.0).hypot((my.abs() - 0.5 * ly).max(0.0));
        let (px, py) = (points(lx, nearest), points(ly, nearest));
        let mut images = 0.0;
        for i in 0..px {
            let x = x0 + lx * (i as f64 + 0.5) / px as f64;
            for j in 0..py {
                images += self.smooth(x.hypot(y0 + ly * (j as f64 + 0.5) / py as f64));
            }
        }
        direct + images * lx * ly / (px * py) as f64
    }

    /// Potential at the origin of unit charge density on a strip from `start` to infinity along x, `y0` to `y1` across.
    pub(super) fn half_strip(&self, start: f64, [y0, y1]: [f64; 2]) -> f64 {
        let direct = -(across(start, y1) - across(start, y0));
        let (ly, count) = (y1 - y0, points(y1 - y0, 0.0));
        let mut images = 0.0;
        for j in 0..count {
            let y = y0 + ly * (j as f64 + 0.5) / count as f64;
            for (d2, weight) in &self.images {
                images -= weight * log_sum(start, (y * y + d2).sqrt());
            }
        }
        direct + images * ly / count as f64
    }

    /// Potential at the origin of unit charge density on a strip infinite both ways.
    pub(super) fn whole_strip(&self, y: [f64; 2]) -> f64 {
        2.0 * self.half_strip(0.0, y)
    }
}

/// Points for the images over a length: they vary over two heights, or over the distance.
fn points(length: f64, nearest: f64) -> usize {
    (length / (0.4 + 0.3 * nearest)).ceil().clamp(1.0, 400.0) as usize
}

/// Integral of 1/r over the rectangle from the origin to (x, y).
fn corner(x: f64, y: f64) -> f64 {
    let part = |a: f64, b: f64| if a == 0.0 { 0.0 } else { a * (b / a.abs()).asinh() };
    part(x, y) + part(y, x)
}

/// ln(a + sqrt(a^2 + d^2)) without cancellation.
fn log_sum(a: f64, d: f64) -> f64 {
    let r = a.hypot(d);
    if a >= 0.0 { (a + r).ln() } else { 2.0 * d.ln() - (r - a).ln() }
}

/// Integral of ln(a + sqrt(a^2 + y^2)) over y from 0.
fn across(a: f64, y: f64) -> f64 {
    if y == 0.0 {
        return 0.0;
    }
    let turned = if a == 0.0 { 0.0 } else { a * (y / a.abs()).asinh() };
    y * log_sum(a, y.abs()) - y + turned
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn half_strips_and_rectangles_make_whole_strips() {
        for er in [1.0, 3.0, 10.2] {
            let kernel = Kernel::new(er, 500.0);
            assert!((kernel.images.iter().map(|i| i.1).sum::<f64>() + 1.0).abs() < 1e-12);
            // A half strip, a long rectangle and the other half beyond: the whole strip, to the quadrature over the images.
            let y = [0.3, 0.5];
            let parts = kernel.half_strip(7.0, y) + kernel.rectangle([-2.0, 7.0], y) + kernel.half_strip(2.0, y);
            let whole = kernel.whole_strip(y);
            assert!((parts / whole - 1.0).abs() < 2e-3, "er {er}: {parts} {whole}");
        }
    }
}
