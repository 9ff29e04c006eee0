//! Parameter sets: which numbers of which publication are used, and how is each known?
//!
//! One TOML file per publication, embedded in the program.
//! Unknown keys are refused, so a set is always whole; numbers of two publications are never mixed.

#[macro_use]
mod set_macros;
mod bounds;
pub mod pacemaker_sets;

pub use pacemaker_sets::{
    ForgerSet, HannaySet, HilaireSet, JewettSet, PacemakerName, PacemakerReading, PacemakerSet,
};

use crate::units::Sourced;
use serde::Deserialize;

const READ_BY_A_TEST: &str = "embedded parameter sets are read by a test";

parameter_set! {
    /// `two-process`: sleep regulation.
    SleepSet {
        /// Process S.
        homeostat: Homeostat { tau_rise, tau_fall }
        /// Process C.
        process_c: ProcessC { amplitude, sine1, sine2, sine3, sine4, sine5, after_mid_sleep }
        /// Effort to sleep before an alarm.
        effort: Effort { lowering, share_at_stake, shortest_sleep }
    }
}

parameter_set! {
    /// `light`: lux at the eye by scene.
    LightSet {
        /// Scenes.
        scene: Scene { asleep, home_day, home_evening, work, commute_day, commute_dark, morning_kept_out }
        /// From task to eye.
        eye: Eye { factor }
        /// On the way to and from work.
        way: Way { share, sunglasses }
    }
}

parameter_set! {
    /// `hpa-cascade`: CRH, ACTH and total serum cortisol.
    CascadeSet {
        /// Rate constants and feedback.
        rates: Rates { k0, k1, feedback_crh, feedback_acth, half_life_crh, half_life_acth, half_life_cortisol, feedback_cortisol, acth_at_equilibrium }
        /// Circadian drive.
        drive: Drive { scale, offset, rise_at, rise_power, fall_at, fall_power, floor }
        /// Sleep gate.
        gate: Gate { strength, full_for, release, biological_night, fades_to, returns_from, returns_to }
        /// Waking pulse.
        waking: Waking { pulse, duration, best_phase }
        /// Evening sleep-debt term.
        debt: Debt { saturation, scale, from_phase, to_phase }
        /// Quiescent interval.
        quiescence: Quiescence { share_of_mean }
        /// State some days before the roster.
        start: CascadeStart { crh, acth, cortisol }
    }
}

parameter_set! {
    /// `cortisol-binding`: free and salivary cortisol.
    BindingSet {
        /// Binding to proteins.
        binding: BindingNumbers { cbg, constant, slope, product }
        /// From free serum cortisol to saliva.
        saliva: Saliva { share_of_free }
    }
}

impl BindingSet {
    /// The set embedded in the program.
    ///
    /// # Panics
    ///
    /// Never in a built program: a test reads every file.
    pub fn embedded() -> Self {
        toml::from_str(include_str!("parameters/cortisol-binding.toml")).expect(READ_BY_A_TEST)
    }
}

parameter_set! {
    /// `sample-band`: from the modelled group mean to one measured value of one person.
    SampleBandSet {
        /// Serum.
        serum: Variation { between, within }
        /// Saliva.
        saliva: SalivaVariation { between, within }
        /// Close to waking.
        waking: NearWaking { further, lasts }
        /// Where a day worker's morning sample stands.
        timing: SampleTiming { from, to, inside, outside }
        /// When a sample is comparable with a day worker's.
        comparable: Comparable { awake_from, awake_to, main_sleep, no_night, history_from, history_to }
    }
}

impl SampleBandSet {
    /// The set embedded in the program.
    ///
    /// # Panics
    ///
    /// Never in a built program: a test reads every file.
    pub fn embedded() -> Self {
        toml::from_str(include_str!("parameters/sample-band.toml")).expect(READ_BY_A_TEST)
    }
}

