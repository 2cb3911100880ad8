//! Requests no printed filter can serve: an answer with the reason, not a number.

use stripwright::base::Problem;
use stripwright::family;
use stripwright::order::{self, Source};

fn text(filter: &str, requirement: &str, laminate: &str) -> String {
    format!(
        "[order]\nname = \"bad\"\ntitle = \"A bad request\"\nrevision = \"A\"\n[filter]\n{filter}\nport = \"50 ohm\"\n{requirement}\n\
         [laminate]\n{laminate}\n[shop]\nclass = \"ordinary\"\n[board]\nlaunch = \"open\"\n"
    )
}

/// Everything that stands against an order: why it cannot be made, or the errors and missed requirements of what was made.
fn against(text: &str) -> (Vec<Problem>, Vec<String>) {
    let (order, _) = order::read(&Source::from_text("bad.toml", text), &family::keys()).unwrap();
    match stripwright::make(&order) {
        Err(problems) => (problems, Vec::new()),
        Ok((made, _)) => {
            let missed = made.figures.verdicts.iter().filter(|v| !v.is_met()).map(|v| v.describe()).collect();
            (made.findings.into_iter().filter(Problem::is_error).collect(), missed)
        }
    }
}

const PTFE: &str = "class = \"ceramic-ptfe-3.0\"";

#[test]
fn sixty_percent_edge_coupled_is_out_of_reach() {
    let filter =
        "family = \"edge-coupled\"\nresponse = \"equal-ripple\"\npassband = [\"2.1 GHz\", \"3.9 GHz\"]\nripple = \"0.1 dB\"\ndegree = 5";
    let (problems, _) = against(&text(filter, "", PTFE));
    let codes: Vec<_> = problems.iter().map(|p| p.code).collect();
    assert!(codes.iter().any(|c| ["coupling-out-of-reach", "passband-not-reached", "gap-below-minimum"].contains(c)), "{codes:?}");
    assert!(problems.iter().all(|p| !p.help.is_empty()));
}

#[test]
fn a_fifth_of_a_percent_on_a_lossy_laminate_fails_by_its_loss() {
    let filter = "family = \"edge-coupled\"\nresponse = \"equal-ripple\"\npassband = [\"2.495 GHz\", \"2.5 GHz\"]\nripple = \"0.1 dB\"";
    let requirement = "[[requirement]]\nband = [\"2.496 GHz\", \"2.499 GHz\"]\ninsertion-loss = { at-most = \"6 dB\" }\n[[requirement]]\nband = [\"2.53 GHz\", \"2.54 GHz\"]\nrejection = { at-least = \"20 dB\" }";
    let (problems, missed) = against(&text(filter, requirement, "class = \"glass-epoxy-4.3\""));
    let said: Vec<&str> = problems.iter().map(|p| p.message.as_str()).chain(missed.iter().map(String::as_str)).collect();
    assert!(said.iter().any(|text| text.contains("insertion loss")), "{said:?}");
}

#[test]
fn forty_gigahertz_on_a_thick_laminate_is_no_line_any_more() {
    let filter =
        "family = \"edge-coupled\"\nresponse = \"equal-ripple\"\npassband = [\"39 GHz\", \"41 GHz\"]\nripple = \"0.1 dB\"\ndegree = 3";
    let (problems, _) = against(&text(filter, "", "class = \"glass-epoxy-4.3\"\nthickness = \"1.6 mm\""));
    let codes: Vec<_> = problems.iter().map(|p| p.code).collect();
    assert!(codes.iter().any(|c| c.contains("surface") || c.contains("transverse") || c.contains("shorter")), "{codes:?}");
}

#[test]
fn a_wide_gap_coupled_filter_names_the_family_that_fits() {
    let filter =
        "family = \"end-coupled\"\nresponse = \"equal-ripple\"\npassband = [\"1.9 GHz\", \"2.1 GHz\"]\nripple = \"0.5 dB\"\ndegree = 3";
    let (problems, _) = against(&text(filter, "", PTFE));
    assert!(problems[0].code == "coupling-out-of-reach" && problems[0].help.contains("edge-coupled"), "{problems:?}");
}

#[test]
fn a_wide_stop_names_the_family_that_fits() {
    let filter = "family = \"coupled-resonator-stop\"\nresponse = \"equal-ripple\"\nstopband = [\"1.5 GHz\", \"2.5 GHz\"]\nripple = \"0.1 dB\"\ndegree = 3";
    let (problems, _) = against(&text(filter, "", PTFE));
    assert!(problems[0].code == "band-too-wide" && problems[0].help.contains("open-stub-stop"), "{problems:?}");
}

#[test]
fn a_resonance_narrower_than_the_grid_is_refused_with_what_would_do() {
    let filter = "family = \"single-resonator\"\nresponse = \"maximally-flat\"\npassband = [\"4.95 GHz\", \"5.05 GHz\"]\ndegree = 1\nresonance-loss = \"60 dB\"";
    let (problems, _) = against(&text(filter, "", PTFE));
    assert!(problems[0].code == "resonance-below-grid" && problems[0].help.contains("dB\" or less"), "{problems:?}");
}
