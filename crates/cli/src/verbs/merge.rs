//! `merge`: the records of slices to that of the whole.

use super::spread::shown;
use crate::exit::Ending;
use crate::input;
use crate::shell::Shell;
use crate::trouble::Trouble;
use pulsewright::report::record::{SliceError, joined, read_slice};
use std::path::{Path, PathBuf};

/// Joins the slices and shows the study.
pub fn merge(files: &[PathBuf], json: bool, shell: &Shell) -> Result<Ending, Trouble> {
    let mut slices = Vec::with_capacity(files.len());
    for file in files {
        slices.push(read_slice(&input::bytes(file, shell)?).map_err(|e| refused(e, Some(file)))?);
    }
    let (spread, input) = joined(slices).map_err(|error| {
        let file = match error {
            SliceError::OfAnother(place) => files.get(place).map(PathBuf::as_path),
            _ => None,
        };
        refused(error, file)
    })?;
    shown(&spread, &input.origin(), json, shell)
}

fn refused(error: SliceError, file: Option<&Path>) -> Trouble {
    let what = match error {
        SliceError::NotASlice(why) => why,
        SliceError::OfAnother(_) => {
            "its program, netlist or settings are not those of the first".to_owned()
        }
        SliceError::Merge(error) => error.to_string(),
        _ => "the slices do not fit together".to_owned(),
    };
    Trouble::Usage(match file {
        Some(file) => format!("{}: {what}", input::name(file)),
        None => what,
    })
}
