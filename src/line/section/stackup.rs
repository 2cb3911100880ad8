//! What is the same for all strips on one board? Layers, copper and lid with their tables, made once and used by many solutions.

use std::collections::BTreeMap;
use std::sync::Mutex;
use std::sync::OnceLock;

use crate::base::Problem;

use super::fast::{solve_pair, solve_single};
use super::geometry::CopperOf;
use super::geometry::CrossSection;
use super::geometry::HousingOf;
use super::geometry::LayerOf;
use super::geometry::SPAN_RATIO_AT_MOST;
use super::geometry::StripOf;
use super::green::{Kernel, Medium, OCTAVES_AT_MOST};
use super::panels::{Grid, Interpolation};
use super::results::{Line, Pair, Solved};
use super::solve::{solve_array, too_wide};

/// Cached lines and pairs at most; then the cache is emptied. A synthesis with refine needs some thousand.
const CACHED_AT_MOST: usize = 20_000;
/// Permittivity step of the filling factors: small against the bend of C, large against the solver's rounding.
pub(super) const PERMITTIVITY_STEP: f64 = 1e-3;

/// Tables of the stackup and of the same room with all dielectric taken out.
pub(super) struct Kernels {
    pub(super) dielectric: Kernel,
    pub(super) air: Kernel,
}

/// Key of the cache: width, gap (zero for one line).
type Key = (u64, u64);

/// Layers, copper and lid, with everything that many cross-sections on them share.
///
/// Tables are made when first needed and depend on nothing but the stackup; results are cached by the exact width and gap.
/// Both only save time: a result is the same bits whatever was asked before.
pub struct Stackup {
    pub(super) layers: Vec<LayerOf>,
    pub(super) copper: CopperOf,
    pub(super) lid_m: Option<f64>,
    pub(super) heights: Vec<f64>,
    dielectric: Medium,
    air: Medium,
    levels: [OnceLock<Kernels>; OCTAVES_AT_MOST],
    pub(super) coarse: Interpolation,
    pub(super) fine: Interpolation,
    pairs: Mutex<BTreeMap<Key, Pair>>,
    lines: Mutex<BTreeMap<u64, Line>>,
    /// For each layer the same stackup with its permittivity a little lower and higher.
    varied: OnceLock<Vec<[Box<Stackup>; 2]>>,
}

impl std::fmt::Debug for Stackup {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("Stackup")
            .field("layers", &self.layers)
            .field("copper", &self.copper)
            .field("lid_m", &self.lid_m)
            .finish_non_exhaustive()
    }
}

/// Grids of the fast path: one Richardson step between them.
pub(super) const COARSE: Grid = Grid { width: 9, thickness: 4 };
pub(super) const FINE: Grid = COARSE.doubled();
/// The same of sheets: they have so few panels that both can be nearly twice as fine.
pub(super) const COARSE_SHEET: Grid = Grid::new(16);

impl Stackup {
    /// Checks layers, copper and lid.
    ///
    /// # Errors
    /// The codes of [`CrossSection::check`].
    pub fn new(layers: &[LayerOf], copper: CopperOf, lid_m: Option<f64>) -> Result<Stackup, Vec<Problem>> {
        // A strip that is wide enough for any undercut lets the check see everything but the strips.
        let width = (4.0 * copper.undercut_m).max(layers.iter().map(|layer| layer.thickness_m).fold(0.0, f64::max));
        let problems = CrossSection::single(layers.to_vec(), copper, width, HousingOf { lid_m, wall_m: None }).check();
        if problems.is_empty() { Ok(Stackup::unchecked(layers, copper, lid_m)) } else { Err(problems) }
    }

    pub(super) fn unchecked(layers: &[LayerOf], copper: CopperOf, lid_m: Option<f64>) -> Stackup {
        let dielectric = Medium::new(layers, lid_m, None, copper.thickness_m);
        let air = Medium::air(layers, lid_m, None, copper.thickness_m);
        let heights = dielectric.heights_m();
        Stackup {
            layers: layers.to_vec(),
            copper,
            lid_m,
            coarse: Interpolation::new(&heights, COARSE.thickness),
            fine: Interpolation::new(&heights, FINE.thickness),
            heights,
            dielectric,
            air,
            levels: std::array::from_fn(|_| OnceLock::new()),
            pairs: Mutex::new(BTreeMap::new()),
            lines: Mutex::new(BTreeMap::new()),
            varied: OnceLock::new(),
        }
    }

