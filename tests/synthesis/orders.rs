//! Orders as text, from numbers, and a seeded generator.

use stripwright::family;
use stripwright::order::{self, Order, Source};

/// SplitMix64 (Steele, Lea and Flood 2014): small, seeded, the same on every platform.
pub struct Draw(pub u64);

impl Draw {
    /// Between 0 and 1.
    pub fn unit(&mut self) -> f64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        ((z ^ (z >> 31)) >> 11) as f64 / (1u64 << 53) as f64
    }
}

/// What an order of these tests is made from.
#[derive(Clone, Copy, Debug)]
pub struct Case {
    pub center_hz: f64,
    pub fraction: f64,
    pub degree: usize,
    pub permittivity: f64,
    pub thickness_mm: f64,
    /// Ripple in dB; `None` is maximally flat.
    pub ripple_db: Option<f64>,
    pub ports_ohm: [f64; 2],
}

impl Case {
    /// 1 to 12 GHz, 3 to 20 % wide, degree 2 to 7, er 2.2 to 10.2, on usual thicknesses.
    pub fn random(draw: &mut Draw) -> Case {
        Case {
            center_hz: 1e9 * 12f64.powf(draw.unit()),
            fraction: 0.03 + 0.17 * draw.unit(),
            degree: 2 + (6.0 * draw.unit()) as usize,
            permittivity: 2.2 + 8.0 * draw.unit(),
            thickness_mm: [0.254, 0.508, 0.762, 1.27, 1.524][(5.0 * draw.unit()) as usize],
            ripple_db: (draw.unit() > 0.25).then(|| 0.01 * 50f64.powf(draw.unit())),
            ports_ohm: if draw.unit() < 0.15 { [50.0, 75.0] } else { [50.0, 50.0] },
        }
    }

    pub fn text(&self) -> String {
        let shape = self
            .ripple_db
            .map_or("response = \"maximally-flat\"".to_string(), |r| format!("response = \"equal-ripple\"\nripple = \"{r} dB\""));
        let (from, to) = (self.center_hz * (1.0 - 0.5 * self.fraction), self.center_hz * (1.0 + 0.5 * self.fraction));
        format!(
            "[order]\nname = \"random\"\ntitle = \"A random order of the tests\"\nrevision = \"A\"\n\
             [filter]\nfamily = \"edge-coupled\"\n{shape}\npassband = [\"{} GHz\", \"{} GHz\"]\ndegree = {}\nports = [\"{} ohm\", \"{} ohm\"]\n\
             [laminate]\nclass = \"ceramic-ptfe-3.0\"\npermittivity = {}\nthickness = \"{} mm\"\n[shop]\nclass = \"special\"\ngrid = \"1 um\"\n[board]\nlaunch = \"open\"\n",
            from / 1e9,
            to / 1e9,
            self.degree,
            self.ports_ohm[0],
            self.ports_ohm[1],
            self.permittivity,
            self.thickness_mm
        )
    }

    pub fn order(&self) -> Order {
        let source = Source::from_text("random.toml", self.text());
        order::read(&source, &family::keys()).unwrap_or_else(|problems| panic!("{problems:?}\n{}", self.text())).0
    }
}
