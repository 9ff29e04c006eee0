//! What does a code mean? Every code that the program prints can be asked for.

use super::wording;
use crate::assessment::pack::{self, Pack, Rule};
use crate::assessment::{Criteria, FindingCode};
use crate::diagnostic::Code;
use crate::physiology::{ModelSets, PacemakerName};
use crate::units::Sourced;

/// An explanation: a head line, then paragraphs.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Explanation {
    /// The code with its other name, and what it is.
    pub head: String,
    /// What it means, with limits and sources.
    pub paragraphs: Vec<String>,
}

/// Explains a diagnostic (`T21`, `end-before-start-dated`), a finding (`compressed-rest`), a rule (`uk-daily-rest`) or a pack (`uk-wtr`).
///
/// # Example
///
/// ```
/// use acroshift::report::explain::explain;
/// assert!(explain("t21").expect("a diagnostic").head.contains("end-before-start-dated"));
/// assert!(explain("uk-daily-rest").expect("a rule").paragraphs[0].contains("at least 11 h"));
/// assert!(explain("no-such-code").is_none());
/// ```
pub fn explain(code: &str) -> Option<Explanation> {
    diagnostic(code)
        .or_else(|| finding(code))
        .or_else(|| rule(code))
        .or_else(|| rule_pack(code))
        .or_else(|| parameter_set(code))
}

/// Every code that can be explained, for advice on a slip.
pub fn codes() -> Vec<String> {
    let packs = pack::embedded();
    let diagnostics = Code::ALL
        .iter()
        .flat_map(|code| [code.id().to_owned(), code.name().to_owned()]);
    let findings = FindingCode::ALL.iter().map(|code| code.name().to_owned());
    let rules = packs.iter().flat_map(|pack| {
        let ids = pack.rules.iter().map(|rule| rule.id.clone());
        ids.chain([pack.pack.clone()])
    });
    let sets = ModelSets::embedded();
    let sets = sets
        .publications()
        .into_iter()
        .map(|(name, _)| name.to_owned());
    diagnostics
        .chain(findings)
        .chain(rules)
        .chain(sets)
        .collect()
}

/// `ensemble`, `two-process`, `light`, `hpa-cascade` or a pacemaker: every number with unit and source.
fn parameter_set(code: &str) -> Option<Explanation> {
    let sets = PacemakerName::ALL
        .into_iter()
        .map(ModelSets::with_pacemaker)
        .find(|sets| sets.publications().iter().any(|(name, _)| *name == code))?;
    let publications = sets.publications();
    let (_, publication) = publications.iter().find(|(name, _)| *name == code)?;
    let mut paragraphs = vec![format!("{}.", sentence(publication))];
    if code == "ensemble" {
        paragraphs.push(
            "Each member is drawn independently in each dimension: intrinsic period (normal), factor on light (log-normal), mid-sleep (normal; when a person's habits are known, around these with the residual spread), sleep need (normal), commute (log-normal), from a fixed low-discrepancy sample, standardised and clipped, the same for the same seed. Unknown morning daylight: each person is lived in both cases, half of the members each."
                .to_owned(),
        );
    }
    paragraphs.extend(
        sets.listed()
            .into_iter()
            .filter(|(set, _, _)| set == code)
            .map(|(_, key, number)| format!("{key}: {number}.")),
    );
    Some(Explanation {
        head: format!("{code}: parameter set"),
        paragraphs,
    })
}

fn diagnostic(code: &str) -> Option<Explanation> {
    let known = Code::ALL
        .iter()
        .find(|known| known.id().eq_ignore_ascii_case(code) || known.name() == code)?;
    Some(Explanation {
        head: format!(
            "{} {}: {} in the input",
            known.id(),
            known.name(),
            known.level()
        ),
        paragraphs: vec![
            format!("{}.", sentence(known.about())),
            match known.level() {
                crate::diagnostic::Level::Fatal => "The file is not used.".to_owned(),
                crate::diagnostic::Level::Error => "The row is not used; its worker is incomplete, and windows over its dates are not judged. Other workers are not touched.".to_owned(),
                crate::diagnostic::Level::Warning => "The value is used as the message says.".to_owned(),
                crate::diagnostic::Level::Note => "Nothing needs to be done.".to_owned(),
            },
        ],
    })
}

