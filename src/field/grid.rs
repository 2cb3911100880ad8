//! On which grid flows the current: patches of copper, each with lines of its own, and the rooftops on them.

/// Along which axis something runs.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Axis {
    /// x.
    X,
    /// y.
    Y,
}

/// One connected piece of copper on grid lines of its own; a cell is copper or not.
#[derive(Clone, Debug, PartialEq)]
pub struct Patch {
    /// Lines across x, increasing.
    pub x_m: Vec<f64>,
    /// Lines across y, increasing.
    pub y_m: Vec<f64>,
    /// Row by row, lowest y first.
    pub copper: Vec<bool>,
}

impl Patch {
    /// A patch that is copper all over.
    pub fn full(x_m: Vec<f64>, y_m: Vec<f64>) -> Patch {
        let cells = x_m.len().saturating_sub(1) * y_m.len().saturating_sub(1);
        Patch { x_m, y_m, copper: vec![true; cells] }
    }

    /// Number of columns.
    pub fn columns(&self) -> usize {
        self.x_m.len().saturating_sub(1)
    }

    /// Number of rows.
    pub fn rows(&self) -> usize {
        self.y_m.len().saturating_sub(1)
    }

    /// Whether the cell is copper; `false` outside the grid.
    pub fn is_copper(&self, column: usize, row: usize) -> bool {
        column < self.columns() && row < self.rows() && self.copper.get(row * self.columns() + column).copied().unwrap_or(false)
    }

    /// Lines across an axis.
    pub fn lines(&self, axis: Axis) -> &[f64] {
        match axis {
            Axis::X => &self.x_m,
            Axis::Y => &self.y_m,
        }
    }

    /// The patch with x and y swapped.
    pub fn transposed(&self) -> Patch {
        let copper = (0..self.columns()).flat_map(|i| (0..self.rows()).map(move |j| (i, j))).map(|(i, j)| self.is_copper(i, j)).collect();
        Patch { x_m: self.y_m.clone(), y_m: self.x_m.clone(), copper }
    }
}

/// Shape of a one-dimensional function on grid lines.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Profile {
    /// Unit pulse between line `i` and `i + 1`.
    Pulse,
    /// Triangle, one at line `i`, zero at its neighbours; half of it where a wall is the first or last line.
    Triangle,
}

impl Profile {
    /// The function as weights at grid lines: jumps of the pulse, kinks of the triangle (its second derivative).
    ///
    /// A half triangle at a wall needs nothing of its own: its even mirror image completes it.
    pub fn nodes(self, lines: &[f64], index: usize) -> ([(usize, f64); 3], usize) {
        let mut nodes = [(0, 0.0); 3];
        let mut count = 0;
        let mut push = |node: (usize, f64)| {
            nodes[count] = node;
            count += 1;
        };
        match self {
            Profile::Pulse => {
                push((index, 1.0));
                push((index + 1, -1.0));
            }
            Profile::Triangle => {
                let mut middle = 0.0;
                if index > 0 {
                    let slope = 1.0 / (lines[index] - lines[index - 1]);
                    push((index - 1, slope));
                    middle -= slope;
                }
                if index + 1 < lines.len() {
                    let slope = 1.0 / (lines[index + 1] - lines[index]);
                    push((index + 1, slope));
                    middle -= slope;
                }
                push((index, middle));
            }
        }
        (nodes, count)
    }
}

/// Functions that share a patch and one function of y.
#[derive(Clone, Debug, PartialEq)]
pub struct Group {
    /// Index of the patch.
    pub patch: usize,
    /// Index of the function of y.
    pub outer: usize,
    /// Indices of the functions of x, increasing.
    pub inner: Vec<usize>,
    /// Number of the group's first function within the family.
    pub start: usize,
}

/// All functions of one kind: charge cells, x-directed or y-directed rooftops. Each is a function of x times a function of y.
///
/// Grouped by their function of y: boards are longer along x, so that groups are few and long.
#[derive(Clone, Debug, PartialEq)]
pub struct Family {
    /// Shape along x.
    pub inner: Profile,
    /// Shape along y.
    pub outer: Profile,
    /// In order.
    pub groups: Vec<Group>,
    /// Number of functions.
    pub size: usize,
}

impl Family {
    /// Every function that `exists` (patch, index along x, index along y).
    fn new([inner, outer]: [Profile; 2], patches: &[Patch], exists: impl Fn(&Patch, usize, usize) -> bool) -> Family {
        let mut family = Family { inner, outer, groups: Vec::new(), size: 0 };
        for (index, patch) in patches.iter().enumerate() {
            for o in 0..patch.y_m.len() {
                let inner: Vec<usize> = (0..patch.x_m.len()).filter(|&i| exists(patch, i, o)).collect();
                if !inner.is_empty() {
                    let start = family.size;
                    family.size += inner.len();
                    family.groups.push(Group { patch: index, outer: o, inner, start });
                }
            }
        }
        family
    }

