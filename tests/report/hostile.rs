//! Text of a workbook comes out as that text and never as structure, whatever it holds and wherever a template puts it.

use crate::made::Made;
use midwire::report::BUILT_IN_TEMPLATES;
use midwire::report::document::{Block, Cell, Document, Inline};
use midwire::report::visible;
use proptest::prelude::*;

/// Puts a value into every position that Markdown knows.
const EVERYWHERE: &str = r#"# {{ site.client }}

{{ site.client }}

*{{ site.client }}* **{{ site.client }}** a*{{ site.client }}*b `{{ site.client }}` {{ site.client | safe }} {{ site.client | escape_html }}

[{{ site.client }}](https://ferry.example/{{ site.client }}) <b title="{{ site.client }}">{{ site.client }}</b>

- {{ site.client }}
- {% set client %}{{ site.client }}{% endset %}{{ client }}

1. {{ site.client }}

> [!WARNING] {{ site.client }}
> {{ site.client }}

> {{ site.client }}

    {{ site.client }}

<div>
{{ site.client }}
</div>

![{{ site.client }}](table:readings)
![{{ site.client }}]({{ site.client }})

{{ site.client }}
===

[x]: {{ site.client }}
"#;

/// What breaks a careless writer of Markdown.
fn fragment() -> impl Strategy<Value = String> {
    let nasty = [
        "**",
        "*",
        "_",
        "`",
        "```\n",
        "~~~",
        "\\",
        "&amp;",
        "&#42;",
        "<script>alert(1)</script>",
        "<!--",
        "-->",
        "]",
        "[a](javascript:x)",
        "![](table:readings)",
        "![](facts:document)",
        "{{ site.job }}",
        "{% raw %}",
        "{#",
        "%}",
        "\n\n# H\n\n",
        "\n- x",
        "\n> [!DANGER] t",
        "+++",
        "---",
        "***",
        "===",
        "1. ",
        "- ",
        "    ",
        "\t",
        " ",
        "  \n",
        "\r",
        "\u{202e}",
        "\u{2066}",
        "\0",
        "\u{1b}[31m",
        "\u{e000}",
        "\u{e041}",
        "\u{e100}",
        "\u{feff}",
        "|",
        "$",
        "https://ferry.example",
        "[x]: /u",
        "'",
        "\"",
        "é",
        "漢",
        "🔥",
        ".",
        ")",
        "(",
    ];
    prop_oneof![3 => prop::sample::select(nasty.to_vec()).prop_map(str::to_owned), 1 => any::<String>(), 1 => "[a-z]{1,4}"]
}

fn text() -> impl Strategy<Value = String> {
    let says_something = |s: &String| !s.is_empty() && s.trim() != "as found";
    prop::collection::vec(fragment(), 1..6).prop_map(|parts| parts.concat()).prop_filter("nothing to say", says_something)
}

/// The document with every text of the workbook taken out: what must be the same for any text.
fn skeleton(document: &Document, text: &str) -> String {
    let mut out = String::new();
    document.blocks.iter().for_each(|b| block(b, text, &mut out));
    for sheet in &document.sheets {
        out.push_str(&format!("\n{} ", sheet.name));
        sheet.tables.iter().for_each(|t| out.push_str(&format!("{}x{} ", t.name, t.rows.len())));
    }
    out
}

fn block(b: &Block, text: &str, out: &mut String) {
    out.push('\n');
    match b {
        Block::Heading { level, text: inner, .. } => {
            out.push_str(&format!("h{level} "));
            inlines(inner, text, out);
        }
        Block::Paragraph(inner) => inlines(inner, text, out),
        Block::List { start, items } => {
            out.push_str(&format!("list {start:?} {}", items.len()));
            items.iter().flatten().for_each(|b| block(b, text, out));
        }
        Block::Callout { signal, title, blocks } => {
            out.push_str(&format!("callout {signal:?} "));
            inlines(title, text, out);
            blocks.iter().for_each(|b| block(b, text, out));
        }
        Block::Table(table) => {
            out.push_str(&format!("table {} {} ", table.name, neutral(&table.caption, text)));
            table.rows.iter().flat_map(|r| &r.cells).for_each(|c| cell(c, text, out));
        }
        // Figures shorten names to fit; their own tests hold them.
        Block::Figure { .. } => out.push_str("figure"),
        Block::Photos(photos) => photos.iter().for_each(|p| out.push_str(&neutral(&p.caption, text))),
        Block::Facts(pairs) => pairs.iter().for_each(|(label, value)| {
            out.push_str(label);
            inlines(value, text, out);
        }),
        Block::SignOff(lines) => out.push_str(&format!("sign {}", lines.len())),
        Block::PageBreak => out.push_str("page"),
    }
}

fn cell(c: &Cell, text: &str, out: &mut String) {
    match c {
        Cell::Text(t) => out.push_str(&neutral(t, text)),
        Cell::Rich(inner) => inlines(inner, text, out),
        other => out.push_str(&format!("{other:?}")),
    }
    out.push('|');
}

fn inlines(inner: &[Inline], text: &str, out: &mut String) {
    for inline in inner {
        match inline {
            Inline::Text(t) => out.push_str(&neutral(t, text)),
            Inline::Strong(i) => nested("strong", i, text, out),
            Inline::Emphasis(i) => nested("emphasis", i, text, out),
            Inline::Link { href, text: i } => {
                assert!(["https://ferry.example/", "#"].iter().any(|s| href.starts_with(s)), "{href}");
                nested("link", i, text, out);
            }
            Inline::Signal(s) => out.push_str(s.word()),
            Inline::Break => out.push_str("<br>"),
        }
    }
}

fn nested(name: &str, inner: &[Inline], text: &str, out: &mut String) {
    out.push_str(&format!("<{name}>"));
    inlines(inner, text, out);
    out.push_str(&format!("</{name}>"));
}

/// A text with each text of the workbook in it as a mark.
fn neutral(shown: &str, text: &str) -> String {
    shown.replace(&visible(text), "§")
}

fn same_structure(template: &str, text: &str) -> Result<(), TestCaseError> {
    // A text that the report itself does not use, so that it can be told from the report's own words.
    const HARMLESS: &str = "qxqzjv";
    let hostile = format!("{text}qxqzj");
    let of = |text: &str| skeleton(&Made::saying(text).report("t", template).unwrap(), text);
    let (hostile, harmless) = (of(&hostile), of(HARMLESS));
    for (got, wanted) in hostile.lines().zip(harmless.lines()) {
        prop_assert_eq!(got, wanted);
    }
    prop_assert_eq!(hostile.lines().count(), harmless.lines().count());
    Ok(())
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 96, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn in_every_position(text in text()) {
        same_structure(EVERYWHERE, &text)?;
    }

    #[test]
    fn in_the_built_in_templates(text in text(), which in 0..BUILT_IN_TEMPLATES.len()) {
        same_structure(BUILT_IN_TEMPLATES[which].2, &text)?;
    }
}

#[test]
fn nothing_hides_or_reorders() {
    let document = Made::saying("\u{202e}a\0b\u{1b}[2J").built_in("client");
    let text = crate::outline::document(&document);
    assert!(text.contains("⟨U+202E⟩a⟨U+0000⟩b⟨U+001B⟩[2J"));
    assert!(!text.chars().any(|c| c == '\u{202e}' || (c.is_control() && c != '\n')));
}
