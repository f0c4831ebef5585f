//! The tables of the field workbook: sheets, headings, and what may be entered under each.

use crate::visit::{Between, Leg, Quantity, System};

/// A sheet with one table.
pub struct Table {
    /// Sheet name.
    pub name: &'static str,
    /// Its columns.
    pub columns: Vec<Column>,
}

/// A column.
pub struct Column {
    /// Heading.
    pub heading: String,
    /// Width in characters.
    pub width: f64,
    /// What may be entered.
    pub entry: Entry,
    /// The message shown where one of its cells is chosen: what follows `blank.hint-`.
    pub hint: Option<&'static str>,
}

impl Column {
    fn hint(self, key: &'static str) -> Self {
        Self { hint: Some(key), ..self }
    }
}

/// What may be entered in a cell.
pub enum Entry {
    /// Anything.
    Text,
    /// One of a list; other entries get a question, not a refusal.
    Choice(Vec<&'static str>),
    /// A number within limits, or a word such as OL. The limits are what can be, not what should be.
    Number(f64, f64),
    /// A date.
    Date,
    /// The locations of the circuit list.
    Location,
    /// A formula over the same row; headings stand in brackets.
    Live(String),
}

fn column(heading: impl Into<String>, width: f64, entry: Entry) -> Column {
    Column { heading: heading.into(), width, entry, hint: None }
}

/// All tables for a system, in the order they are filled in.
#[must_use]
pub fn tables(system: &System) -> Vec<Table> {
    let stage = || Entry::Choice(vec!["as found", "as left"]);
    vec![
        Table {
            name: "Instruments",
            columns: vec![
                column("Instrument", 26.0, Entry::Text).hint("instrument"),
                column("Measures", 13.0, Entry::Choice(vec!["volts", "amps", "ohms", "temperature"])),
                column("Serial", 16.0, Entry::Text),
                column("Calibrated until", 16.0, Entry::Date).hint("calibrated-until"),
                column("Accuracy % of reading", 13.0, Entry::Number(0.0, 20.0)).hint("accuracy"),
                column("Accuracy counts", 13.0, Entry::Number(0.0, 100.0)).hint("counts"),
                column("Resolution", 12.0, Entry::Number(0.0, 10.0)).hint("resolution"),
            ],
        },
        Table { name: "Circuits", columns: circuits(system) },
        Table { name: "Readings", columns: readings(system) },
        Table {
            name: "Tests",
            columns: vec![
                column("Location", 18.0, Entry::Location),
                column("Test", 34.0, Entry::Choice(TESTS.to_vec())).hint("test"),
                column("Value", 11.0, Entry::Text).hint("value"),
                column("Unit", 9.0, Entry::Choice(vec!["MΩ", "Ω", "ms", "mA", "N·m", "lb·in", "°C", "°F"])),
                column("Stage", 11.0, stage()),
                column("Remarks", 40.0, Entry::Text),
            ],
        },
        Table {
            name: "Observations",
            columns: vec![
                column("Location", 18.0, Entry::Location),
                column("Observation", 50.0, Entry::Text),
                column("Signal word", 13.0, Entry::Choice(vec!["DANGER", "WARNING", "CAUTION", "NOTICE"])).hint("signal-word"),
                column("Advice", 40.0, Entry::Text),
                column("Photo", 22.0, Entry::Text).hint("file"),
            ],
        },
        Table {
            name: "Photos",
            columns: vec![
                column("File", 26.0, Entry::Text).hint("file"),
                column("Location", 18.0, Entry::Location),
                column("Caption", 50.0, Entry::Text),
            ],
        },
        Table {
            name: "Work",
            columns: vec![
                column("Date", 13.0, Entry::Date),
                column("Location", 18.0, Entry::Location),
                column("Work done", 54.0, Entry::Text),
                column("Parts", 30.0, Entry::Text),
            ],
        },
        Table {
            name: "Revisions",
            columns: vec![column("Issue", 10.0, Entry::Text), column("Date", 13.0, Entry::Date), column("Reason", 60.0, Entry::Text)],
        },
    ]
}

/// Names of tests that the Tests sheet knows.
const TESTS: [&str; 8] = [
    "insulation resistance 500 V",
    "ground-electrode resistance",
    "loop impedance",
    "GFCI trip time",
    "GFCI trip current",
    "torque",
    "conductor temperature rise",
    "element resistance",
];

/// Pairs of legs between which line-to-line voltages exist.
fn pairs(legs: &[Leg]) -> Vec<Between> {
    let has = |b: &Between| matches!(b, Between::LineLine(x, y) if legs.contains(x) && legs.contains(y));
    Between::LINE_LINE.into_iter().filter(has).collect()
}

fn circuits(system: &System) -> Vec<Column> {
    let legs = system.legs();
    let mut columns = vec![
        column("Circuit", 13.0, Entry::Text).hint("circuit"),
        column("Fed from", 14.0, Entry::Text).hint("fed-from"),
        column("Serves", 24.0, Entry::Text),
        column("Legs", 12.0, Entry::Choice(leg_choices(legs.len()))).hint("legs"),
        column("Breaker A", 10.0, Entry::Number(1.0, 6000.0)),
        column("Tie", 8.0, Entry::Choice(vec!["yes", "no"])).hint("tie"),
        column("Wire", 11.0, Entry::Text).hint("wire"),
        column("Neutral wire", 11.0, Entry::Text).hint("neutral-wire"),
        column("Length ft", 10.0, Entry::Number(0.0, 50_000.0)).hint("length"),
    ];
    columns.extend(legs.iter().map(|leg| column(format!("Load W {leg}"), 8.5, Entry::Number(0.0, 1e6))));
    columns.extend(pairs(legs).into_iter().map(|pair| column(format!("Load W {pair}"), 9.0, Entry::Number(0.0, 1e6))));
    columns.push(column("Load kind", 11.0, Entry::Choice(vec!["resistive", "filament", "electronic", "motor"])));
    columns.push(column("Remarks", 24.0, Entry::Text));
    columns
}

fn leg_choices(legs: usize) -> Vec<&'static str> {
    match legs {
        1 => vec!["L1"],
        2 => vec!["L1", "L2", "L1 L2", "L1-L2"],
        _ => vec!["L1", "L2", "L3", "L1 L2", "L2 L3", "L1 L3", "L1 L2 L3", "L1-L2", "L2-L3", "L1-L3", "L1-L2-L3"],
    }
}

