//! `pulsewright.mistakes/1`: what is wrong with the input, and what was remarked on it.
//!
//! What a record holds here comes from whoever read the text: this module knows no netlist.

use super::Program;
use serde::{Deserialize, Serialize};

/// The record of mistakes; without any where a file was checked and found sound.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct MistakesRecord {
    /// `pulsewright.mistakes/1`.
    pub record: String,
    /// The program that wrote it.
    pub program: Program,
    /// The mistakes, by file and then by place.
    pub mistakes: Vec<MistakeRecord>,
    /// The remarks, likewise.
    pub remarks: Vec<MistakeRecord>,
}

/// One mistake, or one remark.
#[derive(Clone, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct MistakeRecord {
    /// Its code; never changes its meaning.
    pub code: String,
    /// The file as the user named it, `-` for standard input.
    pub file: String,
    /// The line, from 1; `null` where it has no place.
    pub line: Option<u64>,
    /// The column, in characters from 1.
    pub column: Option<u64>,
    /// The bytes of the text that it is about.
    pub span: Option<Bytes>,
    /// What is wrong.
    pub message: String,
    /// What belongs there.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub label: Option<String>,
    /// What to write instead.
    pub replacement: Option<String>,
}

/// A range of bytes.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct Bytes {
    /// The first byte.
    pub start: u64,
    /// One past the last byte.
    pub end: u64,
}

impl MistakesRecord {
    /// A record of these mistakes and remarks.
    #[must_use]
    pub fn new(mistakes: Vec<MistakeRecord>, remarks: Vec<MistakeRecord>) -> Self {
        MistakesRecord {
            record: "pulsewright.mistakes/1".to_owned(),
            program: Program::this(),
            mistakes,
            remarks,
        }
    }
}
