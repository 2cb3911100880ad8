//! `advise`: one comparison, and what changes it.

use assert_cmd::Command;
use serde_json::Value;

use crate::STARTER;

/// The advice on the starter with some text replaced: exit code and the entry of each family by name.
fn advice(changes: &[(&str, &str)]) -> (i32, impl Fn(&str) -> Value + use<>) {
    let mut text = STARTER.to_string();
    for (from, to) in changes {
        assert!(text.contains(from), "{from}");
        text = text.replace(from, to);
    }
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("order.toml");
    std::fs::write(&file, text).unwrap();
    let output = Command::cargo_bin("stripwright").unwrap().args(["advise", "--json", file.to_str().unwrap()]).output().unwrap();
    let json: Value = serde_json::from_slice(&output.stdout).unwrap_or_else(|e| panic!("{e}: {}", String::from_utf8_lossy(&output.stderr)));
    let families = json["families"].as_array().unwrap().clone();
    (output.status.code().unwrap(), move |name: &str| families.iter().find(|f| f["name"] == name).unwrap().clone())
}

#[test]
fn compares_every_family_that_passes_a_band_and_refuses_with_the_one_that_fits() {
    let (code, of) = advice(&[]);
    assert_eq!(code, 0);
    let edge = of("edge-coupled");
    assert!(edge["met"] == true && edge["as_ordered"] == true && edge["vias"] == 0, "{edge}");
    assert!(edge["narrowest_gap_m"].as_f64().unwrap() >= 0.15e-3 && edge["worst_loss_db"].as_f64().unwrap() > 0.5, "{edge}");
    // Half-wave resonators: f goes as 1 / sqrt(eps_eff), and eps_eff grows at most as er does; so within half of 0.04 / 3.0, downwards.
    let shift = edge["shift_by_permittivity"]["center_hz"].as_f64().unwrap() / 3.6e9;
    assert!(shift < 0.0 && shift > -0.5 * 0.04 / 3.0 && shift < -0.3 * 0.04 / 3.0, "{shift}");
    // 11 % wide: no gap across an end couples so much.
    let end = of("end-coupled");
    assert!(end["possible"] == false && end["reason"].as_str().unwrap().contains("gap 1 wants"), "{end}");
    assert!(end["help"].as_str().unwrap().contains("edge-coupled"), "{end}");
}

#[test]
fn another_gap_limit_of_the_shop_changes_the_advice() {
    let narrow = [
        ("[\"3.40 GHz\", \"3.80 GHz\"]", "[\"3.595 GHz\", \"3.605 GHz\"]"),
        ("[\"3.45 GHz\", \"3.75 GHz\"]", "[\"3.598 GHz\", \"3.602 GHz\"]"),
    ];
    let plain = ("# degree = 5 ", "degree = 2 ");
    let with_gap = |gap: &'static str| {
        let mut changes = narrow.to_vec();
        changes.extend([plain, ("# gap = \"0.15 mm\"", gap)]);
        advice(&changes)
    };
    // 0.3 % wide: the end gap that this asks for is narrower than 0.15 mm and wider than 0.02 mm.
    let (_, fine) = with_gap("gap = \"0.02 mm\"");
    let (_, coarse) = with_gap("gap = \"0.15 mm\"");
    assert!(fine("end-coupled")["possible"] == true, "{}", fine("end-coupled"));
    let refused = coarse("end-coupled");
    assert!(refused["possible"] == false && refused["reason"].as_str().unwrap().contains("0.150 mm"), "{refused}");
    // And the family that fits is one no more where its own gap is below the limit.
    let (code, coarser) = advice(&[("# gap = \"0.15 mm\"", "gap = \"0.60 mm\"")]);
    let broken = coarser("edge-coupled");
    assert!(broken["met"] == false, "{broken}");
    assert!(broken["code"] == "gap-below-minimum", "{broken}");
    // What fits then is a family with wider gaps: the advice names it, and is met.
    assert!(code == 0 && coarser("interdigital")["met"] == true, "{}", coarser("interdigital"));
}
