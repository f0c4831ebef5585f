//! Writing the sheets.

use super::Options;
use super::columns::{Column, Entry, Table};
use crate::visit::{Leg, Quantity, System};
use crate::wording::Sentence;
use rust_xlsxwriter::utility::row_col_to_cell;
use rust_xlsxwriter::{
    Color, DataValidation, DataValidationErrorStyle, DataValidationRule, ExcelDateTime, Format, FormatAlign, FormatBorder, Formula,
    ProtectionOptions, Worksheet, XlsxError,
};

/// Text and rules of the sheets.
const INK: Color = Color::RGB(0x1d_232b);
/// Behind headings.
const HEAD: Color = Color::RGB(0xe3_ecea);
/// Thin rules.
const RULE: Color = Color::RGB(0xc4_cbd2);
/// Cells that reckon.
const LIVE: Color = Color::RGB(0xf3_f5f6);
/// Names of the how-to's paragraphs.
const ACCENT: Color = Color::RGB(0x1f_4d45);
/// Width of the how-to's text in characters.
const SAID_WIDTH: f64 = 84.0;
/// Height of a row to write in by hand, in points.
const ROW: f64 = 19.0;
/// Choices listed in an input message.
const LONGEST_LIST: usize = 12;

fn heading() -> Format {
    let format =
        Format::new().set_bold().set_font_color(INK).set_background_color(HEAD).set_text_wrap().set_align(FormatAlign::VerticalCenter);
    format.set_border_bottom(FormatBorder::Thin).set_border_bottom_color(RULE)
}

fn input() -> Format {
    Format::new().set_unlocked().set_align(FormatAlign::Top).set_border_bottom(FormatBorder::Hair).set_border_bottom_color(RULE)
}

fn protect(sheet: &mut Worksheet) {
    let allowed = ProtectionOptions {
        format_columns: true,
        format_rows: true,
        format_cells: true,
        sort: true,
        insert_rows: true,
        ..ProtectionOptions::default()
    };
    sheet.protect_with_options(&allowed);
}

/// The sheet that says how to fill in the others: a line of what it is, then a paragraph for each thing to know.
pub fn how_to(sheet: &mut Worksheet, options: &Options) -> Result<(), XlsxError> {
    let language = options.language;
    sheet.set_name(language.text("blank.how-to"))?;
    sheet.set_column_width(0, 16)?;
    sheet.set_column_width(1, SAID_WIDTH)?;
    sheet.set_screen_gridlines(false);
    let title = Format::new().set_bold().set_font_size(18).set_font_color(ACCENT);
    sheet.set_row_height(0, 30)?.write_with_format(0, 0, language.text("blank.title"), &title)?;
    let lead = Format::new().set_font_color(INK).set_font_size(12);
    let says = Sentence::new("blank.lead").with("system", options.system.name.as_str());
    sheet.set_row_height(1, 24)?.write_with_format(1, 0, language.say(&says), &lead)?;
    let keys = ["visit", "instruments", "circuits", "readings", "words", "live", "others", "send", "caution"];
    for (row, key) in (3..).zip(keys) {
        let last = key == "caution";
        let paragraph = Format::new().set_font_color(INK).set_text_wrap().set_align(FormatAlign::Top);
        let paragraph = paragraph.set_border_top(if last { FormatBorder::Medium } else { FormatBorder::Hair }).set_border_top_color(RULE);
        let name = paragraph.clone().set_bold().set_font_color(ACCENT);
        let text = language.text(&format!("blank.say-{key}"));
        sheet.set_row_height(row, height(&text))?;
        sheet.write_with_format(row, 0, language.text(&format!("blank.head-{key}")), &name)?;
        let body = if last { paragraph.set_bold() } else { paragraph };
        sheet.write_with_format(row, 1, text, &body)?;
    }
    paper(sheet, options);
    sheet.set_print_fit_to_pages(1, 1);
    protect(sheet);
    Ok(())
}

/// Points for a paragraph and the room below it. A character of the body takes about the width a column counts in, so that a line
/// more is allowed than would be needed.
fn height(text: &str) -> f64 {
    let lines = text.chars().count() as f64 / (SAID_WIDTH * 0.95);
    lines.ceil() * 15.0 + 12.0
}