    /// Number of the function at an index along x and along y.
    pub fn number(&self, patch: usize, inner: usize, outer: usize) -> Option<usize> {
        let group = self.groups.iter().find(|g| g.patch == patch && g.outer == outer)?;
        group.inner.binary_search(&inner).ok().map(|position| group.start + position)
    }
}

/// A rooftop: the charge cells on its two sides with its divergence there, and its width.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rooftop {
    /// Cells and divergence, 1/m; zero where there is no cell (a wall).
    pub cells: [(usize, f64); 2],
}

/// The unknowns on a set of patches in a box.
#[derive(Clone, Debug, PartialEq)]
pub struct Unknowns {
    /// Charge cells, rows of x pulses.
    pub cells: Family,
    /// x-directed currents, rows of x triangles.
    pub along_x: Family,
    /// y-directed currents, columns of y triangles.
    pub along_y: Family,
    /// Every rooftop, x-directed first.
    pub rooftops: Vec<Rooftop>,
}

/// Two coordinates closer than this are one place: a wall and the copper drawn to it.
pub const SAME_PLACE_M: f64 = 1e-9;

impl Unknowns {
    /// Rooftops wherever two copper cells meet, or copper meets a wall of the box.
    pub fn new(patches: &[Patch], size_m: [f64; 2]) -> Unknowns {
        let at_wall = |lines: &[f64], i: usize, length_m: f64| {
            (i == 0 && lines[0].abs() < SAME_PLACE_M) || (i + 1 == lines.len() && (lines[i] - length_m).abs() < SAME_PLACE_M)
        };
        // A rooftop at a line needs copper on both sides, or on one side and a wall on the other.
        let joined = |before: bool, after: bool, wall: bool| (before && after) || (wall && (before || after));
        let (pulse, triangle) = (Profile::Pulse, Profile::Triangle);
        let cells = Family::new([pulse, pulse], patches, |p, i, j| p.is_copper(i, j));
        let along_x = Family::new([triangle, pulse], patches, |p, i, j| {
            joined(i > 0 && p.is_copper(i - 1, j), p.is_copper(i, j), at_wall(&p.x_m, i, size_m[0]))
        });
        let along_y = Family::new([pulse, triangle], patches, |p, i, j| {
            joined(j > 0 && p.is_copper(i, j - 1), p.is_copper(i, j), at_wall(&p.y_m, j, size_m[1]))
        });
        let mut numbers: Vec<Vec<usize>> = patches.iter().map(|p| vec![usize::MAX; p.columns() * p.rows()]).collect();
        for group in &cells.groups {
            for (n, &column) in group.inner.iter().enumerate() {
                numbers[group.patch][group.outer * patches[group.patch].columns() + column] = group.start + n;
            }
        }
        let number = |patch: usize, column: usize, row: usize| {
            patches[patch].is_copper(column, row).then(|| numbers[patch][row * patches[patch].columns() + column])
        };
        let mut rooftops = Vec::with_capacity(along_x.size + along_y.size);
        for (family, axis) in [(&along_x, Axis::X), (&along_y, Axis::Y)] {
            for group in &family.groups {
                let lines = patches[group.patch].lines(axis);
                for &inner in &group.inner {
                    // The line the current crosses, and the cell at an index along the current.
                    let line = if axis == Axis::X { inner } else { group.outer };
                    let cell = |at: usize| match axis {
                        Axis::X => number(group.patch, at, group.outer),
                        Axis::Y => number(group.patch, inner, at),
                    };
                    let before = line.checked_sub(1).and_then(|b| cell(b).map(|c| (c, 1.0 / (lines[line] - lines[b]))));
                    let after = cell(line).map(|c| (c, -1.0 / (lines[line + 1] - lines[line])));
                    rooftops.push(Rooftop { cells: [before.unwrap_or((0, 0.0)), after.unwrap_or((0, 0.0))] });
                }
            }
        }
        Unknowns { cells, along_x, along_y, rooftops }
    }

    /// Number of unknown currents.
    pub fn count(&self) -> usize {
        self.rooftops.len()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rooftops_join_copper_and_walls_only() {
        // An L of three cells, its left end on the wall.
        let patch = Patch { x_m: vec![0.0, 1e-3, 3e-3], y_m: vec![4e-3, 5e-3, 6e-3], copper: vec![true, true, false, true] };
        let unknowns = Unknowns::new(&[patch], [10e-3, 10e-3]);
        assert_eq!((unknowns.cells.size, unknowns.along_x.size, unknowns.along_y.size), (3, 2, 1));
        // The half rooftop at the wall has a cell on its right only; its divergence is minus one over the cell's length.
        assert_eq!(unknowns.rooftops[0].cells, [(0, 0.0), (0, -1.0 / 1e-3)]);
        assert_eq!(unknowns.rooftops[2].cells[0].0, 1);
        assert_eq!(unknowns.rooftops[2].cells[1].0, 2);
    }
}
