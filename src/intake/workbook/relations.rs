//! The relations between the parts of an Open Packaging Conventions package: which part is which, and where it is.

use super::archive::Archive;
use super::bounds::{MOST_NAMED, at_most};
use super::xml::{Node, Xml};
use crate::intake::Refusal;

/// One relation of a part.
pub struct Relation {
    /// Its id within the part.
    pub id: String,
    /// What the other part is: the last piece of the type's address, which the strict and the transitional form share.
    pub kind: String,
    /// The other part's name.
    pub target: String,
}

/// A sheet as a workbook's main part lists it.
pub struct Entry {
    /// Its name.
    pub name: String,
    /// The id of the relation to its part.
    pub relation: String,
    /// It is hidden.
    pub hidden: bool,
}

/// The part of a kind of which there is at most one.
pub fn part<'a>(relations: &'a [Relation], kind: &str) -> Option<&'a str> {
    relations.iter().find(|r| r.kind == kind).map(|r| r.target.as_str())
}

/// The part of a listed sheet; none for a chart sheet or a macro sheet, which hold no cells of their own.
///
/// # Errors
/// There is no such part.
pub fn worksheet<'a>(relations: &'a [Relation], entry: &Entry) -> Result<Option<&'a str>, Refusal> {
    let relation = relations.iter().find(|r| r.id == entry.relation);
    let relation = relation.ok_or_else(|| Refusal::Damaged(format!("sheet {} is listed but not there", entry.name)))?;
    Ok((relation.kind == "worksheet").then_some(relation.target.as_str()))
}

/// The relations of a part, or of the package (the empty name). Those that lead out of the package are left out.
///
/// # Errors
/// The part that lists them is broken.
pub fn of(archive: &Archive, part: &str) -> Result<Vec<Relation>, Refusal> {
    let (folder, file) = part.rsplit_once('/').map_or(("", part), |(folder, file)| (folder, file));
    let name = format!("{folder}/_rels/{file}.rels").trim_start_matches('/').to_owned();
    let Some(stream) = archive.part(&name)? else { return Ok(Vec::new()) };
    let mut xml = Xml::new(&name, stream);
    let mut relations = Vec::new();
    loop {
        match xml.next()? {
            Node::Open(tag) if tag.name() == b"Relationship" => {
                let external = tag.get("TargetMode")?.is_some_and(|mode| mode == "External");
                let [id, kind, target] = ["Id", "Type", "Target"].map(|name| tag.get(name));
                if let (Some(id), Some(kind), Some(target), false) = (id?, kind?, target?, external) {
                    let kind = kind.rsplit('/').next().unwrap_or_default().to_owned();
                    relations.push(Relation { id, kind, target: resolve(folder, &target) });
                    at_most(relations.len(), MOST_NAMED, "related parts")?;
                }
            }
            Node::End => return Ok(relations),
            _ => {}
        }
    }
}

/// A target as written, from the folder of the part it stands in.
fn resolve(folder: &str, target: &str) -> String {
    let target = target.replace('\\', "/");
    let mut path: Vec<&str> = if target.starts_with('/') { Vec::new() } else { folder.split('/').collect() };
    for step in target.split('/') {
        match step {
            "" | "." => {}
            ".." => drop(path.pop()),
            step => path.push(step),
        }
    }
    path.retain(|step| !step.is_empty());
    path.join("/")
}

#[cfg(test)]
mod tests {
    use super::resolve;

    #[test]
    fn targets_are_found_from_where_they_are_written() {
        assert_eq!(resolve("xl", "worksheets/sheet1.xml"), "xl/worksheets/sheet1.xml");
        assert_eq!(resolve("xl", "/xl/worksheets/sheet1.xml"), "xl/worksheets/sheet1.xml");
        assert_eq!(resolve("xl/worksheets", "../sharedStrings.xml"), "xl/sharedStrings.xml");
        assert_eq!(resolve("", "../../../../etc/hosts"), "etc/hosts");
    }
}