/// Letter where the nominal voltages are those of North America, else A4.
fn paper(sheet: &mut Worksheet, options: &Options) {
    const LETTER: u8 = 1;
    const A4: u8 = 9;
    let european = options.system.nominal(Quantity::line_neutral(Leg::L1)).is_some_and(|v| (220.0..250.0).contains(&v.0));
    sheet.set_paper_size(if european { A4 } else { LETTER });
    sheet.set_margins(0.5, 0.5, 0.6, 0.7, 0.3, 0.3);
}

/// The Visit sheet: item and entry.
pub fn visit(sheet: &mut Worksheet, options: &Options) -> Result<(), XlsxError> {
    const ITEMS: [&str; 16] = [
        "Job number",
        "Client",
        "Site address",
        "Visit date",
        "Purpose",
        "Prepared by",
        "Licence",
        "Company",
        "System",
        "Nominal L-N",
        "Nominal L-L",
        "Service rating",
        "Supplied by",
        "Code in force",
        "Weather",
        "Remarks",
    ];
    sheet.set_name("Visit")?;
    sheet.set_column_width(0, 20)?;
    sheet.set_column_width(1, 60)?;
    sheet.set_row_height(0, 24)?;
    sheet.write_with_format(0, 0, "Item", &heading())?;
    sheet.write_with_format(0, 1, "Entry", &heading())?;
    for (row, item) in (1..).zip(ITEMS) {
        let name = Format::new().set_bold().set_font_color(INK).set_align(FormatAlign::VerticalCenter);
        sheet.set_row_height(row, ROW)?.write_with_format(row, 0, item, &name)?;
        let format = if item == "Visit date" { input().set_num_format("yyyy-mm-dd") } else { input() }.set_align(FormatAlign::Left);
        match item {
            "System" => sheet.write_with_format(row, 1, options.system.name.as_str(), &format)?,
            _ => sheet.write_blank(row, 1, &format)?,
        };
        let rule = match item {
            "Visit date" => Some(date(options)?),
            "Purpose" => Some(choice(&["inspection", "service call"], options)?),
            "System" => Some(choice(&System::NAMED.map(|s| s.0), options)?),
            "Nominal L-N" | "Nominal L-L" => Some(number(1.0, 1000.0, options)?),
            _ => None,
        };
        if let Some(rule) = hinted(rule, item, visit_hint(item), options)? {
            sheet.add_data_validation(row, 1, row, 1, &rule)?;
        }
    }
    finish(sheet, false, options)
}

/// A sheet with one table: headings, empty rows, what may be entered.
pub fn table(sheet: &mut Worksheet, table: &Table, options: &Options) -> Result<(), XlsxError> {
    sheet.set_name(table.name)?;
    sheet.set_row_height(0, 32)?;
    // A row without readings reckons nothing; without this its stored results would be 0.
    sheet.set_formula_result_default("");
    for (col, column) in (0u16..).zip(&table.columns) {
        sheet.set_column_width(col, column.width)?;
        sheet.write_with_format(0, col, column.heading.as_str(), &heading())?;
        fill(sheet, col, column, table, options)?;
        if let Some(rule) = hinted(validation(column, options)?, &column.heading, column.hint, options)? {
            sheet.add_data_validation(1, col, options.rows, col, &rule)?;
        }
    }
    finish(sheet, table.columns.len() > 7, options)?;
    // What reckons is for the screen; on paper its columns would be room taken from those that are written in.
    let written = (0u16..).zip(&table.columns).filter(|(_, c)| !matches!(c.entry, Entry::Live(_))).map(|(col, _)| col).last();
    sheet.set_print_area(0, 0, options.rows, written.unwrap_or(0))?;
    Ok(())
}

