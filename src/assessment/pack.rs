//! Rule packs: limits of law and advice as data, each with instrument, article, source and tier.

use crate::units::Mark;
use serde::Deserialize;

/// Is a rule law or advice? The two are never merged.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum RuleClass {
    /// Statute, regulation or directive.
    Law,
    /// Expert or regulator's advice: a departure from it is not a breach.
    Advice,
}

/// Which side of the limit is in order.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize)]
pub enum Comparison {
    /// At least the limit.
    #[serde(rename = ">=")]
    AtLeast,
    /// At most the limit.
    #[serde(rename = "<=")]
    AtMost,
    /// Equal to the limit.
    #[serde(rename = "==")]
    Equal,
}

impl Comparison {
    /// Is the measured value in order?
    pub fn holds(self, measured: f64, limit: f64) -> bool {
        /// Hours are whole minutes; a thousandth of a minute is rounding.
        const ROUNDING: f64 = 1e-5;
        match self {
            Self::AtLeast => measured >= limit - ROUNDING,
            Self::AtMost => measured <= limit + ROUNDING,
            Self::Equal => (measured - limit).abs() <= ROUNDING,
        }
    }

    /// The sign as printed.
    pub fn sign(self) -> &'static str {
        match self {
            Self::AtLeast => ">=",
            Self::AtMost => "<=",
            Self::Equal => "=",
        }
    }
}

/// A window of time in which a rule is measured.
#[derive(Debug, Clone, PartialEq, Eq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct RuleWindow {
    /// Its length.
    pub len: u32,
    /// Unit of the length: `h` or `d`.
    pub unit: String,
    /// Where it begins: `from-duty-start`, `period`, `rolling`, ...
    pub align: String,
}

/// A reference period over which an average is taken.
#[derive(Debug, Clone, PartialEq, Eq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct ReferencePeriod {
    /// Its length; 0 when it is set nationally.
    pub len: u32,
    /// Unit of the length.
    pub unit: String,
}

/// When a duty counts as a night duty.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct NightDefinition {
    /// Id in the library of definitions.
    pub id: String,
    /// First clock time of the window.
    pub from: String,
    /// Last clock time of the window, on the next date.
    pub to: String,
    /// Hours inside the window from which a duty is a night duty.
    pub at_least_h: f64,
    /// How it is known.
    pub tier: Mark,
    /// Where it stands.
    pub source: String,
}

/// One rule.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Rule {
    /// Stable id.
    pub id: String,
    /// Whom it concerns.
    pub scope: String,
    /// Law or document.
    pub instrument: String,
    /// Article, regulation or chapter; may be empty.
    pub article: String,
    /// Year of the instrument.
    pub year: u16,
    /// What is measured: the name of a rule kind.
    pub metric: String,
    /// Which side of the limit is in order.
    pub op: Comparison,
    /// The limit.
    pub value: f64,
    /// Unit of the limit.
    pub unit: String,
    /// Window in which it is measured.
    pub window: Option<RuleWindow>,
    /// Reference period of an average.
    pub reference: Option<ReferencePeriod>,
    /// The rule acts on duties longer than this, hours.
    pub work_h_above: Option<f64>,
    /// The value still allowed under a derogation.
    pub floor: Option<f64>,
    /// Derogations that the instrument knows.
    #[serde(default)]
    pub derogations: Vec<String>,
    /// Rules with the same word are met when one of them is.
    pub any_of: Option<String>,
    /// Remark shown with the rule.
    pub note: Option<String>,
    /// How the number is known.
    pub tier: Mark,
    /// Where it was read.
    pub source: String,
}

impl Rule {
    /// Instrument, article, source and tier in one line.
    pub fn citation(&self) -> String {
        let article = if self.article.is_empty() {
            String::new()
        } else {
            format!(", {}", self.article)
        };
        format!("{}{article} ({})", self.instrument, self.tier)
    }
}

