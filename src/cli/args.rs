//! Arguments of every command.

use clap::{Args, Parser, Subcommand, ValueEnum};
use std::path::PathBuf;

/// Reads field workbooks of 120/240 V services, says what the readings mean, and writes reports.
#[derive(Parser)]
#[command(
    version,
    about,
    after_help = "Readings on live parts are for qualified people. The local code and the authority having jurisdiction decide."
)]
pub struct Arguments {
    /// What to do.
    #[command(subcommand)]
    pub command: Command,
}

/// The commands.
#[derive(Subcommand)]
pub enum Command {
    /// Read and check workbooks; print cell problems and findings
    #[command(
        after_help = "Examples:\n  midwire check visit.xlsx\n  midwire check --json visit.xlsx > visit.json\n  midwire check visit.xlsx --marked visit-marked.xlsx\n  midwire check --rules our-limits.toml *.xlsx\n\nExit status: 0 nothing above NOTICE, 1 CAUTION or worse, 2 input that could not be used."
    )]
    Check(Check),
    /// Check workbooks, then write a PDF and an XLSX of each
    #[command(
        after_help = "Examples:\n  midwire report visit.xlsx\n  midwire report visit.xlsx -o out --html --page a4\n\nExit status: 0 all written, 2 something was not."
    )]
    Report(Report),
    /// Report on every workbook below a folder, in parallel; goes on where it was stopped
    #[command(
        after_help = "Examples:\n  midwire batch visits -o reports\n  midwire batch visits -o reports --only '2026-11-*' --jobs 4\n\nExit status: 0 all written, 2 something was not."
    )]
    Batch(Batch),
    /// Write an empty field workbook to fill in
    #[command(after_help = "Examples:\n  midwire blank\n  midwire blank --system 208Y/120 -o shop.xlsx\n\nExit status: 0 written, 2 not.")]
    Blank(Blank),
    /// Write a first mapping of a layout of your own: what was recognised, what was not
    #[command(
        after_help = "Examples:\n  midwire map our-sheet.xlsx\n  midwire map our-sheet.xlsx -o our-layout.toml\n  midwire check our-sheet.xlsx --map our-layout.toml\n\nExit status: 0 written, 2 not."
    )]
    Map(Map),
    /// Print the rule book in force: each rule, its limits, their basis
    #[command(after_help = "Examples:\n  midwire rules\n  midwire rules leg-sum voltage-drop\n  midwire rules --rules our-limits.toml")]
    Rules(Rules),
    /// List the built-in report templates, or write them out for editing
    #[command(after_help = "Examples:\n  midwire templates\n  midwire templates -o our-templates")]
    Templates(Templates),
}

/// `midwire check`.
#[derive(Args)]
pub struct Check {
    /// Workbooks (xlsx, xls, xlsb, ods), or folders of csv files, one a sheet
    #[arg(required = true)]
    pub workbooks: Vec<PathBuf>,
    /// Print one JSON document (an array for several workbooks)
    #[arg(long)]
    pub json: bool,
    /// List what passed, too
    #[arg(long)]
    pub all: bool,
    /// A rule book of yours (TOML) to lay over the built-in one
    #[arg(long, value_name = "FILE")]
    pub rules: Option<PathBuf>,
    /// A mapping of your own layout (TOML); `midwire map` writes a first one
    #[arg(long, value_name = "FILE")]
    pub map: Option<PathBuf>,
    /// Write a copy of the workbook (xlsx) with the problem cells coloured and commented; of one workbook only
    #[arg(long, value_name = "FILE")]
    pub marked: Option<PathBuf>,
    /// Replace the marked copy if it exists
    #[arg(long, requires = "marked")]
    pub force: bool,
}

/// `midwire report`.
#[derive(Args)]
pub struct Report {
    /// Workbooks (xlsx, xls, xlsb, ods), or folders of csv files, one a sheet
    #[arg(required = true)]
    pub workbooks: Vec<PathBuf>,
    /// Folder to write to; made if it is missing [default: beside each workbook]
    #[arg(short, long, value_name = "DIR")]
    pub output: Option<PathBuf>,
    /// Replace reports that exist
    #[arg(long)]
    pub force: bool,
    /// Looks of the report.
    #[command(flatten)]
    pub look: Look,
}