fn fill(sheet: &mut Worksheet, col: u16, column: &Column, table: &Table, options: &Options) -> Result<(), XlsxError> {
    let format = match column.entry {
        Entry::Date => input().set_num_format("yyyy-mm-dd"),
        Entry::Live(_) => Format::new().set_background_color(LIVE).set_font_color(INK),
        _ => input(),
    };
    for row in 1..=options.rows {
        sheet.set_row_height(row, ROW)?;
        match &column.entry {
            Entry::Live(pattern) => sheet.write_formula_with_format(row, col, formula(pattern, table, row).as_str(), &format)?,
            _ => sheet.write_blank(row, col, &format)?,
        };
    }
    Ok(())
}

/// The pattern with each heading in brackets replaced by its cell of the row.
fn formula(pattern: &str, table: &Table, row: u32) -> String {
    let mut text = format!("={pattern}");
    for (col, column) in (0u16..).zip(&table.columns) {
        text = text.replace(&format!("[{}]", column.heading), &row_col_to_cell(row, col));
    }
    text
}

fn finish(sheet: &mut Worksheet, landscape: bool, options: &Options) -> Result<(), XlsxError> {
    sheet.set_freeze_panes(1, u16::from(landscape))?;
    sheet.set_repeat_rows(0, 0)?;
    paper(sheet, options);
    sheet.set_print_fit_to_pages(1, 0);
    if landscape {
        sheet.set_landscape();
    }
    sheet.set_footer("&L&A&R&P / &N");
    protect(sheet);
    Ok(())
}

/// The rule with a message that is shown where the cell is chosen; a rule that allows anything where there is only the message.
fn hinted(rule: Option<DataValidation>, heading: &str, hint: Option<&str>, options: &Options) -> Result<Option<DataValidation>, XlsxError> {
    let Some(key) = hint else { return Ok(rule) };
    let rule = rule.unwrap_or_else(|| DataValidation::new().allow_any_value());
    let rule = rule.set_input_title(heading)?.set_input_message(options.language.text(&format!("blank.hint-{key}")))?;
    Ok(Some(rule))
}

fn visit_hint(item: &str) -> Option<&'static str> {
    match item {
        "Visit date" => Some("visit-date"),
        "System" => Some("system"),
        "Nominal L-N" | "Nominal L-L" => Some("nominal"),
        "Service rating" => Some("service-rating"),
        "Code in force" => Some("code"),
        _ => None,
    }
}

fn validation(column: &Column, options: &Options) -> Result<Option<DataValidation>, XlsxError> {
    Ok(match &column.entry {
        Entry::Text | Entry::Live(_) => None,
        Entry::Choice(words) => Some(choice(words, options)?),
        Entry::Number(low, high) => Some(number(*low, *high, options)?),
        Entry::Date => Some(date(options)?),
        Entry::Location => {
            let list = Formula::new(format!("=Circuits!$A$2:$A${}", options.rows + 1));
            let rule = DataValidation::new().allow_list_formula(list).set_error_style(DataValidationErrorStyle::Information);
            Some(rule.set_error_message(options.language.text("blank.ask-location"))?)
        }
    })
}

fn choice(words: &[&str], options: &Options) -> Result<DataValidation, XlsxError> {
    let rule = DataValidation::new().allow_list_strings(words)?.set_error_style(DataValidationErrorStyle::Warning);
    let shown = &words[..words.len().min(LONGEST_LIST)];
    rule.set_error_message(format!("{} {}", options.language.text("blank.ask-choice"), shown.join(", ")))
}

/// Words such as OL and n/a must stay possible, so a number out of the limits gets a question.
fn number(low: f64, high: f64, options: &Options) -> Result<DataValidation, XlsxError> {
    let rule = DataValidation::new()
        .allow_decimal_number(DataValidationRule::Between(low, high))
        .set_error_style(DataValidationErrorStyle::Warning);
    rule.set_error_message(format!(
        "{} {low}–{high}. {}",
        options.language.text("blank.ask-number"),
        options.language.text("blank.ask-words")
    ))
}

fn date(options: &Options) -> Result<DataValidation, XlsxError> {
    let rule = DataValidation::new().allow_date(DataValidationRule::GreaterThan(ExcelDateTime::from_ymd(1990, 1, 1)?));
    rule.set_error_style(DataValidationErrorStyle::Warning).set_error_message(options.language.text("blank.ask-date"))
}
