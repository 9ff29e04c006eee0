//! A number of a parameter set or rule pack: value, unit, and how it is known.

use serde::Deserialize;
use std::fmt;

/// How a number is known. The mark travels with the number into every display of its source.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Deserialize)]
pub enum Mark {
    /// Seen in the opened source itself.
    S,
    /// Seen in a secondary source only.
    S2,
    /// From memory; the citation says where it is believed to stand.
    M,
    /// Computed by this project from sourced numbers.
    #[serde(rename = "computed")]
    Computed,
    /// Fitted by this project to published experiments.
    #[serde(rename = "fitted")]
    Fitted,
    /// Chosen by this project; no outside authority.
    #[serde(rename = "own")]
    Own,
}

impl fmt::Display for Mark {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(match self {
            Self::S => "seen in the source",
            Self::S2 => "seen in a secondary source, to be verified",
            Self::M => "from memory, to be verified",
            Self::Computed => "computed by this project",
            Self::Fitted => "fitted by this project",
            Self::Own => "this program's choice, no source",
        })
    }
}

/// A number with its unit and source, as it stands in a TOML file.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Sourced {
    /// The number.
    pub value: f64,
    /// Its unit.
    pub unit: String,
    /// How it is known.
    pub mark: Mark,
    /// Where it stands.
    pub source: String,
}

impl fmt::Display for Sourced {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(
            formatter,
            "{} {} ({}; {})",
            self.value, self.unit, self.source, self.mark
        )
    }
}