parameter_set! {
    /// `ensemble`: spread of the simulated people.
    EnsembleSet {
        /// Intrinsic period.
        period: Period { mean, sd }
        /// Light sensitivity.
        sensitivity: Sensitivity { log10_sd }
        /// Habitual sleep.
        habit: HabitSpread { bed, need, mid_sleep_sd, need_sd, residual_sd }
        /// Morningness-eveningness score to phase.
        meq: MeqScale { neither, slope }
        /// Commute.
        commute: CommuteSpread { ln_sd }
        /// Clipping of the normal deviates.
        clipping: Clipping { sd_units, need_sd_units }
    }
}

/// Sets that come with the program beside those in use.
const ALTERNATIVES: [(&str, &str); 1] = [(
    "hpa-cascade-measured",
    include_str!("parameters/hpa-cascade-measured.toml"),
)];

/// The name of a set, whatever else it holds.
#[derive(Debug, Deserialize)]
struct Named {
    name: String,
}

fn whole<T: serde::de::DeserializeOwned>(text: &str) -> Result<T, ParameterError> {
    toml::from_str(text).map_err(|error| ParameterError::unreadable(&error))
}

/// A set of parameters cannot be used.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum ParameterError {
    /// Not TOML, not whole, or with an unknown key.
    #[error("the parameters cannot be read: {0}")]
    Unreadable(String),
    /// No set of that name is in use.
    #[error(
        "no set named \"{0}\" is in use; a file replaces hpa-cascade, two-process, light, ensemble or the pacemaker that is chosen, and hpa-cascade-measured comes with the program"
    )]
    Unknown(String),
    /// A number is out of range.
    #[error("{key} must lie in {low} to {high}, found {found}")]
    OutOfRange {
        /// Set and key.
        key: String,
        /// Lowest value.
        low: f64,
        /// Highest value.
        high: f64,
        /// What was found.
        found: f64,
    },
}

impl ParameterError {
    fn unreadable(error: &toml::de::Error) -> Self {
        Self::Unreadable(error.to_string())
    }
}

/// The parameter sets of one run.
#[derive(Debug, Clone, PartialEq)]
pub struct ModelSets {
    /// Pacemaker.
    pub pacemaker: PacemakerSet,
    /// Sleep.
    pub sleep: SleepSet,
    /// Light.
    pub light: LightSet,
    /// Cortisol.
    pub cascade: CascadeSet,
    /// Spread of people.
    pub ensemble: EnsembleSet,
}

impl ModelSets {
    /// The sets embedded in the program, with the default pacemaker.
    pub fn embedded() -> Self {
        Self::with_pacemaker(PacemakerName::Hilaire2007)
    }

    /// The sets embedded in the program, with a pacemaker of one's choice.
    ///
    /// # Panics
    ///
    /// Never in a built program: a test reads every file.
    pub fn with_pacemaker(name: PacemakerName) -> Self {
        Self {
            pacemaker: PacemakerSet::embedded(name),
            sleep: toml::from_str(include_str!("parameters/two-process.toml"))
                .expect(READ_BY_A_TEST),
            light: toml::from_str(include_str!("parameters/light.toml")).expect(READ_BY_A_TEST),
            cascade: toml::from_str(include_str!("parameters/hpa-cascade.toml"))
                .expect(READ_BY_A_TEST),
            ensemble: toml::from_str(include_str!("parameters/ensemble.toml"))
                .expect(READ_BY_A_TEST),
        }
    }

    /// The same sets with another pacemaker.
    #[must_use]
    pub fn on(&self, name: PacemakerName) -> Self {
        Self {
            pacemaker: PacemakerSet::embedded(name),
            ..self.clone()
        }
    }

