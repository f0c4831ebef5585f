//! A document built by hand, with every block, column kind and cell, for the renderers' tests.

use midwire::diag::CellRef;
use midwire::quantity::Unit;
use midwire::report::document::*;
use midwire::report::drawing::{Anchor, Colour, Drawing, Shape};
use midwire::results::{Signal, Verdict};
use std::sync::Arc;

pub fn text(s: &str) -> Vec<Inline> {
    vec![Inline::Text(s.to_owned())]
}

pub fn column(key: &str, heading: &str, unit: Option<Unit>, kind: ColumnKind) -> Column {
    Column { key: key.to_owned(), heading: heading.to_owned(), unit, kind }
}

pub fn row(cells: Vec<Cell>) -> Row {
    Row { cells, group: false }
}

pub fn group(heading: &str, columns: usize) -> Row {
    let mut cells = vec![Cell::Empty; columns];
    cells[0] = Cell::Text(heading.to_owned());
    Row { cells, group: true }
}

pub fn words(s: &str) -> Cell {
    Cell::Text(s.to_owned())
}

pub fn table(name: &str, caption: &str, columns: Vec<Column>, rows: Vec<Row>) -> Table {
    Table { name: name.to_owned(), caption: caption.to_owned(), columns, rows, when_empty: "Nothing to list.".to_owned() }
}

pub fn sheet(name: &str, tables: Vec<Table>) -> Sheet {
    Sheet { name: name.to_owned(), facts: Vec::new(), tables: tables.into_iter().map(Arc::new).collect(), chart: None }
}

/// A document of that sheet alone.
pub fn document_of(sheets: Vec<Sheet>) -> Document {
    Document { meta: meta(), blocks: Vec::new(), sheets }
}

pub fn meta() -> Meta {
    Meta {
        title: "Report on the 120/240 V service, 18 Wharf Lane".to_owned(),
        author: "Ines Marlow".to_owned(),
        subject: "18 Wharf Lane, Alder Ferry, 2026-11-24".to_owned(),
        language: "en".to_owned(),
        date: Some("2026-11-24".to_owned()),
        input_sha256: "9f2c1b7e0a4d5c86e1f3b2a4958c7d6e0f1a2b3c4d5e6f708192a3b4c5d6e7f8".to_owned(),
        producer: "midwire 0.1.0".to_owned(),
        header_left: "Kestrel & Rowe Electrical".to_owned(),
        header_right: "KR-2611 · Orla Penhallow".to_owned(),
        footer_left: "9f2c1b7e0a4d · midwire 0.1.0".to_owned(),
        page_words: "Page {page} of {pages}".to_owned(),
        page: PageSize::Letter,
        accent: [0x1f, 0x4d, 0x45],
        logo: Some(Image { bytes: png(), alt: "Kestrel & Rowe Electrical".to_owned() }),
        decimal_mark: '.',
    }
}

/// A PNG of one grey pixel.
pub fn png() -> Arc<[u8]> {
    const PIXEL: &[u8] = b"\x89PNG\r\n\x1a\n\0\0\0\rIHDR\0\0\0\x01\0\0\0\x01\x08\0\0\0\0:~\x9bU\0\0\0\nIDATx\xdacX\x01\0\0\xaa\0\xa9\xba\x91\xc1n\0\0\0\0IEND\xaeB`\x82";
    Arc::from(PIXEL)
}

