//! The text of a cell in OpenDocument: paragraphs, with blanks, tabs and line breaks written as elements.

use super::super::bounds::{MOST_TOKEN, add};
use super::super::xml::{Node, Xml};
use crate::intake::Refusal;

/// Adds the text of the `text:p` that was just opened; a paragraph after another begins a new line.
///
/// Runs of white space in the XML are one blank and those that lead are none (ODF 1.3 part 3, 6.1.2). Comments, notes and drawings
/// within the paragraph are not its text.
///
/// # Errors
/// The part is broken, or the text beyond a bound.
pub fn append(xml: &mut Xml, text: &mut Option<String>) -> Result<(), Refusal> {
    if let Some(before) = text {
        before.push('\n');
    }
    let text = text.get_or_insert_default();
    let mut depth = 1;
    let mut after_blank = true;
    while depth > 0 {
        match xml.next()? {
            Node::Open(tag) => {
                depth += 1;
                match tag.name() {
                    b"s" => {
                        let count: usize = tag.get("c")?.map_or(1, |count| count.parse().unwrap_or(1));
                        add(text, &" ".repeat(count.min(MOST_TOKEN + 1)))?;
                    }
                    b"tab" => text.push('\t'),
                    b"line-break" => text.push('\n'),
                    b"span" | b"a" => continue,
                    _ => {
                        depth -= 1;
                        xml.skip()?;
                    }
                }
                after_blank = false;
            }
            Node::Close => depth -= 1,
            Node::Text(piece) => add(text, &collapse(&piece, &mut after_blank))?,
            Node::End => break,
        }
    }
    Ok(())
}

fn collapse(piece: &str, after_blank: &mut bool) -> String {
    let mut text = String::with_capacity(piece.len());
    for c in piece.chars() {
        let blank = matches!(c, ' ' | '\t' | '\n' | '\r');
        if !(blank && *after_blank) {
            text.push(if blank { ' ' } else { c });
        }
        *after_blank = blank;
    }
    text
}