fn finding(code: &str) -> Option<Explanation> {
    let known = FindingCode::ALL.iter().find(|known| known.name() == code)?;
    let criteria = Criteria::embedded();
    let numbers: Vec<&Sourced> = match known {
        FindingCode::CompressedRest => vec![
            &criteria.rest.compressed_below,
            &criteria.rest.very_short_below,
        ],
        FindingCode::CompressedSleep => vec![
            &criteria.sleep.short_24h_below,
            &criteria.sleep.short_from_share,
        ],
        FindingCode::NarrowSleep => vec![
            &criteria.sleep.short_24h_below,
            &criteria.sleep.narrow_from_share,
            &criteria.sleep.short_48h_below,
            &criteria.sleep.short_from_share,
        ],
        FindingCode::LongAwake => vec![&criteria.awake.long_from, &criteria.awake.from_share],
        FindingCode::RunOfNights => vec![&criteria.register.run_ends_with_gap],
        FindingCode::RestAfterNights => vec![
            &criteria.register.local_night_h,
            &criteria.register.local_night_from,
            &criteria.register.local_night_to,
        ],
        _ => Vec::new(),
    };
    let mut paragraphs = vec![format!("{}.", sentence(known.about()))];
    paragraphs.extend(numbers.into_iter().map(ToString::to_string));
    paragraphs.push(
        "Limits of law and advice stand in the rule packs; the finding names its rules.".to_owned(),
    );
    Some(Explanation {
        head: format!("{}: finding", known.name()),
        paragraphs,
    })
}

fn rule(code: &str) -> Option<Explanation> {
    let packs = pack::embedded();
    let (pack, rule) = packs
        .iter()
        .flat_map(|pack| pack.rules.iter().map(move |rule| (pack, rule)))
        .find(|(_, rule)| rule.id == code)?;
    let row = wording::rule_row(rule);
    let mut paragraphs = vec![
        format!("{}.", sentence(&row.asks)),
        format!("Concerns: {}.", row.scope),
    ];
    paragraphs.extend(rest_of_rule(rule, pack));
    Some(Explanation {
        head: format!("{}: rule of {} ({})", rule.id, pack.pack, pack.title),
        paragraphs,
    })
}

fn rest_of_rule(rule: &Rule, pack: &Pack) -> Vec<String> {
    let mut lines = Vec::new();
    if let Some(floor) = rule.floor {
        lines.push(format!("Under a derogation: {floor} {}.", rule.unit));
    }
    if !rule.derogations.is_empty() {
        lines.push(format!(
            "Derogations it knows: {}.",
            rule.derogations.join(", ")
        ));
    }
    if let Some(needs) = crate::assessment::rules::needs(rule) {
        lines.push(format!("Not judged by this version: {needs}."));
    }
    lines.push(format!("Source: {}; {}.", rule.citation(), rule.source));
    lines.push(format!("Read it so: {}.", pack.reading));
    lines
}

fn rule_pack(code: &str) -> Option<Explanation> {
    let pack = pack::named(&[code]).ok()?.into_iter().next()?;
    let mut paragraphs = vec![
        format!("{}. As seen: {}.", sentence(&pack.reading), pack.as_seen),
        format!(
            "A duty counts as a night duty with at least {} h between {} and {} ({}; {}).",
            pack.night.at_least_h,
            pack.night.from,
            pack.night.to,
            pack.night.source,
            pack.night.tier
        ),
    ];
    paragraphs.extend(
        pack.rules
            .iter()
            .map(|rule| format!("{}: {}.", rule.id, wording::rule_row(rule).asks)),
    );
    if !pack.left_out.is_empty() {
        paragraphs.push(format!(
            "Rules of the same documents that this version does not measure: {}.",
            pack.left_out.join(", ")
        ));
    }
    Some(Explanation {
        head: format!("{}: {}", pack.pack, pack.title),
        paragraphs,
    })
}

/// The text with a capital at its head.
fn sentence(text: &str) -> String {
    let mut letters = text.chars();
    match letters.next() {
        Some(first) => first.to_uppercase().chain(letters).collect(),
        None => String::new(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_code_that_can_be_printed_is_explained() {
        let codes = codes();
        assert!(codes.len() > 100, "only {} codes", codes.len());
        for code in codes {
            let explanation = explain(&code).unwrap_or_else(|| panic!("{code} is not explained"));
            assert!(!explanation.paragraphs.is_empty(), "{code}");
        }
    }
}
