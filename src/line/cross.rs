//! What is at a crossing of strips: lengths to take out of its four arms and a shunt susceptance.

use super::Strip;
use super::tee::Tee;
use super::tee::tee;
use crate::base::Problem;

/// A cross of four arms, in order round it: 1 and 3 opposite, 2 and 4 opposite. Strips are drawn from the centre lines of the arms across.
#[derive(Clone, Debug, PartialEq)]
pub struct Cross {
    /// Arms 1-3 through with side 2, with side 4; arms 2-4 through with side 1, with side 3.
    tees: [Tee; 4],
}

/// A cross at a frequency: all four arms, each shortened by its shift, on one node with a susceptance to ground.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CrossAt {
    /// Take out of the length of each arm.
    pub shifts_m: [f64; 4],
    /// Susceptance at the node.
    pub shunt_s: f64,
}

/// A cross of four arms on one board; `arms[0]` opposite `arms[2]`, `arms[1]` opposite `arms[3]`.
///
/// Read as two tees in one, both ways (1-3 through with two sides, 2-4 through with two sides), and the mean of the two readings taken.
///
/// # Accuracy
/// Not compared with anything: no published value was trusted and no solution was made. Take half a laminate height in each shift as its error.
///
/// # Source
/// [`tee`], four times.
pub fn cross(arms: [&Strip; 4]) -> Cross {
    let [one, two, three, four] = arms;
    Cross { tees: [tee(one, three, two), tee(one, three, four), tee(two, four, one), tee(two, four, three)] }
}

impl Cross {
    /// Its elements at a frequency.
    pub fn at(&self, f_hz: f64) -> CrossAt {
        let [a, b, c, d] = [0, 1, 2, 3].map(|i: usize| self.tees[i].at(f_hz));
        let mean = |through: f64, other: f64, side: f64| 0.5 * (through + other + side);
        CrossAt {
            shifts_m: [
                mean(a.shift_1_m, b.shift_1_m, c.shift_side_m),
                mean(c.shift_1_m, d.shift_1_m, a.shift_side_m),
                mean(a.shift_2_m, b.shift_2_m, d.shift_side_m),
                mean(c.shift_2_m, d.shift_2_m, b.shift_side_m),
            ],
            shunt_s: 0.5 * (a.shunt_s + b.shunt_s + c.shunt_s + d.shunt_s),
        }
    }

    /// Warnings `discontinuity-out-of-range` for use up to a frequency.
    pub fn problems(&self, up_to_hz: f64) -> Vec<Problem> {
        self.tees.first().map(|tee| tee.problems(up_to_hz)).unwrap_or_default()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::line::AsBuilt;

    #[test]
    fn four_equal_arms_are_alike() {
        let strip = Strip::new(&AsBuilt::for_tests(3.0, 0.0), 1.9e-3);
        let at = cross([&strip; 4]).at(3e9);
        assert!(at.shifts_m.iter().all(|shift| (shift / at.shifts_m[0] - 1.0).abs() < 1e-12 && *shift > 0.0), "{at:?}");
        let narrow = Strip::new(&AsBuilt::for_tests(3.0, 0.0), 0.5e-3);
        let at = cross([&strip, &narrow, &strip, &narrow]).at(3e9);
        assert!((at.shifts_m[1] - at.shifts_m[3]).abs() < 1e-15 && at.shifts_m[1] > at.shifts_m[0], "{at:?}");
    }
}