pub fn findings() -> Table {
    let columns = vec![
        column("signal", "Signal word", None, ColumnKind::Signal),
        column("verdict", "Verdict", None, ColumnKind::Verdict),
        column("location", "Location", None, ColumnKind::Name),
        column("says", "Finding", None, ColumnKind::Text),
        column("advice", "What to do", None, ColumnKind::Text),
        column("cell", "Cell", None, ColumnKind::Name),
    ];
    let finding = |signal, verdict, location: &str, says: &str, advice: Vec<Inline>, cell: &str| {
        row(vec![Cell::Signal(signal), Cell::Verdict(verdict), words(location), words(says), Cell::Rich(advice), words(cell)])
    };
    let rows = vec![
        finding(
            Signal::Danger,
            Verdict::Fail,
            "5/7",
            "The shared neutral of run 5/7 is open or nearly so: L1-N rose to 151.8 V while L2-N fell to 87.4 V with the 1500 W heater on.",
            vec![
                Inline::Strong(text("Switch both breakers off and lock them.")),
                Inline::Text(" Repair by a licensed electrician before any load is connected.".to_owned()),
            ],
            "Readings!C9",
        ),
        finding(
            Signal::Warning,
            Verdict::Fail,
            "5/7a",
            "L1-N at 151.8 V is above 126 V.",
            text("Unplug electronic equipment from this circuit until the neutral is repaired."),
            "Readings!C10",
        ),
        finding(
            Signal::Caution,
            Verdict::Undecided,
            "panel",
            "The leg difference of 1.9 V is within the uncertainty of the limit of 2.0 V.",
            text("Read again with an instrument of ±0.5 % or better."),
            "Readings!C5",
        ),
        finding(Signal::Notice, Verdict::Pass, "dryer", "Nothing above its limit.", text("Nothing to do."), "Readings!C6"),
    ];
    table("findings", "Findings", columns, rows)
}

/// L1-N, L2-N, L1-L2 with uncertainties, the leg sum and its deviation as formulas.
pub fn readings() -> Table {
    let volts = |key: &str, heading: &str| column(key, heading, Some(Unit::Volt), ColumnKind::Number);
    let columns = vec![
        column("location", "Location", None, ColumnKind::Name),
        column("state", "State", None, ColumnKind::Text),
        volts("l1_n", "L1-N"),
        volts("l2_n", "L2-N"),
        volts("l1_l2", "L1-L2"),
        volts("leg_sum", "Sum of legs"),
        volts("deviation", "Sum less L1-L2"),
        column("verdict", "Verdict", None, ColumnKind::Verdict),
    ];
    let source: Arc<str> = Arc::from("Readings");
    let read = |value: f64, at: (u32, u32), verdict| {
        Cell::Number(Number {
            uncertainty: Some(0.9),
            verdict: Some(verdict),
            cell: Some(CellRef::new(&source, at.0, at.1)),
            ..Number::new(value, 1)
        })
    };
    let named = |key: &str| Box::new(Formula::Column(key.to_owned()));
    let computed = |value: f64, formula: Formula| Cell::Number(Number { formula: Some(formula), ..Number::new(value, 1) });
    let line = |at: u32, location: &str, state: &str, v: [f64; 3], verdict| {
        let sum = Formula::Add(named("l1_n"), named("l2_n"));
        row(vec![
            words(location),
            words(state),
            read(v[0], (at, 2), verdict),
            read(v[1], (at, 3), verdict),
            read(v[2], (at, 4), Verdict::Pass),
            computed(v[0] + v[1], sum.clone()),
            computed(v[0] + v[1] - v[2], Formula::Subtract(Box::new(sum), named("l1_l2"))),
            Cell::Verdict(verdict),
        ])
    };
    let mut half = line(9, "5/7b", "as found", [119.2, 0.0, 0.0], Verdict::Undecided);
    half.cells[3] = Cell::Empty;
    half.cells[4] = Cell::Empty;
    half.cells[5] = Cell::Empty;
    half.cells[6] = Cell::Empty;
    let rows = vec![
        group("At the service", 8),
        line(4, "panel", "as found", [120.4, 118.5, 238.9], Verdict::Pass),
        line(5, "panel", "1500 W heater on", [121.2, 117.6, 238.8], Verdict::Undecided),
        group("At the outlets", 8),
        line(8, "5/7a", "1500 W heater on", [151.8, 87.4, 239.3], Verdict::Fail),
        half,
    ];
    table("readings", "Readings", columns, rows)
}

pub fn balance() -> Table {
    let load = |key: &str, heading: &str| column(key, heading, Some(Unit::VoltAmpere), ColumnKind::Number);
    let columns = vec![column("circuit", "Circuit", None, ColumnKind::Name), load("l1", "L1"), load("l2", "L2")];
    let line = |name: &str, l1: f64, l2: f64| row(vec![words(name), Cell::Number(Number::new(l1, 0)), Cell::Number(Number::new(l2, 0))]);
    let rows = vec![
        line("1 range", 4000.0, 4000.0),
        line("5/7 kitchen", 1500.0, 350.0),
        line("9 laundry", 0.0, 1200.0),
        line("dryer", 2700.0, 2700.0),
    ];
    table("balance", "Load of the legs", columns, rows)
}

