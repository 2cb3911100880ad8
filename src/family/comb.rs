//! Upright strips side by side, cut wherever one of them ends or is tapped: the copper of interdigital, combline and hairpin filters.

use crate::base::Nm;
use crate::base::Point;
use crate::layout::Draft;
use crate::layout::Part;
use crate::layout::Way;

/// A strip along y.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Upright {
    /// Its left edge.
    pub left: Nm,
    /// Width.
    pub width: Nm,
    /// Its lower end.
    pub bottom: Nm,
    /// Its upper end.
    pub top: Nm,
}

impl Upright {
    fn right(&self) -> Nm {
        self.left + self.width
    }

    fn middle(&self, y: Nm) -> Point {
        Point { x: self.left + Nm(self.width.0.div_euclid(2)), y }
    }
}

/// A strip that leaves one of the uprights.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Tap {
    /// Which upright.
    pub strip: usize,
    /// Height of its axis.
    pub at: Nm,
    /// Its width.
    pub width: Nm,
    /// To the left or to the right.
    pub side: Way,
}

/// The nodes at the ends of the strips and of the taps, in their order.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Ends {
    /// Lower ends.
    pub bottom: Vec<usize>,
    /// Upper ends.
    pub top: Vec<usize>,
    /// Where each tap begins, on its upright's axis.
    pub taps: Vec<usize>,
}

/// Uprights of widths, with gaps between them, the first one's left edge at `x`; all from `bottom` to `top`.
pub fn row(x: Nm, widths: &[Nm], gaps: &[Nm], bottom: Nm, top: Nm) -> Vec<Upright> {
    let mut left = x;
    widths
        .iter()
        .enumerate()
        .map(|(i, width)| {
            let upright = Upright { left, width: *width, bottom, top };
            left = upright.right() + gaps.get(i).copied().unwrap_or_default();
            upright
        })
        .collect()
}

/// Draws uprights (left to right at every height, none touching; one may stand on another) and their taps. `serves` names the widths and gaps, in order; they stand at the longest section of all strips.
/// `None` when a tap does not lie within its strip.
pub fn draw(draft: &mut Draft, uprights: &[Upright], taps: &[Tap], serves: Vec<String>) -> Option<Ends> {
    let inside = |tap: &Tap| uprights.get(tap.strip).is_some_and(|strip| strip.bottom < tap.at && tap.at < strip.top);
    if !taps.iter().all(inside) {
        return None;
    }
    let mut cuts: Vec<Nm> = uprights.iter().flat_map(|s| [s.bottom, s.top]).chain(taps.iter().map(|tap| tap.at)).collect();
    cuts.sort_unstable();
    cuts.dedup();
    let windows: Vec<(Nm, Nm)> = cuts.windows(2).map(|pair| (pair[0], pair[1])).collect();
    let present = |(low, high): (Nm, Nm)| -> Vec<usize> {
        (0..uprights.len()).filter(|i| uprights[*i].bottom <= low && uprights[*i].top >= high).collect()
    };
    let named = (0..windows.len()).max_by_key(|i| (present(windows[*i]).len(), windows[*i].1 - windows[*i].0));
    let mut ends = Ends { bottom: vec![0; uprights.len()], top: vec![0; uprights.len()], taps: vec![0; taps.len()] };
    let mut at: Vec<usize> = vec![0; uprights.len()];
    for (window, (low, high)) in windows.into_iter().enumerate() {
        let strips = present((low, high));
        if strips.is_empty() {
            continue;
        }
        for i in &strips {
            if uprights[*i].bottom == low {
                at[*i] = draft.mouth(uprights[*i].middle(low), uprights[*i].width, Way::Down);
                ends.bottom[*i] = at[*i];
            }
        }
        let near: Vec<usize> = strips.iter().map(|i| at[*i]).collect();
        for i in &strips {
            at[*i] = draft.mouth(uprights[*i].middle(high), uprights[*i].width, Way::Up);
        }
        let nodes = near.into_iter().chain(strips.iter().map(|i| at[*i])).collect();
        let widths = strips.iter().map(|i| uprights[*i].width).collect();
        let gaps = strips.windows(2).map(|pair| uprights[pair[1]].left - uprights[pair[0]].right()).collect();
        let names = if named == Some(window) { serves.clone() } else { Vec::new() };
        draft.place(Part::Lines { widths, gaps, length: high - low }, nodes, names);
        for (number, tap) in taps.iter().enumerate().filter(|(_, tap)| tap.at == high) {
            let width = uprights[tap.strip].width;
            (at[tap.strip], ends.taps[number]) = draft.tee(at[tap.strip], width, tap.width, Way::Up, tap.side);
        }
        for i in strips {
            if uprights[i].top == high {
                ends.top[i] = at[i];
            }
        }
    }
    Some(ends)
}
