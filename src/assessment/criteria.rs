//! Limits of the recovery windows and of the register measures, each with its source.

use crate::units::Sourced;
use serde::Deserialize;

macro_rules! criteria {
    ($($(#[$about:meta])* $section:ident: $type:ident { $($key:ident),* $(,)? })*) => {
        /// The criteria of a run.
        #[derive(Debug, Clone, PartialEq, Deserialize)]
        #[serde(deny_unknown_fields)]
        pub struct Criteria { $($(#[$about])* pub $section: $type,)* }

        impl Criteria {
            /// Every criterion with the key under which it stands.
            pub fn listed(&self) -> Vec<(String, &Sourced)> {
                vec![$($((
                    concat!(stringify!($section), ".", stringify!($key)).to_owned(),
                    &self.$section.$key,
                ),)*)*]
            }
        }

        $(
            $(#[$about])*
            #[derive(Debug, Clone, PartialEq, Deserialize)]
            #[serde(deny_unknown_fields)]
            #[expect(missing_docs, reason = "each number bears its unit and source in the file")]
            pub struct $type { $(pub $key: Sourced,)* }
        )*
    };
}

criteria! {
    /// The gap itself.
    rest: RestCriteria { compressed_below, very_short_below, listed_above }
    /// Sleep before the next duty.
    sleep: SleepCriteria { short_24h_below, short_48h_below, short_from_share, uncertain_from_share, narrow_from_share }
    /// Hours awake on duty.
    awake: AwakeCriteria { long_from, from_share }
    /// Days that rest on an assumed history.
    history: HistoryCriteria { assumed_days, assumed_days_in_nights }
    /// Words for phase and cortisol.
    evidence: EvidenceCriteria { phase_displacement_over, cases_apart, quiescent_tolerance }
    /// Register measures.
    register: RegisterCriteria {
        quick_return_below, long_shift_from, early_from, early_until, evening_from, evening_ends_after,
        run_ends_with_gap, local_night_from, local_night_to, local_night_h,
    }
}

impl Criteria {
    /// The criteria embedded in the program.
    ///
    /// # Panics
    ///
    /// Never in a built program: a test reads the file.
    pub fn embedded() -> Self {
        toml::from_str(include_str!("criteria.toml")).expect("the embedded file is read by a test")
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_criterion_has_a_unit_and_a_source() {
        let criteria = Criteria::embedded();
        assert!(criteria.listed().len() > 20);
        for (key, number) in criteria.listed() {
            assert!(
                !number.unit.is_empty() && !number.source.is_empty(),
                "{key}"
            );
        }
    }
}
