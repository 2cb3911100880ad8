//! How a row is held against its printed value.

use stripwright::line::AsBuilt;
use stripwright::line::StaticsModel;

/// Counts rows and fails at the end of a table with all misses at once.
pub struct Table {
    name: &'static str,
    rows: usize,
    misses: Vec<String>,
    worst: f64,
}

impl Table {
    pub fn new(name: &'static str) -> Table {
        Table { name, rows: 0, misses: Vec::new(), worst: 0.0 }
    }

    /// Relative tolerance.
    pub fn relative(&mut self, row: &str, ours: f64, printed: f64, tolerance: f64) {
        self.absolute(row, ours, printed, tolerance * printed.abs());
    }

    /// Absolute tolerance.
    pub fn absolute(&mut self, row: &str, ours: f64, printed: f64, tolerance: f64) {
        self.rows += 1;
        let miss = (ours - printed).abs();
        self.worst = self.worst.max(miss / tolerance);
        // Not-a-number is no hit.
        let hit = miss <= tolerance;
        if !hit {
            self.misses
                .push(format!("{row}: {ours} against {printed} ({:+.3} % off, {tolerance:.2e} allowed)", 100.0 * (ours / printed - 1.0)));
        }
    }

    /// The number of rows, or all that miss.
    pub fn finish(self) -> Result<usize, String> {
        if self.misses.is_empty() {
            println!("{}: {} rows, worst at {:.0} % of its tolerance", self.name, self.rows, 100.0 * self.worst);
            Ok(self.rows)
        } else {
            Err(format!("{}: {} of {} rows miss\n{}", self.name, self.misses.len(), self.rows, self.misses.join("\n")))
        }
    }
}

/// A lossless isotropic board with infinitely thin copper, for the closed forms.
pub fn thin(er: f64, h_m: f64) -> AsBuilt {
    thick(er, h_m, 0.0)
}

/// A lossless isotropic board with copper of a thickness, square edges.
pub fn thick(er: f64, h_m: f64, t_m: f64) -> AsBuilt {
    AsBuilt {
        permittivity: er,
        in_plane_permittivity: er,
        loss_tangent: 0.0,
        thickness_m: h_m,
        copper_thickness_m: t_m,
        undercut_m: 0.0,
        hole_plating_m: 25e-6,
        roughness_m: 0.0,
        ten_point_height_m: None,
        conductivity_s_per_m: 5.8e7,
        plating: None,
        lid_m: None,
        walls_m: None,
        coat: None,
        widening_m: 0.0,
        lossless: true,
        statics: StaticsModel::ClosedForm,
    }
}