fn readings(system: &System) -> Vec<Column> {
    let legs = system.legs();
    let volts = |heading: String| column(heading, 7.5, Entry::Number(0.0, 1000.0));
    let amperes = |heading: String| column(heading, 7.5, Entry::Number(0.0, 6000.0));
    let mut columns = vec![
        column("Location", 15.0, Entry::Location),
        column("State", 22.0, Entry::Text).hint("state"),
        column("Stage", 11.0, Entry::Choice(vec!["as found", "as left"])).hint("stage"),
        column("Time", 8.0, Entry::Text).hint("time"),
        column("Instrument", 15.0, Entry::Text).hint("read-with"),
    ];
    columns.extend(legs.iter().map(|leg| volts(format!("{leg}-N"))));
    columns.extend(pairs(legs).into_iter().map(|pair| volts(pair.to_string())));
    columns.push(volts("N-G".into()));
    columns.extend(legs.iter().map(|leg| volts(format!("{leg}-G"))));
    columns.extend(legs.iter().map(|leg| amperes(format!("I {leg}"))));
    columns.extend([amperes("I N".into()), amperes("I G".into()), column("Remarks", 24.0, Entry::Text)]);
    columns.extend(live(system));
    columns
}

/// Cells that reckon while one still stands at the panel: what is wrong there can be read again at once.
fn live(system: &System) -> Vec<Column> {
    let mut columns = Vec::new();
    if let Some(nominal) = system.nominal(Quantity::line_neutral(Leg::L1)) {
        columns.extend(system.legs().iter().filter_map(|leg| {
            let own = system.nominal(Quantity::line_neutral(*leg)).unwrap_or(nominal);
            let formula = format!("IF(ISNUMBER([{leg}-N]),ROUND(([{leg}-N]/{:.1}-1)*100,1),\"\")", own.0);
            (own.0 > 0.0).then(|| column(format!("{leg}-N off nominal %"), 11.0, Entry::Live(formula)))
        }));
    }
    if system.arrangement == crate::visit::Arrangement::SplitPhase {
        let formula = "IF(COUNT([L1-N],[L2-N],[L1-L2])=3,ROUND([L1-N]+[L2-N]-[L1-L2],1),\"\")";
        columns.push(column("Leg sum less L1-L2", 11.0, Entry::Live(formula.into())));
    }
    columns
}
