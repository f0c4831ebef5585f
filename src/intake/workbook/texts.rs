//! The table of shared texts that three of the formats have: each text once, cells refer to it by number.

use super::bounds::{MOST_CELLS, MOST_SHARED, at_most, megabytes};
use crate::intake::Refusal;

/// The table, kept as one text, so that millions of empty entries cost next to nothing.
#[derive(Default)]
pub struct Texts {
    text: String,
    ends: Vec<u32>,
}

impl Texts {
    /// Adds a text.
    ///
    /// # Errors
    /// The table is beyond a bound.
    pub fn push(&mut self, text: &str) -> Result<(), Refusal> {
        self.text.push_str(text);
        let end = u32::try_from(self.text.len()).ok().filter(|end| *end as usize <= MOST_SHARED);
        self.ends.push(end.ok_or_else(|| megabytes("its shared texts are more than", MOST_SHARED, ""))?);
        at_most(self.ends.len(), MOST_CELLS, "shared texts")
    }

    /// The text of a number.
    ///
    /// # Errors
    /// There is none.
    pub fn get(&self, number: usize) -> Result<&str, Refusal> {
        let end = self.ends.get(number).map(|end| *end as usize);
        let start = number.checked_sub(1).and_then(|before| self.ends.get(before)).map_or(0, |end| *end as usize);
        let text = end.and_then(|end| self.text.get(start..end));
        text.ok_or_else(|| Refusal::Damaged(format!("a cell refers to the shared text {number}, which is not there")))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn texts_come_back_by_number() {
        let mut texts = Texts::default();
        for text in ["L1-N", "", "Ω"] {
            texts.push(text).unwrap();
        }
        assert_eq!([0, 1, 2].map(|n| texts.get(n).unwrap()), ["L1-N", "", "Ω"]);
        assert!(texts.get(3).is_err());
    }
}
