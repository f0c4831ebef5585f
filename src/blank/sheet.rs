//! Writing the sheets.

use super::Options;
use super::columns::{Column, Entry, Table};
use crate::visit::System;
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

/// The sheet that says how to fill in the others.
pub fn how_to(sheet: &mut Worksheet, options: &Options) -> Result<(), XlsxError> {
    let language = options.language;
    sheet.set_name(language.text("blank.how-to"))?;
    sheet.set_column_width(0, 100)?;
    sheet.write_with_format(0, 0, language.text("blank.title"), &Format::new().set_bold().set_font_size(16))?;
    let line = Format::new().set_text_wrap().set_align(FormatAlign::Top);
    let keys = ["visit", "circuits", "readings", "words", "live", "caution"];
    for (row, key) in (2..).step_by(2).zip(keys) {
        sheet.write_with_format(row, 0, language.text(&format!("blank.say-{key}")), &line)?;
    }
    sheet.set_print_fit_to_pages(1, 0);
    protect(sheet);
    Ok(())
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
    sheet.write_with_format(0, 0, "Item", &heading())?;
    sheet.write_with_format(0, 1, "Entry", &heading())?;
    for (row, item) in (1..).zip(ITEMS) {
        sheet.write_with_format(row, 0, item, &Format::new().set_bold())?;
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
        if let Some(rule) = rule {
            sheet.add_data_validation(row, 1, row, 1, &rule)?;
        }
    }
    finish(sheet, 2, false)
}

/// A sheet with one table: headings, empty rows, what may be entered.
pub fn table(sheet: &mut Worksheet, table: &Table, options: &Options) -> Result<(), XlsxError> {
    sheet.set_name(table.name)?;
    sheet.set_row_height(0, 32)?;
    for (col, column) in (0u16..).zip(&table.columns) {
        sheet.set_column_width(col, column.width)?;
        sheet.write_with_format(0, col, column.heading.as_str(), &heading())?;
        fill(sheet, col, column, table, options)?;
        if let Some(rule) = validation(column, options)? {
            sheet.add_data_validation(1, col, options.rows, col, &rule)?;
        }
    }
    finish(sheet, u16::try_from(table.columns.len()).unwrap_or(u16::MAX), table.columns.len() > 7)
}

fn fill(sheet: &mut Worksheet, col: u16, column: &Column, table: &Table, options: &Options) -> Result<(), XlsxError> {
    let format = match column.entry {
        Entry::Date => input().set_num_format("yyyy-mm-dd"),
        Entry::Live(_) => Format::new().set_background_color(LIVE).set_font_color(INK),
        _ => input(),
    };
    for row in 1..=options.rows {
        match &column.entry {
            Entry::Live(pattern) => {
                sheet.write_formula_with_format(row, col, Formula::new(formula(pattern, table, row)).set_result(""), &format)?
            }
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

fn finish(sheet: &mut Worksheet, columns: u16, landscape: bool) -> Result<(), XlsxError> {
    sheet.set_freeze_panes(1, u16::from(landscape))?;
    sheet.set_repeat_rows(0, 0)?;
    sheet.set_print_fit_to_pages(1, 0);
    if landscape {
        sheet.set_landscape();
    }
    sheet.set_footer("&L&A&RPage &P of &N");
    if columns > 0 {
        protect(sheet);
    }
    Ok(())
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
