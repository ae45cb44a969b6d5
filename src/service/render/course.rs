//! What happens over time, and below it the vessel at some of its moments, on one sheet.

use super::{
    page::Page,
    panels::{self, Panels},
    vessel::{self, MOST_MOMENTS, VesselMoment},
};

/// Draws the panels and, below, the moments; more than [`MOST_MOMENTS`] are not drawn.
#[must_use]
pub fn course(chart: &Panels<'_>, moments: &[VesselMoment<'_>]) -> String {
    let shown = &moments[..moments.len().min(MOST_MOMENTS)];
    let above = panels::height(chart);
    let mut page = Page::new(vessel::WIDTH, above + vessel::height(shown), &chart.heading);
    let (top, bottom, width) = (page.top, page.bottom, page.width);
    panels::draw(&mut page.svg, chart, top, width);
    vessel::draw(&mut page.svg, shown, top + above, bottom);
    let says = format!("{} {}", panels::description(chart), vessel::description(shown));
    page.svg.finish(chart.heading.title, &says)
}
