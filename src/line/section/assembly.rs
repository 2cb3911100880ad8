//! What potential does each panel's charge make at the middle of each panel?

use super::green::{Kernel, Table};
use super::logarithm::log_antiderivative;
use super::panels::{Contour, Face, Interpolation};

/// Longest side in nodes that the row buffers hold.
const NODES_AT_MOST: usize = 129;

/// A square matrix, row by row.
#[derive(Clone)]
pub(super) struct Square {
    pub(super) size: usize,
    pub(super) values: Vec<f64>,
}

impl Square {
    pub(super) fn zero(size: usize) -> Square {
        Square { size, values: vec![0.0; size * size] }
    }

    #[inline(always)]
    pub(super) fn row_mut(&mut self, row: usize, from: usize, count: usize) -> &mut [f64] {
        let start = row * self.size + from;
        &mut self.values[start..start + count]
    }
}

/// Where a block of field and source panels stands in the matrices, and which mirror of the field it is.
#[derive(Clone, Copy)]
pub(super) struct Block {
    pub(super) row: usize,
    pub(super) column: usize,
    /// Field points mirrored in this plane x = const (the same as mirroring the sources).
    pub(super) mirror: Option<f64>,
    /// The same strip, not mirrored.
    pub(super) same: bool,
    pub(super) sign: f64,
}

impl Block {
    #[inline(always)]
    fn field_x(&self, x: f64) -> f64 {
        match self.mirror {
            Some(plane) => 2.0 * plane - x,
            None => x,
        }
    }
}

/// Adds mean ln r (`direct`) and mean ln r of the image in the surface (`image`), both over 2 pi and negative, per unit charge of each panel.
pub(super) fn add_logarithms(field: &Contour, source: &Contour, block: Block, direct: &mut Square, image: Option<&mut Square>) {
    pulp::Arch::new().dispatch(Logarithms { field, source, block, direct, image });
}

struct Logarithms<'a> {
    field: &'a Contour,
    source: &'a Contour,
    block: Block,
    direct: &'a mut Square,
    image: Option<&'a mut Square>,
}

impl pulp::NullaryFnOnce for Logarithms<'_> {
    type Output = ();

    #[inline(always)]
    fn call(self) {
        add_logarithms_here(self.field, self.source, self.block, self.direct, self.image);
    }
}

#[inline(always)]
fn add_logarithms_here(field: &Contour, source: &Contour, block: Block, direct: &mut Square, mut image: Option<&mut Square>) {
    let factor = -block.sign / (2.0 * std::f64::consts::PI);
    let mut buffer = [0.0; NODES_AT_MOST];
    for (row, (&x, &z)) in field.x.iter().zip(&field.z).enumerate() {
        let x = block.field_x(x);
        for (index, side) in source.sides.iter().enumerate() {
            let count = side.inverse.len();
            let own = block.same && field.sides.get(index).is_some_and(|own| row >= own.first && row < own.first + count);
            let values = &mut buffer[..=count];
            let (start, across) = {
                let (dx, dz) = (side.x - x, side.z - z);
                (dx * side.along_x + dz * side.along_z, dx * side.along_z - dz * side.along_x)
            };
            log_antiderivative(start, if own { 0.0 } else { across }, &side.nodes, values);
            add_differences(values, &side.inverse, factor, direct.row_mut(block.row + row, block.column + side.first, count));
            if let Some(image) = image.as_deref_mut() {
                // The image of a charge in the surface, or seen from a point in it, is as far as the charge itself.
                if z != 0.0 && side.face != Face::Foot {
                    let (dx, dz) = (side.x - x, side.z + z);
                    log_antiderivative(dx * side.along_x + dz * side.along_z, dx * side.along_z - dz * side.along_x, &side.nodes, values);
                }
                add_differences(values, &side.inverse, factor, image.row_mut(block.row + row, block.column + side.first, count));
            }
        }
    }
}

#[inline(always)]
fn add_differences(values: &[f64], inverse: &[f64], factor: f64, out: &mut [f64]) {
    for (((out, inverse), left), right) in out.iter_mut().zip(inverse).zip(values).zip(&values[1..]) {
        *out += factor * (right - left) * inverse;
    }
}

/// Adds the tabulated remainder.
pub(super) fn add_remainder(
    field: &Contour,
    source: &Contour,
    block: Block,
    table: &Table,
    heights: &[f64],
    sides: &Interpolation,
    out: &mut Square,
) {
    let count = heights.len();
    let mut row_values = vec![0.0; source.len()];
    for side in &field.sides {
        match side.face {
            Face::Foot | Face::Top => {
                let height = if side.face == Face::Foot { 0 } else { count - 1 };
                for point in side.first..side.first + side.inverse.len() {
                    remainder_row(source, block.field_x(field.x[point]), height, table, heights, sides, &mut row_values);
                    add_scaled(&row_values, block.sign, out.row_mut(block.row + point, block.column, source.len()));
                }
            }
            Face::Left | Face::Right => {
                for (height, z) in heights.iter().enumerate() {
                    let x = side.x + side.along_x * z / side.along_z;
                    remainder_row(source, block.field_x(x), height, table, heights, sides, &mut row_values);
                    for (offset, weights) in sides.at_middle.iter().enumerate() {
                        let target = out.row_mut(block.row + side.first + offset, block.column, source.len());
                        add_scaled(&row_values, block.sign * weights[height], target);
                    }
                }
            }
        }
    }
}

#[inline]
fn add_scaled(values: &[f64], factor: f64, out: &mut [f64]) {
    for (out, value) in out.iter_mut().zip(values) {
        *out += factor * value;
    }
}

/// Mean remainder of every source panel at one point that lies at a tabulated height.
fn remainder_row(source: &Contour, x: f64, height: usize, table: &Table, heights: &[f64], sides: &Interpolation, out: &mut [f64]) {
    for side in &source.sides {
        let panels = side.inverse.len();
        let target = &mut out[side.first..side.first + panels];
        match side.face {
            Face::Foot | Face::Top => {
                let pair = table.pair(height, if side.face == Face::Foot { 0 } else { heights.len() - 1 });
                let mut left = table.antiderivative(pair, side.x - x);
                for ((value, node), inverse) in target.iter_mut().zip(&side.nodes[1..]).zip(&side.inverse) {
                    let right = table.antiderivative(pair, side.x + node - x);
                    *value = (right - left) * inverse;
                    left = right;
                }
            }
            Face::Left | Face::Right => {
                target.fill(0.0);
                for (other, z) in heights.iter().enumerate() {
                    let at = table.value(table.pair(height, other), side.x + side.along_x * z / side.along_z - x);
                    for (value, weights) in target.iter_mut().zip(&sides.over_panel) {
                        *value += weights[other] * at;
                    }
                }
            }
        }
    }
}

/// direct + weight * image + remainder for one medium, from parts that several media share.
pub(super) fn combine(direct: &Square, image: Option<&Square>, kernel: &Kernel, remainder: Square) -> Square {
    let mut out = remainder;
    match image {
        Some(image) if kernel.image_weight != 0.0 => {
            for ((out, direct), image) in out.values.iter_mut().zip(&direct.values).zip(&image.values) {
                *out += direct + kernel.image_weight * image;
            }
        }
        _ => {
            for (out, direct) in out.values.iter_mut().zip(&direct.values) {
                *out += direct;
            }
        }
    }
    out
}
