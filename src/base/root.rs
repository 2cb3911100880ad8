//! Bracketed root finding, every loop bounded.

/// Halvings after which any bracket of `f64` has closed.
const MAX_HALVINGS: usize = 200;

/// The root of `f` between `low` and `high`, where `f` must change sign; `None` when it does not or is not finite.
///
/// Illinois-modified regula falsi inside a bracket that always shrinks; stops at a bracket of `tolerance` (absolute) or an exact zero.
pub fn bisect(mut f: impl FnMut(f64) -> f64, low: f64, high: f64, tolerance: f64) -> Option<f64> {
    let (mut a, mut b) = (low, high);
    let (mut fa, mut fb) = (f(a), f(b));
    if !fa.is_finite() || !fb.is_finite() {
        return None;
    }
    if fa == 0.0 {
        return Some(a);
    }
    if fb == 0.0 {
        return Some(b);
    }
    if fa.signum() == fb.signum() {
        return None;
    }
    let mut last_side = 0;
    for step in 0..MAX_HALVINGS {
        if (b - a).abs() <= tolerance {
            break;
        }
        let secant = (a * fb - b * fa) / (fb - fa);
        // Every third step halves, so that the bracket shrinks whatever the shape of f.
        let x = if step % 3 == 2 || !secant.is_finite() || secant <= a.min(b) || secant >= a.max(b) { 0.5 * (a + b) } else { secant };
        let fx = f(x);
        if !fx.is_finite() {
            return None;
        }
        if fx == 0.0 {
            return Some(x);
        }
        if fx.signum() == fb.signum() {
            (b, fb) = (x, fx);
            if last_side == 1 {
                fa *= 0.5;
            }
            last_side = 1;
        } else {
            (a, fa) = (x, fx);
            if last_side == -1 {
                fb *= 0.5;
            }
            last_side = -1;
        }
    }
    Some(0.5 * (a + b))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn finds_a_root_and_reports_none() {
        let root = bisect(|x| x * x - 2.0, 0.0, 2.0, 1e-14);
        assert!((root.unwrap_or(0.0) - 2f64.sqrt()).abs() < 1e-12);
        assert!(bisect(|x| x * x + 1.0, -1.0, 1.0, 1e-12).is_none());
    }
}
