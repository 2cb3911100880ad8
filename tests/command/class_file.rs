//! The user's own classes, in a file of theirs.

use stripwright::family;
use stripwright::order::{self, Source};

use crate::{changed, read_file};

const CLASSES: &str = "
[[laminate]]
name = \"my-foam\"
about = \"a foam of our own (invented)\"
kind = \"other\"
permittivity = 1.12
permittivity-tolerance = 0.02
loss-tangent = 0.0009
loss-tangent-at = \"10 GHz\"
thicknesses = [\"1 mm\"]
thickness = \"1 mm\"
thickness-tolerance = \"0.1 mm\"
copper = { base = \"18 um\", plating = \"0 um\", roughness = \"1 um\", conductivity = \"58 MS/m\" }
finish = \"bare\"

[[launch]]
name = \"open\"
about = \"found before the embedded one\"
shape = \"pads\"
pad-length = \"2 mm\"
pad-width = \"1 mm\"
";

/// An order that uses the file, in a folder with it.
fn folder(classes: &str) -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    let order = changed("# classes = \"my-classes.toml\"", "classes = \"my-classes.toml\"")
        .replace("class = \"ceramic-ptfe-3.0\"", "class = \"my-foam\"")
        .replace("launch = \"edge-coax-pin-1.27mm\"", "launch = \"open\"");
    std::fs::write(folder.path().join("order.toml"), order).unwrap();
    std::fs::write(folder.path().join("my-classes.toml"), classes).unwrap();
    folder
}

#[test]
fn classes_of_the_users_own_file_are_found_first() {
    let folder = folder(CLASSES);
    let source = Source::open(&folder.path().join("order.toml")).unwrap();
    let (order, _) = order::read(&source, &family::keys()).unwrap();
    assert_eq!(order.laminate.permittivity, 1.12);
    assert_eq!(order.board.launch.about, "found before the embedded one");
    // The complete order stands without the class file, and is written to the same bytes.
    let text = order::write(&order);
    let alone = Source::from_text("elsewhere/order.toml", text.clone());
    let (again, warnings) = order::read(&alone, &family::keys()).unwrap();
    assert_eq!(again, order);
    assert!(warnings.is_empty(), "{warnings:?}");
    assert_eq!(order::write(&again), text);
}

#[test]
fn mistakes_of_the_class_file_carry_its_own_line_numbers() {
    let folder = folder(&CLASSES.replace("permittivity = 1.12", "permitivity = 1.12"));
    let (problems, printed) = read_file(&folder.path().join("order.toml"));
    assert!(problems.iter().all(|p| p.code == "class-file"), "{printed}");
    assert!(printed.contains("my-classes.toml:6:1 laminate[1].permitivity"), "{printed}");
    assert_eq!(problems.len(), 1, "{printed}");
    assert!(printed.contains("did you mean \"permittivity\""), "{printed}");
    assert!(printed.contains("order.toml:"), "{printed}");
}

#[test]
fn a_missing_class_file_is_one_mistake() {
    let folder = folder(CLASSES);
    std::fs::remove_file(folder.path().join("my-classes.toml")).unwrap();
    let (problems, printed) = read_file(&folder.path().join("order.toml"));
    assert_eq!(problems.len(), 1, "{printed}");
    assert!(printed.contains("my-classes.toml: there is no such file") && printed.contains("order.classes"), "{printed}");
}