/// A pack of rules.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Pack {
    /// Name by which it is chosen.
    pub pack: String,
    /// Title in words.
    pub title: String,
    /// Law or advice.
    pub class: RuleClass,
    /// Where it applies.
    pub jurisdiction: String,
    /// How its findings are to be read.
    pub reading: String,
    /// In which state it was seen.
    pub as_seen: String,
    /// Rules of the same documents that this version does not measure.
    pub left_out: Vec<String>,
    /// When a duty counts as a night duty here; never mixed between packs.
    pub night: NightDefinition,
    /// Its rules.
    #[serde(rename = "rule")]
    pub rules: Vec<Rule>,
}

/// A pack was named that the program does not have.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[non_exhaustive]
#[error("rule pack {name:?} is not known; known packs: {known}{advice}")]
pub struct UnknownPack {
    /// The name given.
    pub name: String,
    /// Names that are known.
    pub known: String,
    /// A near name, if there is one.
    pub advice: String,
}

const EMBEDDED: [&str; 5] = [
    include_str!("packs/uk-wtr.toml"),
    include_str!("packs/eu-wtd.toml"),
    include_str!("packs/adv-nordic.toml"),
    include_str!("packs/adv-review.toml"),
    include_str!("packs/adv-hse.toml"),
];

/// Packs used where none is chosen.
pub const DEFAULT_PACKS: [&str; 2] = ["eu-wtd", "adv-nordic"];

/// Every pack embedded in the program.
///
/// # Panics
///
/// Never in a built program: a test reads every pack.
pub fn embedded() -> Vec<Pack> {
    EMBEDDED
        .iter()
        .map(|text| toml::from_str(text).expect("embedded packs are read by a test"))
        .collect()
}

/// The packs of the given names, in the order given, each once.
///
/// # Errors
///
/// [`UnknownPack`] for a name that no pack bears.
///
/// # Example
///
/// ```
/// use acroshift::assessment::pack::named;
/// assert_eq!(named(&["uk-wtr"])?[0].rules[0].value, 48.0);
/// assert!(named(&["uk-wrt"]).unwrap_err().to_string().contains("did you mean"));
/// # Ok::<(), acroshift::assessment::pack::UnknownPack>(())
/// ```
pub fn named<S: AsRef<str>>(names: &[S]) -> Result<Vec<Pack>, UnknownPack> {
    let all = embedded();
    let mut chosen: Vec<Pack> = Vec::new();
    for name in names.iter().map(AsRef::as_ref) {
        let pack = all
            .iter()
            .find(|pack| pack.pack == name)
            .ok_or_else(|| unknown(name, &all))?;
        if chosen.iter().all(|earlier| earlier.pack != pack.pack) {
            chosen.push(pack.clone());
        }
    }
    Ok(chosen)
}

fn unknown(name: &str, all: &[Pack]) -> UnknownPack {
    let known: Vec<&str> = all.iter().map(|pack| pack.pack.as_str()).collect();
    let near = known
        .iter()
        .map(|pack| (strsim::damerau_levenshtein(pack, name), *pack))
        .min()
        .filter(|(distance, _)| *distance <= 3);
    UnknownPack {
        name: name.chars().take(40).collect(),
        known: known.join(", "),
        advice: near
            .map(|(_, pack)| format!("; did you mean {pack}?"))
            .unwrap_or_default(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::collections::BTreeSet;

    #[test]
    fn every_embedded_pack_is_read_and_ids_are_unique() {
        let packs = embedded();
        let ids: BTreeSet<String> = packs
            .iter()
            .flat_map(|pack| pack.rules.iter().map(|rule| rule.id.clone()))
            .collect();
        let count: usize = packs.iter().map(|pack| pack.rules.len()).sum();
        assert_eq!(ids.len(), count);
        assert_eq!(count, 15 + 11 + 5 + 2 + 5);
    }

    #[test]
    fn default_packs_exist() {
        assert_eq!(named(&DEFAULT_PACKS).unwrap().len(), 2);
    }
}
