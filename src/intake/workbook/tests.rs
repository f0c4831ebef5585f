//! Workbooks of other writers, read cell by cell; and files made to break a reader.

use super::*;

#[test]
fn dump() {
    for f in [
        "kinds.xlsx",
        "kinds.xlsm",
        "kinds.ods",
        "kinds.xls",
        "from-1904.xlsx",
        "from-1904.xls",
        "plain.xls",
        "plain.xlsb",
        "hand.ods",
        "locked.xlsx",
    ] {
        let bytes = std::fs::read(format!("tests/data/formats/{f}")).unwrap();
        match read(&Content::File(&bytes)) {
            Err(e) => println!("## {f} {e}"),
            Ok(book) => {
                for s in &book.value.sheets {
                    println!("== {f} {} {} {:?} {:?} {:?} {}", s.name, s.hidden, s.hidden_rows, s.hidden_columns, s.merged, s.cells.len());
                    for c in s.cells.iter().take(64) {
                        println!("  {},{} {:?}", c.row, c.col, c.value);
                    }
                }
            }
        }
    }
    for f in ["csv-plain", "csv-office"] {
        let files: Vec<_> = std::fs::read_dir(format!("tests/data/formats/{f}"))
            .unwrap()
            .map(|e| {
                let p = e.unwrap().path();
                (p.file_name().unwrap().to_str().unwrap().to_owned(), std::fs::read(&p).unwrap())
            })
            .collect();
        println!("## {f} {:#?}", read(&Content::Folder(&files)));
    }
}
