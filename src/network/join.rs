//! Joining scattering matrices: which block meets which, planned once per layout, then run at every frequency.
//!
//! Blocks are joined by the scattering relations of a connected pair of ports (Monaco and Tiberio, "Computer-aided analysis of
//! microwave circuits", IEEE Trans. MTT-22, 1974, pp. 249-263), never through admittances, which do not exist where a lossless line
//! is a multiple of a half wave.

use num_complex::Complex64;

/// Below this, `1 - a b` of a joined pair counts as a trapped resonance: its numerators vanish as well, and the floor keeps 0/0 at 0.
const TRAPPED: f64 = 1e-14;

/// One step of the plan. Slots hold blocks; slot numbers below the number of parts are the parts themselves.
#[derive(Clone, Debug, PartialEq)]
enum Step {
    /// Port `p` of block `a` meets port `q` of block `b`.
    Pair { a: usize, p: usize, b: usize, q: usize, out: usize },
    /// Ports `p < q` of one block meet.
    Own { a: usize, p: usize, q: usize, out: usize },
}

/// The order in which the blocks of a layout are joined, and how the last block's ports are numbered.
#[derive(Clone, Debug, PartialEq)]
pub struct JoinPlan {
    steps: Vec<Step>,
    ports_of: Vec<usize>,
    last: usize,
    /// For external port i: its index in the last block.
    external: Vec<usize>,
}

/// Scratch memory for one thread of evaluation.
#[derive(Clone, Debug)]
pub struct Scratch {
    /// One matrix per slot, row-major.
    pub blocks: Vec<Vec<Complex64>>,
}

impl JoinPlan {
    /// Plans the joining of parts whose ports are labelled with node numbers; every node of `external` ends in one part,
    /// every other node in exactly two ports. `None` when that does not hold or the parts are not all connected to the external ports.
    pub fn new(parts: &[Vec<usize>], external: &[usize]) -> Option<JoinPlan> {
        let mut labels: Vec<Option<Vec<usize>>> = parts.iter().cloned().map(Some).collect();
        let mut ports_of: Vec<usize> = parts.iter().map(Vec::len).collect();
        let mut steps = Vec::new();
        for node in parts.iter().flatten() {
            let uses = parts.iter().flatten().filter(|n| *n == node).count();
            if uses != if external.contains(node) { 1 } else { 2 } {
                return None;
            }
        }
        // Each join removes a block, each own-join a pair of ports: the loop ends.
        while let Some((a, b)) = cheapest_pair(&labels) {
            let (left, right) = (labels[a].take()?, labels[b].take()?);
            let shared = *left.iter().find(|n| right.contains(n))?;
            let (p, q) = (left.iter().position(|n| *n == shared)?, right.iter().position(|n| *n == shared)?);
            let mut joined: Vec<usize> = left.iter().chain(&right).copied().filter(|n| *n != shared).collect();
            let mut out = labels.len();
            steps.push(Step::Pair { a, p, b, q, out });
            ports_of.push(joined.len());
            labels.push(None);
            while let Some((p, q)) = repeated(&joined) {
                let next = labels.len();
                steps.push(Step::Own { a: out, p, q, out: next });
                joined.remove(q);
                joined.remove(p);
                ports_of.push(joined.len());
                labels.push(None);
                out = next;
            }
            labels[out] = Some(joined);
        }
        let mut rest = labels.iter().enumerate().filter_map(|(slot, l)| l.as_ref().map(|l| (slot, l)));
        let (last, last_labels) = rest.next()?;
        if rest.next().is_some() || last_labels.len() != external.len() {
            return None;
        }
        let external = external.iter().map(|n| last_labels.iter().position(|l| l == n)).collect::<Option<_>>()?;
        Some(JoinPlan { steps, ports_of, last, external })
    }

    /// Scratch memory of the right size.
    pub fn scratch(&self) -> Scratch {
        Scratch { blocks: self.ports_of.iter().map(|n| vec![Complex64::ZERO; n * n]).collect() }
    }

    /// Joins the parts' matrices, already written into the first slots, and returns `S` of the external ports, row-major.
    pub fn run(&self, scratch: &mut Scratch, result: &mut [Complex64]) {
        for step in &self.steps {
            match *step {
                Step::Pair { a, p, b, q, out } => {
                    let (before, rest) = scratch.blocks.split_at_mut(out);
                    join_pair(&before[a], self.ports_of[a], p, &before[b], self.ports_of[b], q, &mut rest[0]);
                }
                Step::Own { a, p, q, out } => {
                    let (before, rest) = scratch.blocks.split_at_mut(out);
                    join_own(&before[a], self.ports_of[a], p, q, &mut rest[0]);
                }
            }
        }
        let (n, block) = (self.ports_of[self.last], &scratch.blocks[self.last]);
        for (i, row) in self.external.iter().enumerate() {
            for (j, column) in self.external.iter().enumerate() {
                result[i * self.external.len() + j] = block[row * n + column];
            }
        }
    }
}

/// The two connected blocks whose join leaves the fewest ports: one-node parts are folded first.
fn cheapest_pair(labels: &[Option<Vec<usize>>]) -> Option<(usize, usize)> {
    let live: Vec<(usize, &Vec<usize>)> = labels.iter().enumerate().filter_map(|(i, l)| l.as_ref().map(|l| (i, l))).collect();
    let mut best: Option<(usize, usize, usize)> = None;
    for (i, (a, left)) in live.iter().enumerate() {
        for (b, right) in &live[i + 1..] {
            let shared = left.iter().filter(|n| right.contains(n)).count();
            let ports = left.len() + right.len() - 2 * shared;
            if shared > 0 && best.is_none_or(|(least, _, _)| ports < least) {
                best = Some((ports, *a, *b));
            }
        }
    }
    best.map(|(_, a, b)| (a, b))
}

