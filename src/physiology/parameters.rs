//! Parameter sets: which numbers of which publication are used, and how is each known?
//!
//! One TOML file per publication, embedded in the program.
//! Unknown keys are refused, so a set is always whole; numbers of two publications are never mixed.

use crate::units::Sourced;
use serde::Deserialize;

macro_rules! parameter_set {
    ($(#[$about:meta])* $set:ident { $($(#[$section_about:meta])* $section:ident: $type:ident { $($key:ident),* $(,)? })* }) => {
        $(#[$about])*
        #[derive(Debug, Clone, PartialEq, Deserialize)]
        #[serde(deny_unknown_fields)]
        pub struct $set {
            /// Name of the set.
            pub name: String,
            /// Where the model was published.
            pub publication: String,
            $($(#[$section_about])* pub $section: $type,)*
        }

        impl $set {
            /// Every number of the set with the key under which it stands.
            pub fn listed(&self) -> Vec<(String, &Sourced)> {
                vec![$($((
                    concat!(stringify!($section), ".", stringify!($key)).to_owned(),
                    &self.$section.$key,
                ),)*)*]
            }
        }

        $(
            $(#[$section_about])*
            #[derive(Debug, Clone, PartialEq, Deserialize)]
            #[serde(deny_unknown_fields)]
            #[expect(missing_docs, reason = "each number bears its unit and source in the file")]
            pub struct $type { $(pub $key: Sourced,)* }
        )*
    };
}

parameter_set! {
    /// `hilaire2007`: pacemaker driven by light and by sleep and waking.
    PacemakerSet {
        /// Light to drive.
        process_l: ProcessL { alpha0, beta, gain, exponent, i0, i1 }
        /// The oscillator.
        process_p: ProcessP { mu, q, k, f }
        /// Drive of sleep and waking.
        non_photic: NonPhotic { rho, awake_share, steepness }
        /// Where phase is read.
        marker: Marker { angle, cbtmin_offset, dlmo_before_cbtmin, melatonin_duration }
        /// State at the first habitual midnight.
        start: PacemakerStart { x, xc, n, habitual_days }
    }
}

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
    /// `ensemble`: spread of the simulated people.
    EnsembleSet {
        /// Intrinsic period.
        period: Period { mean, sd }
        /// Light sensitivity.
        sensitivity: Sensitivity { log10_sd }
        /// Habitual sleep.
        habit: HabitSpread { bed, need, mid_sleep_sd, need_sd }
        /// Commute.
        commute: CommuteSpread { ln_sd }
        /// Clipping of the normal deviates.
        clipping: Clipping { sd_units, need_sd_units }
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
    /// The sets embedded in the program.
    ///
    /// # Panics
    ///
    /// Never in a built program: a test reads every file.
    pub fn embedded() -> Self {
        const REASON: &str = "embedded parameter sets are read by a test";
        Self {
            pacemaker: toml::from_str(include_str!("parameters/hilaire2007.toml")).expect(REASON),
            sleep: toml::from_str(include_str!("parameters/two-process.toml")).expect(REASON),
            light: toml::from_str(include_str!("parameters/light.toml")).expect(REASON),
            cascade: toml::from_str(include_str!("parameters/hpa-cascade.toml")).expect(REASON),
            ensemble: toml::from_str(include_str!("parameters/ensemble.toml")).expect(REASON),
        }
    }

    /// Every number in use: set, key, value with unit and source.
    pub fn listed(&self) -> Vec<(String, String, &Sourced)> {
        let sets = [
            (&self.pacemaker.name, self.pacemaker.listed()),
            (&self.sleep.name, self.sleep.listed()),
            (&self.light.name, self.light.listed()),
            (&self.cascade.name, self.cascade.listed()),
            (&self.ensemble.name, self.ensemble.listed()),
        ];
        sets.into_iter()
            .flat_map(|(set, list)| {
                list.into_iter()
                    .map(|(key, number)| (set.clone(), key, number))
            })
            .collect()
    }

    /// Publications behind the sets, in order of use.
    pub fn publications(&self) -> Vec<(&str, &str)> {
        vec![
            (&self.pacemaker.name, &self.pacemaker.publication),
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
    fn every_number_has_a_unit_and_a_source() {
        let sets = ModelSets::embedded();
        let list = sets.listed();
        assert!(list.len() > 60, "only {} numbers are listed", list.len());
        for (set, key, number) in list {
            assert!(!number.unit.is_empty(), "{set} {key} has no unit");
            assert!(!number.source.is_empty(), "{set} {key} has no source");
        }
    }
}
