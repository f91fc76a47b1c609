//! What a record may hold: finite numbers, and maps in the order of the file.
//!
//! JSON has no word for infinity or for what is no number, and a writer that turns them into
//! `null` without a word would hide them. A [`Finite`] cannot hold them: whoever makes a record
//! has to say what stands there instead.

use serde::de::{MapAccess, Visitor};
use serde::ser::SerializeMap;
use serde::{Deserialize, Deserializer, Serialize, Serializer};
use std::fmt;
use std::marker::PhantomData;

/// A finite number; zero has no sign.
#[derive(Clone, Copy, Debug, PartialEq, PartialOrd, Serialize, Deserialize)]
#[serde(try_from = "f64")]
pub struct Finite(f64);

impl Finite {
    /// The number, where it is finite.
    #[must_use]
    pub fn new(value: f64) -> Option<Self> {
        value.is_finite().then_some(Finite(value + 0.0))
    }

    /// A bound, rounded up to two digits, where it is finite.
    #[must_use]
    pub fn bound(value: f64) -> Option<Self> {
        Finite::new(crate::number::rounded_up(value))
    }

    /// The number.
    #[must_use]
    pub const fn value(self) -> f64 {
        self.0
    }
}

impl TryFrom<f64> for Finite {
    type Error = &'static str;

    fn try_from(value: f64) -> Result<Self, Self::Error> {
        Finite::new(value).ok_or("no finite number")
    }
}

/// A map from names to values in the order in which the file states them.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Ordered<T>(pub Vec<(String, T)>);

impl<T> Ordered<T> {
    /// Nothing.
    #[must_use]
    pub const fn none() -> Self {
        Ordered(Vec::new())
    }

    /// Whether it holds nothing.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.0.is_empty()
    }

    /// The value of a name.
    #[must_use]
    pub fn named(&self, name: &str) -> Option<&T> {
        self.0
            .iter()
            .find(|(n, _)| n == name)
            .map(|(_, value)| value)
    }
}

impl<T: Serialize> Serialize for Ordered<T> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(Some(self.0.len()))?;
        for (name, value) in &self.0 {
            map.serialize_entry(name, value)?;
        }
        map.end()
    }
}

impl<'de, T: Deserialize<'de>> Deserialize<'de> for Ordered<T> {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_map(InOrder(PhantomData))
    }
}

struct InOrder<T>(PhantomData<T>);

impl<'de, T: Deserialize<'de>> Visitor<'de> for InOrder<T> {
    type Value = Ordered<T>;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("a map from names to values")
    }

    fn visit_map<M: MapAccess<'de>>(self, mut map: M) -> Result<Self::Value, M::Error> {
        let mut entries = Vec::new();
        while let Some(entry) = map.next_entry()? {
            entries.push(entry);
        }
        Ok(Ordered(entries))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn only_finite_numbers_get_in() {
        assert_eq!(Finite::new(f64::NAN), None);
        assert_eq!(Finite::bound(f64::INFINITY), None);
        assert!(serde_json::from_str::<Finite>("1e999").is_err());
    }

    #[test]
    fn zero_has_no_sign() {
        assert_eq!(serde_json::to_string(&Finite::new(-0.0)).unwrap(), "0.0");
    }

    #[test]
    fn a_map_keeps_its_order() {
        let map = Ordered(vec![("zeta".to_owned(), 1), ("alpha".to_owned(), 2)]);
        let text = serde_json::to_string(&map).unwrap();
        assert_eq!(text, r#"{"zeta":1,"alpha":2}"#);
        assert_eq!(serde_json::from_str::<Ordered<i32>>(&text).unwrap(), map);
    }
}