/// First label that stands twice, with both places in rising order.
fn repeated(labels: &[usize]) -> Option<(usize, usize)> {
    labels.iter().enumerate().find_map(|(p, n)| labels[p + 1..].iter().position(|m| m == n).map(|q| (p, p + 1 + q)))
}

fn guarded_inverse(d: Complex64) -> Complex64 {
    if d.norm_sqr() < TRAPPED * TRAPPED { Complex64::new(1.0 / TRAPPED, 0.0) } else { d.inv() }
}

/// Joins port `p` of `a` with port `q` of `b`; the ports of the result are a's others, then b's others.
fn join_pair(a: &[Complex64], na: usize, p: usize, b: &[Complex64], nb: usize, q: usize, out: &mut [Complex64]) {
    let n = na + nb - 2;
    let (alpha, beta) = (a[p * na + p], b[q * nb + q]);
    let inverse = guarded_inverse(Complex64::ONE - alpha * beta);
    let (via_b, via_a) = (beta * inverse, alpha * inverse);
    let keep = |skip: usize, count: usize| (0..count).filter(move |i| *i != skip);
    for (row, i) in keep(p, na).enumerate() {
        let to_joint = a[i * na + p];
        let (back, through) = (to_joint * via_b, to_joint * inverse);
        for (column, j) in keep(p, na).enumerate() {
            out[row * n + column] = a[i * na + j] + back * a[p * na + j];
        }
        for (column, j) in keep(q, nb).enumerate() {
            out[row * n + na - 1 + column] = through * b[q * nb + j];
        }
    }
    for (row, i) in keep(q, nb).enumerate() {
        let to_joint = b[i * nb + q];
        let (back, through) = (to_joint * via_a, to_joint * inverse);
        for (column, j) in keep(p, na).enumerate() {
            out[(row + na - 1) * n + column] = through * a[p * na + j];
        }
        for (column, j) in keep(q, nb).enumerate() {
            out[(row + na - 1) * n + na - 1 + column] = b[i * nb + j] + back * b[q * nb + j];
        }
    }
}

/// Joins ports `p < q` of one block.
fn join_own(a: &[Complex64], na: usize, p: usize, q: usize, out: &mut [Complex64]) {
    let n = na - 2;
    let at = |i: usize, j: usize| a[i * na + j];
    let one = Complex64::ONE;
    let inverse = guarded_inverse((one - at(p, q)) * (one - at(q, p)) - at(p, p) * at(q, q));
    let keep = || (0..na).filter(move |i| *i != p && *i != q);
    for (row, i) in keep().enumerate() {
        for (column, j) in keep().enumerate() {
            let through = at(p, j) * at(i, q) * (one - at(q, p))
                + at(p, j) * at(q, q) * at(i, p)
                + at(q, j) * at(i, p) * (one - at(p, q))
                + at(q, j) * at(p, p) * at(i, q);
            out[row * n + column] = at(i, j) + through * inverse;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn line(theta: f64) -> Vec<Complex64> {
        let t = Complex64::from_polar(1.0, -theta);
        vec![Complex64::ZERO, t, t, Complex64::ZERO]
    }

    #[test]
    fn chain_of_lines_adds_their_phases() {
        let plan = JoinPlan::new(&[vec![1, 2], vec![0, 1], vec![2, 3]], &[0, 3]).unwrap();
        let mut scratch = plan.scratch();
        for (slot, theta) in [0.3, 0.5, 0.9].into_iter().enumerate() {
            scratch.blocks[slot] = line(theta);
        }
        let mut s = [Complex64::ZERO; 4];
        plan.run(&mut scratch, &mut s);
        assert!((s[2] - Complex64::from_polar(1.0, -1.7)).norm() < 1e-14);
    }

    #[test]
    fn a_ring_of_two_lines_joins_its_own_ports() {
        // A thru tee (ideal, 3 ports: S = 2/3 off the diagonal, -1/3 on it) at both ends of two equal lines: two lines in parallel.
        let (d, o) = (Complex64::new(-1.0 / 3.0, 0.0), Complex64::new(2.0 / 3.0, 0.0));
        let tee = vec![d, o, o, o, d, o, o, o, d];
        let plan = JoinPlan::new(&[vec![0, 1, 2], vec![1, 3], vec![2, 4], vec![3, 4, 5]], &[0, 5]).unwrap();
        let mut scratch = plan.scratch();
        for (slot, block) in [tee.clone(), line(0.7), line(0.7), tee].into_iter().enumerate() {
            scratch.blocks[slot] = block;
        }
        let mut s = [Complex64::ZERO; 4];
        plan.run(&mut scratch, &mut s);
        // Exact: a line of half the impedance. S11 = j (z - 1/z) sin t / (2 cos t + j (z + 1/z) sin t), z = 1/2.
        let j = Complex64::I;
        let (sin, cos) = 0.7f64.sin_cos();
        let exact = j * (0.5 - 2.0) * sin / (2.0 * cos + j * 2.5 * sin);
        assert!((s[0] - exact).norm() < 1e-13, "{} {}", s[0], exact);
    }

    #[test]
    fn refuses_a_dangling_node() {
        assert!(JoinPlan::new(&[vec![0, 1], vec![2, 3]], &[0, 3]).is_none());
    }
}
