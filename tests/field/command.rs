//! `stripwright solve` as a user meets it.

use std::path::{Path, PathBuf};

use assert_cmd::Command;

const LINE: &str = "[geometry]\ntitle = \"a line with a stub\"\n[box]\nsize = [\"24 mm\", \"12 mm\"]\nlid = \"8 mm\"\n[[below]]\nthickness = \"0.508 mm\"\n\
    permittivity = 3.5\nloss-tangent = 0.002\n[copper]\nthickness = \"35 um\"\n[[polygon]]\nrectangle-mm = [[0, 5.4], [24, 6.6]]\n[[polygon]]\n\
    corners-mm = [[11.5, 6], [12.5, 6], [12.5, 10], [11.5, 10]]\n[[port]]\nwall = \"left\"\nat = \"6 mm\"\nplane = \"8 mm\"\n[[port]]\nwall = \"right\"\n\
    at = \"6 mm\"\nplane = \"8 mm\"\n[sweep]\nfrom = \"1 GHz\"\nto = \"4 GHz\"\npoints = 31\n";

fn program() -> Command {
    Command::new(env!("CARGO_BIN_EXE_stripwright"))
}

fn written(folder: &Path, text: &str) -> PathBuf {
    let path = folder.join("line.toml");
    std::fs::write(&path, text).unwrap();
    path
}

#[test]
fn a_geometry_file_gives_a_table_and_a_touchstone_file() {
    let folder = tempfile::tempdir().unwrap();
    let (path, out) = (written(folder.path(), LINE), folder.path().join("line.s2p"));
    let run = program().arg("solve").arg(&path).arg("--touchstone").arg(&out).output().unwrap();
    assert!(run.status.success(), "{}", String::from_utf8_lossy(&run.stderr));
    let text = String::from_utf8(run.stdout).unwrap();
    assert!(text.contains("error bar") && text.contains("a line with a stub"), "{text}");
    // The forecast comes before the work.
    assert!(String::from_utf8_lossy(&run.stderr).contains("unknowns"));
    let touchstone = stripwright::network::touchstone::read(&std::fs::read_to_string(&out).unwrap(), 2).unwrap();
    let response = touchstone.response().unwrap();
    assert_eq!(response.f_hz.len(), 31);
    for s in &response.s {
        // Passive: no row of S gives back more than comes in; the margin is the fit's tolerance.
        assert!(s[0].norm_sqr() + s[1].norm_sqr() < 1.0 + 1e-4 && s[0].norm_sqr() + s[1].norm_sqr() > 0.8);
    }
    // Nothing is overwritten.
    assert_eq!(program().arg("solve").arg(&path).arg("--touchstone").arg(&out).output().unwrap().status.code(), Some(2));
}

#[test]
fn json_holds_the_response_and_its_error_bar() {
    let folder = tempfile::tempdir().unwrap();
    let run = program().args(["--json", "solve"]).arg(written(folder.path(), LINE)).output().unwrap();
    let value: serde_json::Value = serde_json::from_slice(&run.stdout).unwrap();
    assert_eq!(value["response"]["s21"].as_array().unwrap().len(), 31);
    assert!(value["error_bar"]["s21"].as_f64().unwrap() > 0.0);
}

#[test]
fn faults_are_named_and_nothing_is_made() {
    let folder = tempfile::tempdir().unwrap();
    for (from, to, code) in [
        ("at = \"6 mm\"\nplane = \"8 mm\"\n[[port]]", "at = \"2 mm\"\nplane = \"8 mm\"\n[[port]]", "port-on-no-copper"),
        ("plane = \"8 mm\"\n[[port]]", "plane = \"12 mm\"\n[[port]]", "feed-not-straight"),
        ("lid = \"8 mm\"", "lid = \"8\"", "unit-missing"),
        ("[12.5, 10], [11.5, 10]", "[12.5, 13], [11.5, 13]", "copper-outside-box"),
    ] {
        assert!(LINE.contains(from));
        let run = program().arg("solve").arg(written(folder.path(), &LINE.replace(from, to))).output().unwrap();
        let told = String::from_utf8_lossy(&run.stderr).into_owned();
        assert!(run.status.code() == Some(2) && told.contains(code) && run.stdout.is_empty(), "{code}: {told}");
    }
    let run = program().args(["solve", "--limit", "50"]).arg(written(folder.path(), LINE)).output().unwrap();
    assert!(run.status.code() == Some(2) && String::from_utf8_lossy(&run.stderr).contains("mesh-too-large"));
}
