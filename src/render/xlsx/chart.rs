//! A native column chart over a table.

use super::grid::Grid;
use super::style::color;
use crate::render::text::visible;
use crate::report::document;
use crate::report::drawing::Colour;
use rust_xlsxwriter::{Chart, ChartFont, ChartFormat, ChartLegendPosition, ChartLine, ChartSolidFill, ObjectMovement};

/// Size in pixels; the height is that of the rows kept for it, less one at each end.
const SIZE: (u32, u32) = (760, 360);

/// Where the chart's table stands.
pub(super) struct Place<'a> {
    /// Worksheet name.
    pub sheet: &'a str,
    /// The table's columns.
    pub grid: &'a Grid<'a>,
    /// Its header row.
    pub header: u32,
    /// Its first and last row.
    pub rows: (u32, u32),
    /// Whether a value is below zero; columns otherwise stand on it.
    pub below_zero: bool,
    /// Row whose first cell holds the chart's title.
    pub title: u32,
}

/// The chart; `None` where it has no values or its table lacks a column it names.
pub(super) fn column(wanted: &document::Chart, place: &Place, accent: [u8; 3]) -> Option<Chart> {
    let range = |key: &str| place.grid.find(key).map(|p| (place.sheet, place.rows.0, p.at, place.rows.1, p.at));
    let categories = range(&wanted.category)?;
    if wanted.values.is_empty() {
        return None;
    }
    let mut chart = Chart::new_column();
    for (n, key) in wanted.values.iter().enumerate() {
        let values = range(key)?;
        let mut format = ChartFormat::new();
        format.set_solid_fill(ChartSolidFill::new().set_color(color(fill(n, accent))));
        format.set_border(ChartLine::new().set_color(color(Colour::Quiet.srgb(accent))).set_width(0.75));
        let series = chart.add_series().set_categories(categories).set_values(values);
        series.set_name((place.sheet, place.header, values.2)).set_format(&mut format).set_gap(60).set_overlap(-5);
    }
    let ink = color(Colour::Ink.srgb(accent));
    chart
        .title()
        .set_name((place.sheet, place.title, 0))
        .set_font(ChartFont::new().set_size(12).set_bold().set_color(ink))
        .set_overlay(false);
    match wanted.values.as_slice() {
        [_] => chart.legend().set_hidden(),
        _ => chart.legend().set_position(ChartLegendPosition::Bottom),
    };
    let guide = ChartLine::new().set_color(color(Colour::Faint.srgb(accent))).set_width(0.5).clone();
    chart.y_axis().set_major_gridlines_line(&guide).set_num_format("0").set_name(unit(wanted, place));
    if !place.below_zero {
        chart.y_axis().set_min(0);
    }
    chart
        .set_width(SIZE.0)
        .set_height(SIZE.1)
        .set_alt_text(visible(&wanted.alt))
        .set_object_movement(ObjectMovement::MoveButDontSizeWithCells);
    Some(chart)
}

/// The unit of the values, for the axis.
fn unit(wanted: &document::Chart, place: &Place) -> &'static str {
    let column = wanted.values.first().and_then(|key| place.grid.find(key));
    column.and_then(|p| p.column.unit).map_or("", |u| u.symbol())
}

/// Fills that stay apart in grey: dark, light, between.
fn fill(n: usize, accent: [u8; 3]) -> [u8; 3] {
    [accent, Colour::Faint.srgb(accent), Colour::Quiet.srgb(accent)][n % 3]
}
