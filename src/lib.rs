//! From a filter requirement, a laminate and a board house's limits to a printed microwave filter.
//!
//! The rooms, in flow order:
//!
//! order -> prototype -> dimensions -> layout -> network -> refine -> artwork -> checks -> package
//!
//! | room | answers |
//! |---|---|
//! | [`base`] | problems, quantities with units, whole nanometres, root finding, small dense elimination |
//! | [`order`] | what is wanted; laminate, shop and launch classes |
//! | [`prototype`] | g-values and degree |
//! | [`mod@line`] | one strip, coupled strips, discontinuities as built |
//! | [`dimensions`] | the dimension set and its file |
//! | [`layout`] | parts, nodes, placing and joining |
//! | [`family`] | requirement -> prototype -> dimensions -> layout, one file each |
//! | [`network`] | layout + as-built -> S-parameters, figures, Touchstone |
//! | [`artwork`] | layout -> board |
//! | [`field`] | board -> S-parameters, numerically |
//! | [`refine`] | from response back to dimensions |
//! | [`checks`] | design rules and microwave sense |
//! | [`package`] | every output file |
//! | [`cli`] | arguments, printing, progress; one file per command |

pub mod artwork;
pub mod base;
pub mod checks;
pub mod cli;
pub mod dimensions;
pub mod family;
pub mod field;
pub mod layout;
pub mod line;
pub mod network;
pub mod order;
pub mod package;
pub mod prototype;
pub mod refine;

use artwork::Board;
use base::Problem;
use dimensions::Dimensions;
use layout::Layout;
use network::Figures;
use network::Response;
use order::Order;
use refine::Chosen;

/// Everything between an order and its package.
#[derive(Clone, Debug)]
pub struct Made {
    /// The order and its numbers.
    pub dimensions: Dimensions,
    /// Parts and nodes.
    pub layout: Layout,
    /// What is made.
    pub board: Board,
    /// The predicted response, planes at the board's edge.
    pub response: Response,
    /// Its figures, a verdict for each requirement.
    pub figures: Figures,
    /// Findings of every stage; an error among them withholds the files for the board house.
    pub findings: Vec<Problem>,
}

/// A dimension set from an order: prototype, closed form, refinement, grid.
///
/// # Errors
/// Why no set exists: an unreachable coupling, no degree that meets the requirements, a passband refinement cannot reach.
pub fn dimension(order: &Order) -> Result<Chosen, Vec<Problem>> {
    let family = family::of(order).map_err(|problem| vec![problem])?;
    refine::synthesize(family, order).map_err(|mut problems| {
        // Where refinement fails, the rules on the first guess often say why: strips wider than long, surface modes, transverse resonance.
        let guess = order.filter.degree.and_then(|degree| family.first_guess(order, degree).ok());
        let drawn = guess.and_then(|(guess, _)| draw(&guess).ok());
        problems.extend(drawn.into_iter().flat_map(|made| made.findings).filter(Problem::is_error));
        problems
    })
}

/// The whole way: order -> dimensions -> layout -> board -> response -> checks.
///
/// # Errors
/// Those of [`dimension`] and of the artwork (a board that does not fit).
///
/// # Example
/// ```
/// let text = include_str!("../templates/orders/edge-coupled.toml");
/// let source = stripwright::order::Source::from_text("edge-coupled.toml", text);
/// let (order, _) = stripwright::order::read(&source, &stripwright::family::keys()).map_err(|problems| format!("{problems:?}"))?;
/// let (made, _) = stripwright::make(&order).map_err(|problems| format!("{problems:?}"))?;
/// assert!(made.figures.all_met());
/// # Ok::<(), String>(())
/// ```
pub fn make(order: &Order) -> Result<(Made, Chosen), Vec<Problem>> {
    let chosen = dimension(order)?;
    Ok((draw(&chosen.refined.dimensions)?, chosen))
}

/// From a dimension set (synthesized or edited by hand) to what is made and how it responds.
///
/// # Errors
/// Dimensions that do not make a circuit; a board that does not fit.
pub fn draw(dimensions: &Dimensions) -> Result<Made, Vec<Problem>> {
    let order = &dimensions.order;
    let family = family::of(order).map_err(|problem| vec![problem])?;
    let layout = family.layout(dimensions)?;
    let (board, mut findings) = artwork::board(order, &layout)?;
    let layout = board.run_on(&layout);
    let (response, warnings) = network::predict(order, &layout)?;
    findings.extend(warnings);
    let figures = Figures::of(order, &response);
    findings.extend(checks::run(&checks::Subject { dimensions, layout: &layout, board: &board, response: &response, figures: &figures }));
    Ok(Made { dimensions: dimensions.clone(), layout, board, response, figures, findings })
}
