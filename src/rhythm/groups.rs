//! Subjects put together by specimen and group, and groups of one specimen held against each other.

use super::populations::{Comparison, Population, Vector, compare, population};
use super::subjects::SubjectRhythm;
use std::collections::{BTreeMap, BTreeSet};

/// The population of one specimen and group.
#[derive(Debug, Clone, PartialEq)]
pub struct GroupPopulation {
    /// Matrix and assay in words.
    pub specimen: String,
    /// Group, where the table names any.
    pub group: Option<String>,
    /// Its subjects together.
    pub population: Population,
}

/// Groups of one specimen side by side.
#[derive(Debug, Clone, PartialEq)]
pub struct GroupComparison {
    /// Matrix and assay in words.
    pub specimen: String,
    /// The groups that are compared.
    pub groups: Vec<String>,
    /// The tests, or why there are none.
    pub tests: Result<Comparison, NotCompared>,
}

/// Why groups are not compared.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[non_exhaustive]
pub enum NotCompared {
    /// The tests are those of independent groups.
    #[error(
        "subject {0:?} stands in two groups; the tests hold for groups of different subjects only"
    )]
    SharedSubject(String),
    /// Too few subjects.
    #[error("a group has fewer than {fewest} subjects with a fit")]
    FewSubjects {
        /// Fewest of a group.
        fewest: usize,
    },
}

/// Specimen and group.
type Key<'a> = (&'a str, Option<&'a str>);

fn vectors(subjects: &[SubjectRhythm]) -> BTreeMap<Key<'_>, Vec<Vector>> {
    let mut vectors: BTreeMap<Key<'_>, Vec<Vector>> = BTreeMap::new();
    for subject in subjects {
        if let Ok(cosinor) = &subject.cosinor {
            let key = (&subject.specimen[..], subject.group.as_deref());
            vectors.entry(key).or_default().push(Vector {
                mesor: cosinor.mesor,
                beta: cosinor.components[0].beta,
                gamma: cosinor.components[0].gamma,
            });
        }
    }
    vectors
}

/// Populations of the first period, one for every specimen and group with enough subjects.
pub fn populations(subjects: &[SubjectRhythm], level: f64) -> Vec<GroupPopulation> {
    vectors(subjects)
        .into_iter()
        .filter_map(|((specimen, group), vectors)| {
            Some(GroupPopulation {
                specimen: specimen.to_owned(),
                group: group.map(str::to_owned),
                population: population(&vectors, level)?,
            })
        })
        .collect()
}

/// Named groups of one specimen held against each other; nothing where a specimen has fewer than two.
pub fn comparisons(
    subjects: &[SubjectRhythm],
    populations: &[GroupPopulation],
) -> Vec<GroupComparison> {
    let mut named: BTreeMap<&str, BTreeSet<&str>> = BTreeMap::new();
    for subject in subjects {
        if let Some(group) = &subject.group {
            named.entry(&subject.specimen).or_default().insert(group);
        }
    }
    named
        .into_iter()
        .filter(|(_, groups)| groups.len() > 1)
        .map(|(specimen, groups)| GroupComparison {
            specimen: specimen.to_owned(),
            tests: tests(specimen, groups.len(), subjects, populations),
            groups: groups.into_iter().map(str::to_owned).collect(),
        })
        .collect()
}

fn tests(
    specimen: &str,
    groups: usize,
    subjects: &[SubjectRhythm],
    populations: &[GroupPopulation],
) -> Result<Comparison, NotCompared> {
    let mut group_of: BTreeMap<&str, &str> = BTreeMap::new();
    for subject in subjects.iter().filter(|s| s.specimen == specimen) {
        let Some(group) = &subject.group else {
            continue;
        };
        let before = group_of.insert(&subject.subject, group);
        if before.is_some_and(|before| before != group) {
            return Err(NotCompared::SharedSubject(subject.subject.clone()));
        }
    }
    let of: Vec<Population> = populations
        .iter()
        .filter(|of| of.specimen == specimen && of.group.is_some())
        .map(|of| of.population.clone())
        .collect();
    compare(&of)
        .filter(|_| of.len() == groups)
        .ok_or(NotCompared::FewSubjects {
            fewest: super::populations::FEWEST_SUBJECTS,
        })
}