    /// Replaces one set by that of a file: the set whose name begins its `name`, or a pacemaker's own.
    ///
    /// `name_or_text` is the name of a set that comes with the program (`hpa-cascade-measured`) or the text of a file.
    ///
    /// # Errors
    ///
    /// [`ParameterError`] when the text is no whole set, or a number cannot be.
    ///
    /// # Example
    ///
    /// ```
    /// use acroshift::physiology::ModelSets;
    /// let mut sets = ModelSets::embedded();
    /// sets.replace("hpa-cascade-measured")?;
    /// assert_eq!(sets.cascade.name, "hpa-cascade-measured");
    /// assert!(sets.replace("name = \"two-process\"").is_err());
    /// # Ok::<(), acroshift::physiology::parameters::ParameterError>(())
    /// ```
    pub fn replace(&mut self, name_or_text: &str) -> Result<(), ParameterError> {
        let text = ALTERNATIVES
            .iter()
            .find(|(name, _)| *name == name_or_text)
            .map_or(name_or_text, |(_, text)| text);
        // What has no key is the name of a set, and of none that is known.
        if !text.contains('=') {
            return Err(ParameterError::Unknown(text.trim().to_owned()));
        }
        let named: Named =
            toml::from_str(text).map_err(|error| ParameterError::unreadable(&error))?;
        let own = self.pacemaker.name_and_publication().0.to_owned();
        match named.name.as_str() {
            name if name.starts_with("hpa-cascade") => self.cascade = whole(text)?,
            name if name.starts_with("two-process") => self.sleep = whole(text)?,
            name if name.starts_with("light") => self.light = whole(text)?,
            name if name.starts_with("ensemble") => self.ensemble = whole(text)?,
            name if name == own => self.pacemaker.replace(text)?,
            _ => return Err(ParameterError::Unknown(named.name)),
        }
        self.check()
    }

    /// Every number in use: set, key, value with unit and source.
    pub fn listed(&self) -> Vec<(String, String, &Sourced)> {
        let sets = [
            (
                self.pacemaker.name_and_publication().0,
                self.pacemaker.listed(),
            ),
            (self.sleep.name.as_str(), self.sleep.listed()),
            (&self.light.name, self.light.listed()),
            (&self.cascade.name, self.cascade.listed()),
            (&self.ensemble.name, self.ensemble.listed()),
        ];
        sets.into_iter()
            .flat_map(|(set, list)| {
                list.into_iter()
                    .map(|(key, number)| (set.to_owned(), key, number))
            })
            .collect()
    }

    /// Publications behind the sets, in order of use.
    pub fn publications(&self) -> Vec<(&str, &str)> {
        vec![
            self.pacemaker.name_and_publication(),
            (&self.sleep.name, &self.sleep.publication),
            (&self.light.name, &self.light.publication),
            (&self.cascade.name, &self.cascade.publication),
            (&self.ensemble.name, &self.ensemble.publication),
        ]
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_set_of_a_file_replaces_that_of_the_program() {
        let mut sets = ModelSets::embedded();
        let ensemble = include_str!("parameters/ensemble.toml");
        let longer = ensemble.replace("value = 24.15", "value = 24.3");
        sets.replace(&longer).unwrap();
        assert!((sets.ensemble.period.mean.value - 24.3).abs() < 1e-12);
        for (wrong, told) in [
            (
                ensemble.replace("value = 24.15", "value = 26.0"),
                "23 to 25.5",
            ),
            (
                ensemble.replace("value = 24.15", "value = nan"),
                "period.mean",
            ),
            (ensemble.replace("[commute]", "[comute]"), "comute"),
            (
                ensemble.replace("name = \"ensemble\"", "name = \"people\""),
                "people",
            ),
            ("name = 5".to_owned(), "cannot be read"),
        ] {
            let error = ModelSets::embedded()
                .replace(&wrong)
                .unwrap_err()
                .to_string();
            assert!(error.contains(told), "{error}");
        }
    }

    #[test]
    fn every_number_has_a_unit_and_a_source() {
        for name in PacemakerName::ALL {
            let sets = ModelSets::with_pacemaker(name);
            let list = sets.listed();
            assert!(list.len() > 60, "only {} numbers are listed", list.len());
            assert_eq!(BindingSet::embedded().listed().len(), 5);
            assert_eq!(SampleBandSet::embedded().listed().len(), 16);
            for (set, key, number) in list {
                assert!(!number.unit.is_empty(), "{set} {key} has no unit");
                assert!(!number.source.is_empty(), "{set} {key} has no source");
            }
        }
    }
}