fn exposure() -> Table {
    let columns = vec![
        column("run", "Run", None, ColumnKind::Name),
        column("leg", "Leg", None, ColumnKind::Name),
        column("volts", "Would see", Some(Unit::Volt), ColumnKind::Number),
        column("load", "Load", Some(Unit::Watt), ColumnKind::Number),
    ];
    table("exposure", "Volts under an open neutral", columns, Vec::new())
}

fn sheets() -> Vec<Sheet> {
    let facts = [
        ("Job number", "KR-2611"),
        ("Client", "Orla Penhallow"),
        ("Site address", "18 Wharf Lane, Alder Ferry"),
        ("Visit date", "2026-11-24"),
        ("Supplied by", "Ferry Valley Light & Water"),
        ("Input", "9f2c1b7e0a4d5c86e1f3b2a4958c7d6e0f1a2b3c4d5e6f708192a3b4c5d6e7f8"),
        (
            "Remarks",
            "Lights in the kitchen brighten when the heater is switched on. The client reports two failed power supplies since October and a smell of hot plastic near the box above the counter. The cover was opened by Tobias Reck, with the circuit dead.",
        ),
    ];
    let facts = facts.map(|(label, value)| (label.to_owned(), value.to_owned())).to_vec();
    let chart = Chart {
        table: "balance".to_owned(),
        category: "circuit".to_owned(),
        values: vec!["l1".to_owned(), "l2".to_owned()],
        title: "VA on each leg, by circuit".to_owned(),
        alt: "Column chart: L1 carries 8200 VA, L2 8250 VA.".to_owned(),
    };
    vec![
        Sheet { facts, ..sheet("Summary", vec![balance(), exposure()]) },
        sheet("Findings", vec![findings()]),
        sheet("Readings", vec![readings()]),
        Sheet { chart: Some(chart), ..sheet("Balance", vec![balance(), exposure()]) },
    ]
}

pub fn drawing() -> Drawing {
    let line = |y: f64| Shape::Line { points: vec![(90.0, y), (470.0, y)], width: 1.0, colour: Colour::Faint, dash: None, round: true };
    let label = |y: f64, text: &str| Shape::Text {
        at: (84.0, y + 3.0),
        text: text.to_owned(),
        size: 9.0,
        bold: false,
        anchor: Anchor::End,
        colour: Colour::Quiet,
    };
    let mark = |x: f64, y: f64, colour| Shape::Circle { centre: (x, y), radius: 4.0, fill: Some(colour), stroke: None };
    let band = Shape::Rect { x: 272.0, y: 8.0, width: 16.0, height: 74.0, radius: 3.0, fill: Colour::Band };
    let shapes = vec![
        band,
        line(20.0),
        label(20.0, "panel"),
        mark(281.0, 20.0, Colour::Accent),
        line(45.0),
        label(45.0, "5/7"),
        mark(279.0, 45.0, Colour::Accent),
        line(70.0),
        label(70.0, "5/7a"),
        mark(331.0, 70.0, Colour::Signal(Signal::Danger)),
    ];
    Drawing {
        width: 504.0,
        height: 90.0,
        alt: "At the panel and at 5/7 the neutral sits midway between the legs; at 5/7a it has moved towards L2.".to_owned(),
        shapes,
    }
}

