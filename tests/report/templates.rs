//! Templates of the user's own: what they can place, and what is said when they are wrong.

use crate::made::Made;
use crate::outline;
use midwire::report::TemplateError;
use midwire::report::document::{Block, Inline};

fn error(template: &str) -> TemplateError {
    Made::house().report("own.md.tera", template).unwrap_err()
}

#[test]
fn a_mistake_is_named_with_its_line_and_the_nearest_name() {
    let table = [
        ("# T\n\n{{ site.clinet }}\n", 3, "`site.client`"),
        ("{{ diagnosis.probabilty }}", 1, "`diagnosis.probability`"),
        ("\n{{ sit.client }}", 2, "`site`"),
        ("a\n\n![](table:reedings)\n", 3, "`readings`"),
        ("![](figure:run-trea)", 1, "`run-tree`"),
        ("![](tabel:readings)", 1, "`table`"),
        ("![](signal:DANGR)", 1, "`DANGER`"),
        ("+++\ntitle = \"T\"\n\n[[sheets]]\nname = \"All\"\ntables = [\"finding\"]\n+++\n", 6, "`findings`"),
    ];
    for (template, line, near) in table {
        let error = error(template);
        assert_eq!((error.file.as_str(), error.line), ("own.md.tera", line), "{error}");
        assert!(error.message.contains(near), "{error}");
    }
}

#[test]
fn a_template_that_can_t_be_read_says_where() {
    for (template, line) in [
        ("a\n{% if site.client %}\nb\n", 4),
        ("a\n\n{{ site.client | shout }}\n", 3),
        ("+++\ntitle = \"T\"\nsheet = 1\n+++\n", 3),
        ("+++\ntitle = 1\n+++\n", 2),
        ("+++\ntitle = \"T\"\n", 1),
    ] {
        let error = error(template);
        assert_eq!(error.line, line, "{error}");
        assert!(!error.message.is_empty() && !error.message.contains('\n'), "{error}");
    }
}

#[test]
fn a_template_reads_no_files_and_has_an_end() {
    assert!(error("{% include \"/etc/hostname\" %}").message.contains("hostname"));
    let endless = "{% for a in range(end=90000) %}{% for b in range(end=90000) %}{{ site }}aaaaaaaaaaaaaaaa{% endfor %}{% endfor %}";
    assert!(error(endless).message.contains("16 MB"));
}

#[test]
fn places_take_a_caption_and_sheets_an_order() {
    let template = "+++\ntitle = \"Own\"\n\n[[sheets]]\nname = \"First\"\ntables = [\"readings\", \"work\"]\n\n[[sheets]]\nname = \"None\"\ntables = [\"work\"]\n+++\n# Own\n\n![My caption](table:readings) ![](table:work)\n\n> [!NOTE] Mind\n> this *well*.\n";
    let document = Made::house().report("own.md.tera", template).unwrap();
    assert_eq!(document.meta.title, "Own");
    let names: Vec<&str> = document.sheets.iter().map(|s| s.name.as_str()).collect();
    assert_eq!(names, ["First"]);
    let [Block::Heading { .. }, Block::Table(table), Block::Callout { signal: None, title, .. }] = document.blocks.as_slice() else {
        panic!("{}", outline::document(&document));
    };
    assert_eq!((table.caption.as_str(), title), ("My caption", &vec![Inline::Text("Mind".into())]));
}

#[test]
fn only_links_that_lead_somewhere_safe_stay() {
    let template = "[a](https://ferry.example) [b](javascript:alert) [c](file:///etc/passwd) [d](#own) [e]({{ site.client }})";
    let made = Made::saying("https://kestrel.example");
    let document = made.report("own.md.tera", template).unwrap();
    assert_eq!(outline::document(&document).matches("<a ").count(), 2);
}
