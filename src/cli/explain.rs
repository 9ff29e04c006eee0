//! `acroshift explain`: a code to its meaning.

use super::arguments::ExplainOptions;
use super::{Ending, Stop, output};
use acroshift::render::terminal;
use acroshift::report::explain::{codes, explain};
use anyhow::Context;
use std::io::Write;

/// Runs the command.
pub(super) fn run(options: &ExplainOptions) -> Result<Ending, Stop> {
    let explanation = explain(&options.code).ok_or_else(|| unknown(&options.code))?;
    let mut results = output::results();
    terminal::write_explanation(&explanation, &mut results).context("writing the explanation")?;
    results.flush().context("writing the explanation")?;
    Ok(Ending::Done)
}

fn unknown(code: &str) -> Stop {
    let near = codes()
        .into_iter()
        .map(|known| (strsim::damerau_levenshtein(&known, code), known))
        .min()
        .filter(|(distance, _)| *distance <= 3)
        .map(|(_, known)| format!("; did you mean {known}?"))
        .unwrap_or_default();
    let code: String = code.chars().take(40).collect();
    Stop::usage(format!(
        "{code:?} is no code that this program prints{near}"
    ))
}
