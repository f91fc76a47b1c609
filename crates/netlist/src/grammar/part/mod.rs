//! Parts: `KIND NAME from NODE to NODE`, a value where the part has one, then qualifiers.
//!
//! A part is declared as soon as its name is read; what cannot be read after that is noted,
//! and stands in for itself, so that other statements may speak of the part.

mod capacitor;
mod changeover;
mod coupling;
mod diode;
mod inductor;
mod rating;
mod resistor;
mod source;
mod switch;
mod wire;

use pulsewright_circuit::Name;
use pulsewright_circuit::parts::{Part, PartKind};
use pulsewright_circuit::schedule::Action;
use pulsewright_circuit::spread::Value;

use super::statement::Made;
use super::{Parser, Read};
use crate::slip::What;
use crate::token::Kind;
use crate::words::LATER_QUALIFIERS;
use pulsewright_circuit::near::nearest;

/// What may follow a part's value.
pub(super) struct Form {
    /// The part's first word.
    kind: &'static str,
    /// Qualifiers that take a value: the first word and those after it.
    values: &'static [(&'static str, &'static [&'static str])],
    /// The words that begin its actions.
    actions: &'static [&'static str],
    /// All of them, for a message.
    known: &'static str,
}

/// The qualifiers of one part.
#[derive(Default)]
pub(super) struct Qualifiers {
    values: Vec<(&'static str, Value)>,
    actions: Vec<Action>,
}

impl Qualifiers {
    /// The value of a qualifier by its first word.
    fn take(&mut self, word: &str) -> Option<Value> {
        let i = self.values.iter().position(|(w, _)| *w == word)?;
        Some(self.values.swap_remove(i).1)
    }
}

/// What a spread after the next comma belongs to.
#[derive(Clone, Copy)]
enum Last {
    Main,
    Qualifier(usize),
    Nothing,
}

impl Parser<'_> {
    /// A part, whose first word is `word`, with the claims that its ratings make.
    pub(super) fn part(&mut self, word: &str) -> Read<Made> {
        self.at += 1;
        let name = self.thing("a name")?;
        self.named_by = self.at;
        let kind = match word {
            "resistor" => self.resistor(),
            "capacitor" => self.capacitor(),
            "inductor" => self.inductor(),
            "coupling" => self.coupling(),
            "wire" => self.wire(),
            "voltage" => PartKind::Voltage(self.source_of("voltage")),
            "current" => PartKind::Current(self.source_of("current")),
            "switch" => self.switch(),
            "changeover" => self.changeover(),
            _ => self.diode(),
        };
        let claims = self.rated_claims(&name);
        let span = self.whole_span();
        Ok(Made::Part(Part { name, kind, span }, claims))
    }

    /// `from NODE to NODE`; where that is amiss the rest of the statement is passed over.
    fn ends(&mut self) -> (Name, Name) {
        let read = self.try_ends();
        let unread = Name::new("ground", self.whole_span());
        self.or_give_up(read)
            .unwrap_or_else(|| (unread.clone(), unread))
    }

    fn try_ends(&mut self) -> Read<(Name, Name)> {
        self.expect_word("from")?;
        let from = self.thing("a node")?;
        self.expect_word("to")?;
        Ok((from, self.thing("a node")?))
    }

    /// What was read; or a note of why not, with the rest of the statement passed over.
    pub(super) fn or_give_up<T>(&mut self, read: Read<T>) -> Option<T> {
        match read {
            Ok(value) => Some(value),
            Err(slip) => {
                self.slips.push(*slip);
                self.at = self.tokens.len();
                None
            }
        }
    }

    /// `= VALUE`, up to a comma.
    fn main_value(&mut self) -> Value {
        if self.is_end() && !self.slips.is_empty() {
            return self.stand_in().into();
        }
        let read = self.try_main_value();
        self.recover(read).unwrap_or_else(|| self.stand_in().into())
    }

    fn try_main_value(&mut self) -> Read<Value> {
        self.expect(Kind::Equal, "=")?;
        let value = self.expression()?;
        self.over()?;
        Ok(value.into())
    }

