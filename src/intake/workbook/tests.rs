//! Workbooks of other writers, read cell by cell; and files made to break a reader.

use super::*;

#[test]
fn dump() {
    for f in ["bad-cells.xlsx", "cottage.ods", "sound-house.xlsx"] {
        let bytes = std::fs::read(format!("samples/{f}")).unwrap();
        let book = read(&Content::File(&bytes)).unwrap().value;
        for s in &book.sheets {
            println!("== {f} {} {} {:?} {:?} {:?} {}", s.name, s.hidden, s.hidden_rows, s.hidden_columns, s.merged, s.cells.len());
            for c in &s.cells {
                println!("  {},{} {:?}", c.row, c.col, c.value);
            }
        }
    }
}
