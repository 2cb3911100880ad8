//! Published and exact values the program must reproduce: one file per source, every tolerance with its reason, the number of rows that ran pinned.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, missing_docs)]
// Printed digits stay as printed, also where they happen to be those of a constant; a table's columns are a tuple.
#![allow(clippy::approx_constant, clippy::excessive_precision, clippy::type_complexity)]

mod coupled_line_impedances;
mod coupled_microstrip_exact;
mod discontinuities;
mod exact_inverse;
mod full_wave_dispersion;
mod g_values;
mod hammerstad_jensen_1980;
mod junctions;
mod kirschning_jansen_1982;
mod kirschning_jansen_1984;
mod loss;
mod order_formulas;
mod rows;
mod stripline_exact;
mod thick_microstrip_exact;
mod thin_microstrip_exact;

/// Every table, with the number of rows (printed values held against ours) it must have run. Fewer means that a row was lost; more, that this list is due.
#[test]
fn every_published_row_ran() {
    let ran = [
        g_values::maximally_flat(),
        g_values::equal_ripple(),
        g_values::printed_tables_within_their_rounding(),
        order_formulas::rows(),
        coupled_line_impedances::rows(),
        thin_microstrip_exact::impedance_and_permittivity(),
        thin_microstrip_exact::widths(),
        hammerstad_jensen_1980::rows(),
        thick_microstrip_exact::rows(),
        kirschning_jansen_1982::rows(),
        full_wave_dispersion::single(),
        full_wave_dispersion::coupled(),
        stripline_exact::single(),
        stripline_exact::coupled(),
        stripline_exact::inverse(),
        coupled_microstrip_exact::rows(),
        kirschning_jansen_1984::rows(),
        exact_inverse::rows(),
        discontinuities::open_end(),
        discontinuities::gaps(),
        discontinuities::steps(),
        junctions::vias(),
        junctions::optimum_cuts(),
        junctions::sectors(),
        junctions::equal_gaps_by_the_unequal_law(),
        junctions::solved_gaps(),
        loss::rows(),
    ];
    let misses: Vec<&String> = ran.iter().filter_map(|table| table.as_ref().err()).collect();
    assert!(misses.is_empty(), "{}", misses.iter().map(|m| m.as_str()).collect::<Vec<_>>().join("\n\n"));
    assert_eq!(ran.iter().flatten().sum::<usize>(), PINNED_ROWS, "rows that ran; a table lost or gained some");
}

/// Printed values held against ours.
const PINNED_ROWS: usize = 1098;
