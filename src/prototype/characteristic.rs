//! The characteristic function of a prototype over its height at the edge: what K = S11/S21 looks like over frequency.

use crate::order::ResponseShape;

/// The characteristic function at a normalised frequency, 1 at the edge: a power, or a Chebyshev polynomial; even or odd as the degree.
///
/// # Source
/// Matthaei, Young, Jones 1964, eqs. 4.03-1 to 4.03-4.
pub fn characteristic(shape: ResponseShape, degree: usize, x: f64) -> f64 {
    let n = degree as f64;
    match shape {
        ResponseShape::MaximallyFlat => x.powi(degree as i32),
        ResponseShape::EqualRipple { .. } => chebyshev(n, x),
    }
}

/// Chebyshev polynomial of the first kind.
pub fn chebyshev(n: f64, x: f64) -> f64 {
    if x.abs() <= 1.0 {
        (n * x.acos()).cos()
    } else {
        // Beyond this the value is of no use but must stay finite.
        let angle = (n * x.abs().acosh()).min(300.0);
        angle.cosh() * if x < 0.0 && n % 2.0 == 1.0 { -1.0 } else { 1.0 }
    }
}

/// Height of |S11/S21| at the edge.
pub fn edge_height(shape: ResponseShape) -> f64 {
    match shape {
        ResponseShape::MaximallyFlat => 1.0,
        ResponseShape::EqualRipple { ripple_db } => (10f64.powf(ripple_db / 10.0) - 1.0).sqrt(),
    }
}