/// `midwire batch`.
#[derive(Args)]
pub struct Batch {
    /// Folder with workbooks in it, at any depth
    pub folder: PathBuf,
    /// Folder for the reports and the register; made if it is missing
    #[arg(short, long, value_name = "DIR")]
    pub output: PathBuf,
    /// Workbooks worked on at a time [default: one a processor]
    #[arg(short, long, value_name = "N")]
    pub jobs: Option<usize>,
    /// Only workbooks whose name or path below FOLDER fits a pattern, such as "2026-*.xlsx"
    #[arg(long, value_name = "PATTERN")]
    pub only: Option<String>,
    /// Only workbooks changed on or after a day (YYYY-MM-DD)
    #[arg(long, value_name = "DATE")]
    pub since: Option<String>,
    /// Do all again, and replace files of the same names
    #[arg(long)]
    pub force: bool,
    /// No progress
    #[arg(short, long)]
    pub quiet: bool,
    /// Looks of the reports.
    #[command(flatten)]
    pub look: Look,
}

/// What a report looks like and by which rules it judges.
#[derive(Args)]
pub struct Look {
    /// Write an HTML page, too
    #[arg(long)]
    pub html: bool,
    /// Paper
    #[arg(long, value_enum, default_value_t = Page::Letter)]
    pub page: Page,
    /// Date of issue (YYYY-MM-DD) [default: the latest revision's, else the visit's]
    #[arg(long, value_name = "DATE")]
    pub date: Option<String>,
    /// A report template: client, record, letter, or a file of yours
    #[arg(long, value_name = "NAME|FILE")]
    pub template: Option<String>,
    /// A rule book of yours (TOML) to lay over the built-in one
    #[arg(long, value_name = "FILE")]
    pub rules: Option<PathBuf>,
    /// A mapping of your own layout (TOML); `midwire map` writes a first one
    #[arg(long, value_name = "FILE")]
    pub map: Option<PathBuf>,
}

/// Paper sizes.
#[derive(Clone, Copy, Debug, ValueEnum)]
pub enum Page {
    /// 8.5 × 11 in
    Letter,
    /// 210 × 297 mm
    A4,
}

/// `midwire blank`.
#[derive(Args)]
pub struct Blank {
    /// The system as ANSI C84.1 writes it: 120/240, 120/208, 208Y/120, 240/120 …
    #[arg(long, default_value = "120/240")]
    pub system: String,
    /// File to write
    #[arg(short, long, value_name = "FILE", default_value = "field-workbook.xlsx")]
    pub output: PathBuf,
    /// Rows to fill in on each sheet
    #[arg(long, default_value_t = 100, value_parser = clap::value_parser!(u32).range(1..=10_000))]
    pub rows: u32,
    /// Replace the file if it exists
    #[arg(long)]
    pub force: bool,
}

/// `midwire map`.
#[derive(Args)]
pub struct Map {
    /// A workbook (xlsx, xls, xlsb, ods), or a folder of csv files, one a sheet
    pub workbook: PathBuf,
    /// File to write [default: print it]
    #[arg(short, long, value_name = "FILE")]
    pub output: Option<PathBuf>,
    /// Replace the file if it exists
    #[arg(long)]
    pub force: bool,
}

/// `midwire rules`.
#[derive(Args)]
pub struct Rules {
    /// Only these rules [default: all]
    pub names: Vec<String>,
    /// A rule book of yours (TOML) to lay over the built-in one
    #[arg(long, value_name = "FILE")]
    pub rules: Option<PathBuf>,
}

/// `midwire templates`.
#[derive(Args)]
pub struct Templates {
    /// Folder to write them to [default: list them]
    #[arg(short, long, value_name = "DIR")]
    pub output: Option<PathBuf>,
    /// Replace files that exist
    #[arg(long)]
    pub force: bool,
}