fn blocks() -> Vec<Block> {
    let heading = |level, s: &str, anchor: &str| Block::Heading { level, text: text(s), anchor: anchor.to_owned() };
    let facts = [
        ("Job number", "KR-2611"),
        ("Client", "Orla Penhallow"),
        ("Site", "18 Wharf Lane, Alder Ferry"),
        ("Visit", "2026-11-24"),
        ("Prepared by", "Ines Marlow, licence 40-1187"),
        ("Supplied by", "Ferry Valley Light & Water"),
    ];
    let photo = |caption: &str| CaptionedImage {
        image: Image { bytes: png(), alt: "An open box with a scorched splice".to_owned() },
        caption: caption.to_owned(),
    };
    vec![
        heading(1, "Report on the 120/240 V service, 18 Wharf Lane", "title"),
        Block::Facts(facts.map(|(l, v)| (l.to_owned(), text(v))).to_vec()),
        Block::Callout {
            signal: Some(Signal::Danger),
            title: text("The shared neutral of run 5/7 is open or nearly so"),
            blocks: vec![
                Block::Paragraph(text(
                    "With the 1500 W heater on, one leg rose to 151.8 V while the other fell to 87.4 V. Equipment on this circuit can burn out or catch fire.",
                )),
                Block::List {
                    start: None,
                    items: vec![
                        vec![Block::Paragraph(text("Switch both breakers of 5/7 off and leave them off."))],
                        vec![Block::Paragraph(text(
                            "Have the splice in the box above the counter opened and remade by a licensed electrician.",
                        ))],
                    ],
                },
            ],
        },
        heading(2, "What was found", "found"),
        Block::Paragraph(vec![
            Inline::Text("Of 24 readings taken, ".to_owned()),
            Inline::Strong(text("two failed")),
            Inline::Text(" and one is ".to_owned()),
            Inline::Emphasis(text("undecided")),
            Inline::Text(": the limit lies within the instrument’s uncertainty. Signal words are ".to_owned()),
            Inline::Signal(Signal::Danger),
            Inline::Text(", ".to_owned()),
            Inline::Signal(Signal::Warning),
            Inline::Text(", ".to_owned()),
            Inline::Signal(Signal::Caution),
            Inline::Text(" and ".to_owned()),
            Inline::Signal(Signal::Notice),
            Inline::Text(". The ".to_owned()),
            Inline::Link { href: "#basis".to_owned(), text: text("basis") },
            Inline::Text(" says by which limits; the office answers at ".to_owned()),
            Inline::Link { href: "mailto:office@kestrel-rowe.example".to_owned(), text: text("office@kestrel-rowe.example") },
            Inline::Text(".".to_owned()),
        ]),
        Block::Table(Arc::new(findings())),
        heading(3, "Where the neutral sits", "neutral"),
        Block::Figure { caption: text("Position of the neutral between L1 and L2, heater on"), drawing: Arc::new(drawing()) },
        Block::Callout {
            signal: Some(Signal::Warning),
            title: text("Until the repair"),
            blocks: vec![Block::Paragraph(text("Unplug electronic equipment in the kitchen."))],
        },
        Block::Callout {
            signal: Some(Signal::Caution),
            title: text("Read again"),
            blocks: vec![Block::Paragraph(text("The leg difference at the panel is undecided."))],
        },
        Block::Callout {
            signal: Some(Signal::Notice),
            title: text("What was not shown"),
            blocks: vec![Block::Paragraph(text("A balanced load hides an open neutral."))],
        },
        Block::Callout {
            signal: None,
            title: text("No certificate"),
            blocks: vec![Block::Paragraph(text(
                "This report is no certificate of compliance; the adopted local code and the authority having jurisdiction decide.",
            ))],
        },
        heading(2, "Readings", "readings"),
        Block::Table(Arc::new(readings())),
        Block::Table(Arc::new(exposure())),
        Block::Photos(vec![
            photo("Box above the counter, cover off"),
            photo("The splice before the repair"),
            photo("The splice after the repair"),
        ]),
        Block::PageBreak,
        heading(2, "Basis", "basis"),
        Block::List {
            start: Some(3),
            items: vec![
                vec![Block::Paragraph(text("ANSI C84.1, Range A and B."))],
                vec![Block::Paragraph(text("JCGM 106, for the verdicts."))],
            ],
        },
        Block::SignOff(vec![
            ("Name".to_owned(), Some("Ines Marlow".to_owned())),
            ("Licence".to_owned(), Some("40-1187".to_owned())),
            ("Signature".to_owned(), None),
            ("Date".to_owned(), None),
        ]),
    ]
}

/// The whole specimen.
pub fn document() -> Document {
    Document { meta: meta(), blocks: blocks(), sheets: sheets() }
}