    /// Tables that reach over a whole of this width.
    pub(super) fn kernels(&self, reach_m: f64) -> Result<&Kernels, Problem> {
        // The same bound as `CrossSection::check`, so that no pair is solved here and refused there.
        if reach_m > SPAN_RATIO_AT_MOST * self.dielectric.scale_m() {
            return Err(too_wide(reach_m));
        }
        let octaves = Kernel::octaves_for(&self.dielectric, reach_m).ok_or_else(|| too_wide(reach_m))?;
        let air_octaves = Kernel::octaves_for(&self.air, reach_m).ok_or_else(|| too_wide(reach_m))?;
        let level = self.levels.get(octaves - 1).ok_or_else(|| too_wide(reach_m))?;
        Ok(level.get_or_init(|| {
            // The largest reach of this level, so that the level alone settles the air table too.
            Kernels {
                dielectric: Kernel::build(&self.dielectric, &self.heights, octaves),
                air: Kernel::build(&self.air, &self.heights, octaves.max(air_octaves)),
            }
        }))
    }

    /// Even and odd mode of two equal strips.
    ///
    /// # Units
    /// Metres at the foot.
    /// # Valid range
    /// As [`CrossSection::check`].
    /// # Accuracy
    /// See the table in [`crate::line::section`]; `error_estimate` of the result for this one.
    /// # Errors
    /// `strip-width`, `strip-overlap`, `undercut-exceeds-strip`, `section-aspect`, `section-not-converged`.
    pub fn symmetric_pair(&self, width_m: f64, gap_m: f64) -> Result<Pair, Problem> {
        let key = (width_m.to_bits(), gap_m.to_bits());
        if let Some(found) = look_up(&self.pairs, &key) {
            return Ok(found);
        }
        let pair = solve_pair(self, width_m, gap_m)?;
        keep(&self.pairs, key, pair);
        Ok(pair)
    }

    /// One strip.
    ///
    /// # Units
    /// Metres at the foot.
    /// # Errors
    /// As [`Stackup::symmetric_pair`].
    pub fn single(&self, width_m: f64) -> Result<Line, Problem> {
        let key = width_m.to_bits();
        if let Some(found) = look_up(&self.lines, &key) {
            return Ok(found);
        }
        let line = solve_single(self, width_m)?;
        keep(&self.lines, key, line);
        Ok(line)
    }

    /// The same pair without looking into the cache: for benchmarks.
    ///
    /// # Errors
    /// As [`Stackup::symmetric_pair`].
    pub fn symmetric_pair_anew(&self, width_m: f64, gap_m: f64) -> Result<Pair, Problem> {
        solve_pair(self, width_m, gap_m)
    }

    /// Many strips, left to right, on fixed grids: smooth in every size.
    ///
    /// # Accuracy
    /// C within 0.1 % of the row's largest element; `error_estimate` of the result. For more, [`super::solve`].
    /// # Errors
    /// The codes of [`CrossSection::check`]; `section-not-converged`.
    pub fn array(&self, strips: &[StripOf]) -> Result<Solved, Problem> {
        solve_array(self, &self.section(strips))
    }

    /// Strips on this stackup.
    pub(super) fn section(&self, strips: &[StripOf]) -> CrossSection {
        CrossSection { layers: self.layers.clone(), copper: self.copper, strips: strips.to_vec(), coat: None, housing: self.housing() }
    }

    pub(super) fn housing(&self) -> HousingOf {
        HousingOf { lid_m: self.lid_m, wall_m: None }
    }

    /// Coarse and fine grid of the fast path.
    pub(super) fn grids(&self) -> [Grid; 2] {
        let coarse = if self.copper.thickness_m > 0.0 { COARSE } else { COARSE_SHEET };
        [coarse, coarse.doubled()]
    }

    pub(super) fn varied(&self) -> &[[Box<Stackup>; 2]] {
        self.varied.get_or_init(|| {
            (0..self.layers.len())
                .map(|index| {
                    let scaled =
                        |factor: f64| Box::new(Stackup::unchecked(&scale_layer(&self.layers, index, factor), self.copper, self.lid_m));
                    [scaled(1.0 - PERMITTIVITY_STEP), scaled(1.0 + PERMITTIVITY_STEP)]
                })
                .collect()
        })
    }
}

/// The layers with both permittivities of one scaled.
pub(super) fn scale_layer(layers: &[LayerOf], index: usize, factor: f64) -> Vec<LayerOf> {
    let mut layers = layers.to_vec();
    if let Some(layer) = layers.get_mut(index) {
        layer.permittivity *= factor;
        layer.in_plane_permittivity *= factor;
    }
    layers
}

fn look_up<K: Ord, V: Copy>(cache: &Mutex<BTreeMap<K, V>>, key: &K) -> Option<V> {
    cache.lock().ok().and_then(|cache| cache.get(key).copied())
}

fn keep<K: Ord, V>(cache: &Mutex<BTreeMap<K, V>>, key: K, value: V) {
    if let Ok(mut cache) = cache.lock() {
        if cache.len() >= CACHED_AT_MOST {
            cache.clear();
        }
        cache.insert(key, value);
    }
}
