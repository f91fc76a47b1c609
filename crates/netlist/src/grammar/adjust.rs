//! `adjust bank_v from 1 kV to 6 kV so that energy into chest is rated_j`.
//!
//! ```text
//! adjust = "adjust" NAME "from" EXPR "to" EXPR "so that" EXPR "is" EXPR
//! ```

use pulsewright_circuit::draft::Adjust;

use super::{Parser, Read};
use crate::slip::What;
use crate::token::Kind;

impl Parser<'_> {
    pub(super) fn adjust(&mut self) -> Read<Adjust> {
        self.at += 1;
        let name = self.new_name()?;
        self.named_by = self.at;
        self.expect_word("from")?;
        let from = self.expression()?;
        self.expect_word("to")?;
        let to = self.expression()?;
        if self.kind(0) == Some(Kind::Comma) {
            return self.later("`adjust` of several let-values");
        }
        self.expect_words(&["so", "that"])?;
        let reading = self.expression()?;
        self.expect_word("is")?;
        if self.is_word(0, "least") {
            return self.later("`adjust … so that … is least`, a fit,");
        }
        let value = self.expression()?;
        if self.are_words(&["in", "every", "draw"]) {
            return self.later("`adjust … in every draw`");
        }
        self.finish()?;
        Ok(Adjust {
            name,
            from,
            to,
            reading,
            value,
            span: self.whole_span(),
        })
    }

    fn later<T>(&self, what: &str) -> Read<T> {
        let what = what.to_owned();
        self.slip(self.place(), What::Later { what })
    }
}