    /// The qualifiers after a value, each after a comma.
    fn qualifiers(&mut self, form: &Form, main: &mut Value) -> Qualifiers {
        let mut found = Qualifiers::default();
        self.more_qualifiers(form, Some(main), &mut found);
        found
    }

    /// The qualifiers of a part without a value: a colon before the first, commas between.
    fn qualifiers_after_colon(&mut self, form: &Form) -> Qualifiers {
        let mut found = Qualifiers::default();
        if self.is_end() {
            return found;
        }
        let read = self.expect(Kind::Colon, ":");
        if self.or_give_up(read).is_some() {
            let read = self.qualifier(form, None, &mut found, Last::Nothing);
            let last = self.recover(read).unwrap_or(Last::Nothing);
            self.rest_of_qualifiers(form, None, &mut found, last);
        }
        found
    }

    fn more_qualifiers(&mut self, form: &Form, main: Option<&mut Value>, found: &mut Qualifiers) {
        self.rest_of_qualifiers(form, main, found, Last::Main);
    }

    fn rest_of_qualifiers(
        &mut self,
        form: &Form,
        mut main: Option<&mut Value>,
        found: &mut Qualifiers,
        mut last: Last,
    ) {
        while self.take(Kind::Comma) {
            let read = self.qualifier(form, main.as_deref_mut(), found, last);
            last = self.recover(read).unwrap_or(Last::Nothing);
        }
        if !self.is_end() {
            let read = self.finish();
            self.or_give_up(read);
        }
    }

    fn qualifier(
        &mut self,
        form: &Form,
        main: Option<&mut Value>,
        found: &mut Qualifiers,
        last: Last,
    ) -> Read<Last> {
        let place = self.place();
        let Some(word) = self.word(0) else {
            return self.expected(format!("a qualifier ({})", form.known), &[]);
        };
        let next = if self.begins_spread(0) {
            let slot = match last {
                Last::Main => main,
                Last::Qualifier(i) => found.values.get_mut(i).map(|(_, v)| v),
                Last::Nothing => None,
            };
            self.spread_for(slot)?;
            last
        } else if form.actions.contains(&word) {
            found.actions.push(self.action()?);
            Last::Nothing
        } else if let Some((word, further)) = form.values.iter().find(|(w, _)| *w == word) {
            self.at += 1;
            self.expect_words(further)?;
            let value = self.expression()?;
            if found.values.iter().any(|(w, _)| w == word) {
                let (word, within) = ((*word).to_owned(), self.subject());
                return self.slip(place, What::Twice { word, within });
            }
            found.values.push((word, value.into()));
            Last::Qualifier(found.values.len() - 1)
        } else if word == "rated" && form.kind != "coupling" {
            self.ratings()?;
            Last::Nothing
        } else {
            return self.no_qualifier(form, word);
        };
        self.over()?;
        Ok(next)
    }

    fn spread_for(&mut self, slot: Option<&mut Value>) -> Read<()> {
        let place = self.place();
        let word = self.word(0).unwrap_or_default().to_owned();
        let spread = self.spread()?;
        match slot {
            Some(value) if value.spread.is_none() => value.spread = Some(spread),
            Some(_) => {
                return self.slip(
                    place,
                    What::Twice {
                        word,
                        within: "one value".to_owned(),
                    },
                );
            }
            None => {
                self.at = self
                    .tokens
                    .iter()
                    .position(|t| t.start == place.start)
                    .unwrap_or(self.at);
                return self.expected("a value before the spread", &[]);
            }
        }
        Ok(())
    }

    fn no_qualifier<T>(&self, form: &Form, word: &str) -> Read<T> {
        if LATER_QUALIFIERS.contains(&word) {
            return self.slip(
                self.place(),
                What::Later {
                    what: format!("`{word}`"),
                },
            );
        }
        let spreads = ["tolerance", "standard", "rated"];
        let words = form
            .values
            .iter()
            .map(|(w, _)| *w)
            .chain(form.actions.iter().copied())
            .chain(spreads);
        let near = nearest(word, words).map(str::to_owned);
        let word = word.to_owned();
        self.slip(
            self.place(),
            What::NoQualifier {
                word,
                kind: form.kind,
                known: form.known,
                near,
            },
        )
    }
}
