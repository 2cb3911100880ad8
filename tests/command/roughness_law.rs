//! The order's roughness law: read, written back, and used by the lines.

use stripwright::family;
use stripwright::line::{AsBuilt, Strip};
use stripwright::order::{self, Order, RoughnessLaw, Source};

use crate::{STARTER, changed};

fn read(text: &str) -> Order {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("order.toml");
    std::fs::write(&path, text).unwrap();
    order::read(&Source::open(&path).unwrap(), &family::keys()).unwrap().0
}

#[test]
fn the_law_is_read_written_back_and_used() {
    let spheres = read(&changed(
        "# permittivity = 3.00 ",
        "copper = { roughness-law = \"stacked-spheres\", ten-point-height = \"6 um\" }\n# permittivity = 3.00 ",
    ));
    assert_eq!(spheres.laminate.copper.roughness_law, RoughnessLaw::StackedSpheres { ten_point_height_m: 6e-6 });
    let written = order::write(&spheres);
    assert!(written.contains("roughness-law = \"stacked-spheres\", ten-point-height = \"6 um\""), "{written}");
    assert_eq!(read(&written).laminate, spheres.laminate);
    let usual = read(STARTER);
    assert_eq!(usual.laminate.copper.roughness_law, RoughnessLaw::HammerstadJensen);
    let written = order::write(&usual);
    assert!(written.contains("roughness-law = \"hammerstad-jensen\""), "{written}");
    assert!(written.contains("\"laminate.copper.roughness-law\""), "listed as a default: {written}");
    // Spheres of 0.06 Rz on foil of 6 um lose more than 1 um rms by the older law at 20 GHz (skin depth 0.47 um): factor
    // 1 + 1.5 (14 4 pi / 36) / (1 + d + d^2 / 2) with d = 0.467 / 0.36, 3.3, against 1.9. The smooth top and sides dilute it.
    let loss = |order: &Order| Strip::new(&AsBuilt::nominal(order), 1.9e-3).at(20e9).conductor_np_per_m;
    let ratio = loss(&spheres) / loss(&usual);
    assert!(ratio > 1.2 && ratio < 3.3 / 1.0, "{ratio}");
}
