//! Where the first gap is narrower than the shop can etch, a tapped input makes the same filter.

use stripwright::family;
use stripwright::order::{self, Order, Source};

fn order(input: &str) -> Order {
    let text = format!(
        "[order]\nname = \"tapped\"\ntitle = \"A trial\"\nrevision = \"A\"\n[filter]\nfamily = \"edge-coupled\"\nresponse = \"equal-ripple\"\nripple = \"0.1 dB\"\n\
         passband = [\"4.6 GHz\", \"5.4 GHz\"]\ndegree = 3\ninput = \"{input}\"\nport = \"50 ohm\"\n[laminate]\nclass = \"ceramic-ptfe-3.0\"\n\
         [shop]\nclass = \"ordinary\"\n[board]\nlaunch = \"open\"\ntext = \"none\"\n"
    );
    order::read(&Source::from_text("tapped.toml", &text), &family::keys()).unwrap().0
}

/// 16 % on er 3.0: the coupled input asks for a gap of some 0.1 mm, the tapped one for none below 0.15 mm, and both reach the prototype.
#[test]
fn a_tapped_input_needs_no_gap_below_the_shop_limit() {
    let errors = |input: &str| {
        let (made, chosen) = stripwright::make(&order(input)).unwrap();
        // What is asked of refinement: 1 is met.
        assert!(chosen.refined.before_snapping.worst_ratio <= 1.0, "{input}: {:?}", chosen.refined.before_snapping);
        made.findings.into_iter().filter(|p| p.is_error()).map(|p| p.code).collect::<Vec<_>>()
    };
    assert!(errors("coupled").iter().all(|code| *code == "gap-below-minimum") && !errors("coupled").is_empty());
    assert_eq!(errors("tapped"), Vec::<&str>::new());
}

/// The copper forms one piece with each port: the end resonators belong to the ports' nets.
#[test]
fn tapped_end_resonators_are_one_piece_with_their_ports() {
    let order = order("tapped");
    let family = family::of(&order).unwrap();
    let (set, _) = family.first_guess(&order, 3).unwrap();
    assert_eq!(family.layout(&set).unwrap().expected_nets, 3);
    assert_eq!(family.names(&order, 3), set.list.iter().map(|d| d.name.clone()).collect::<Vec<_>>());
}
