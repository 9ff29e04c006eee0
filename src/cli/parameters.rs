//! `--parameters`: sets in the place of those of the program.

use super::arguments::PacemakerOption;
use super::{Ending, Stop};
use acroshift::physiology::ModelSets;
use anyhow::Context;

/// The sets of a run: those of the program, with the files and names given in their place.
pub(super) fn sets(pacemaker: PacemakerOption, replacements: &[String]) -> Result<ModelSets, Stop> {
    let mut sets = ModelSets::with_pacemaker(pacemaker.names()[0]);
    for given in replacements {
        replace(&mut sets, given).map_err(|error| Stop {
            ending: Ending::Input,
            error,
        })?;
    }
    Ok(sets)
}

fn replace(sets: &mut ModelSets, given: &str) -> anyhow::Result<()> {
    // A name of the program's own has no dot; a file has one.
    if !given.contains('.') {
        return Ok(sets.replace(given)?);
    }
    let text = std::fs::read_to_string(given).with_context(|| given.to_owned())?;
    sets.replace(&text).with_context(|| given.to_owned())
}
