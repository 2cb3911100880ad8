//! How is ln r integrated along a straight panel side, fast?
//!
//! The antiderivative of ln sqrt(s^2 + e^2) over s is F(s, e) = (s/2) ln(s^2 + e^2) - s + e atan(s/e).
//! Logarithm and arc tangent are written without branches, as plain loops, so that the compiler vectorises them on every target; `pulp` lets it use the widest
//! vectors of the processor at hand (operation by operation the same, so the same bits on every processor of a platform).
//! Their polynomials are Chebyshev interpolants made for this file; absolute error below 2e-15 (ln: relative to 1 + |exponent|).

/// sqrt(1/2) as bits, taken off before the exponent is read, so that the mantissa lies in [sqrt(1/2), sqrt(2)).
const HALF_ROOT_BITS: u64 = 0x3FE6_A09E_667F_3BCD;
const ONE_BITS: u64 = 0x3FF0_0000_0000_0000;
/// 2^52 as bits: an integer below 2^52 put into its mantissa reads as 2^52 + integer.
const TWO_52_BITS: u64 = 0x4330_0000_0000_0000;
const TWO_52: f64 = 4_503_599_627_370_496.0;
/// atanh(y)/y as a polynomial in y^2 up to 0.02945.
const HALF_LOG: [f64; 7] =
    [1.0, 0.3333333333327631, 0.20000000030938936, 0.1428570799943537, 0.11111718083652541, 0.09060940300939462, 0.0841916258775478];
/// atan(y)/y as a polynomial in y^2 up to 0.17158.
const ARC: [f64; 10] = [
    1.0,
    -0.33333333333221393,
    0.19999999978386104,
    -0.1428571266125891,
    0.11111048839980395,
    -0.09089529707761589,
    0.07673532799871223,
    -0.06505966850780683,
    0.050247090184881035,
    -0.025315752916357237,
];
/// tan(pi/8): where the arc tangent is folded.
const FOLD: f64 = 0.414_213_562_373_095_03;

/// ln of a positive, normal number.
#[inline(always)]
pub(super) fn fast_ln(value: f64) -> f64 {
    let bits = value.to_bits();
    let exponent_bits = bits.wrapping_add(ONE_BITS - HALF_ROOT_BITS) >> 52;
    let mantissa = f64::from_bits(bits.wrapping_sub(exponent_bits << 52).wrapping_add(ONE_BITS));
    let exponent = f64::from_bits(exponent_bits | TWO_52_BITS) - (TWO_52 + 1023.0);
    let y = (mantissa - 1.0) / (mantissa + 1.0);
    let z = y * y;
    let z2 = z * z;
    let low = (HALF_LOG[0] + HALF_LOG[1] * z) + (HALF_LOG[2] + HALF_LOG[3] * z) * z2;
    let high = (HALF_LOG[4] + HALF_LOG[5] * z) + HALF_LOG[6] * z2;
    exponent * std::f64::consts::LN_2 + 2.0 * y * (low + high * (z2 * z2))
}

/// |e| times atan(|s|/|e|), e not zero.
#[inline(always)]
fn fast_arc(s: f64, e: f64) -> f64 {
    use std::f64::consts::{FRAC_PI_2, FRAC_PI_4};
    let swap = s > e;
    let small = if swap { e } else { s };
    let large = if swap { s } else { e };
    let fold = small > FOLD * large;
    let above = if fold { small - large } else { small };
    let below = if fold { small + large } else { large };
    let offset = if fold { FRAC_PI_4 } else { 0.0 };
    let y = above / below;
    let z = y * y;
    let z2 = z * z;
    let z4 = z2 * z2;
    let a = (ARC[0] + ARC[1] * z) + (ARC[2] + ARC[3] * z) * z2;
    let b = (ARC[4] + ARC[5] * z) + (ARC[6] + ARC[7] * z) * z2;
    let c = ARC[8] + ARC[9] * z;
    let angle = offset + y * (a + (b + c * z4) * z4);
    e * if swap { FRAC_PI_2 - angle } else { angle }
}

/// F(start + along, e) at every node of one side.
#[inline(always)]
pub(super) fn log_antiderivative(start: f64, e: f64, along: &[f64], out: &mut [f64]) {
    let depth = e.abs();
    if depth == 0.0 {
        for (value, a) in out.iter_mut().zip(along) {
            let s = start + a;
            // s = 0 happens when a field point lies on the line of a far node by chance: s ln s is 0 there.
            *value = 0.5 * s * fast_ln(s * s + f64::MIN_POSITIVE) - s;
        }
    } else {
        for (value, a) in out.iter_mut().zip(along) {
            let s = start + a;
            let arc = fast_arc(s.abs(), depth);
            *value = 0.5 * s * fast_ln(s * s + depth * depth) - s + if s < 0.0 { -arc } else { arc };
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_fast_functions_agree_with_the_library() {
        let mut worst_log: f64 = 0.0;
        let mut worst_arc: f64 = 0.0;
        for step in 0..20_000 {
            let x = 1e-14 * (1.003_f64).powi(step);
            worst_log = worst_log.max((fast_ln(x) - x.ln()).abs() / (1.0 + x.ln().abs()));
            let ratio = 1e-8 * (1.002_f64).powi(step);
            if ratio < 1e9 {
                worst_arc = worst_arc.max((fast_arc(ratio, 1.0) - ratio.atan()).abs());
            }
        }
        // Rounding of some ten operations on numbers of order one.
        assert!(worst_log < 2e-15, "{worst_log}");
        assert!(worst_arc < 4e-15, "{worst_arc}");
    }
}
