//! Parameter sets: which numbers of which publication are used, and how is each known?
//!
//! One TOML file per publication, embedded in the program.
//! Unknown keys are refused, so a set is always whole; numbers of two publications are never mixed.

use crate::units::Sourced;
use serde::Deserialize;

macro_rules! parameter_set {
    ($(#[$about:meta])* $set:ident $(with $($shared:ident: $shared_type:ident),+)? { $($(#[$section_about:meta])* $section:ident: $type:ident { $($key:ident),* $(,)? })* }) => {
        $(#[$about])*
        #[derive(Debug, Clone, PartialEq, Deserialize)]
        #[serde(deny_unknown_fields)]
        pub struct $set {
            /// Name of the set.
            pub name: String,
            /// Where the model was published.
            pub publication: String,
            $($(#[$section_about])* pub $section: $type,)*
            $($(#[doc = "As in every set of its family."] pub $shared: $shared_type,)+)?
        }

        impl $set {
            /// Every number of the set with the key under which it stands.
            pub fn listed(&self) -> Vec<(String, &Sourced)> {
                let own = vec![$($((
                    concat!(stringify!($section), ".", stringify!($key)).to_owned(),
                    &self.$section.$key,
                ),)*)*];
                own.into_iter()
                    $($(.chain(self.$shared.listed(stringify!($shared))))+)?
                    .collect()
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

macro_rules! shared_section {
    ($(#[$about:meta])* $type:ident { $($key:ident),* $(,)? }) => {
        $(#[$about])*
        #[derive(Debug, Clone, PartialEq, Deserialize)]
        #[serde(deny_unknown_fields)]
        #[expect(missing_docs, reason = "each number bears its unit and source in the file")]
        pub struct $type { $(pub $key: Sourced,)* }

        impl $type {
            fn listed(&self, section: &str) -> Vec<(String, &Sourced)> {
                vec![$((format!("{section}.{}", stringify!($key)), &self.$key),)*]
            }
        }
    };
}

shared_section! {
    /// Where phase is read.
    PacemakerMarker { angle, cbtmin_offset, dlmo_before_cbtmin, melatonin_duration, amplitude_floor }
}

shared_section! {
    /// State at the first habitual midnight.
    HabitualStart { first, second, n, habitual_days }
}

parameter_set! {
    /// `forger1999`: pacemaker driven by light, simpler model.
    ForgerSet with marker: PacemakerMarker, start: HabitualStart {
        /// Light to drive.
        process_l: ForgerLight { alpha0, beta, gain, exponent, i0 }
        /// The oscillator.
        process_p: ForgerOscillator { mu, k, f }
    }
}

parameter_set! {
    /// `jewett1999`: pacemaker driven by light, revised limit cycle.
    JewettSet with marker: PacemakerMarker, start: HabitualStart {
        /// Light to drive.
        process_l: JewettLight { alpha0, beta, gain, exponent, i0 }
        /// The oscillator.
        process_p: JewettOscillator { mu, q, k, f }
    }
}

parameter_set! {
    /// `hilaire2007`: pacemaker driven by light and by sleep and waking.
    HilaireSet with marker: PacemakerMarker, start: HabitualStart {
        /// Light to drive.
        process_l: HilaireLight { alpha0, beta, gain, exponent, i0, i1 }
        /// The oscillator.
        process_p: HilaireOscillator { mu, q, k, f }
        /// Drive of sleep and waking.
        non_photic: HilaireArousal { rho, awake_share, steepness }
    }
}

parameter_set! {
    /// `hannay2019`: macroscopic pacemaker, single population.
    HannaySet with marker: PacemakerMarker, start: HabitualStart {
        /// Light to drive.
        process_l: HannayLight { alpha0, beta, gain, exponent, i0 }
        /// The oscillator.
        oscillator: HannayOscillator { coupling, gamma, beta1, a1, a2, beta_l1, beta_l2, sigma }
    }
}

/// A pacemaker by the publication it comes from.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum PacemakerName {
    /// Light and sleep-wake drive; the default.
    Hilaire2007,
    /// Light drive, simpler model.
    Forger1999,
    /// Light drive, revised limit cycle.
    Jewett1999,
    /// Light drive, macroscopic; its clock times stand early.
    Hannay2019,
}

impl PacemakerName {
    /// Every pacemaker, the default first.
    pub const ALL: [Self; 4] = [
        Self::Hilaire2007,
        Self::Forger1999,
        Self::Jewett1999,
        Self::Hannay2019,
    ];

    /// Its name in files and options.
    pub fn word(self) -> &'static str {
        match self {
            Self::Hilaire2007 => "hilaire2007",
            Self::Forger1999 => "forger1999",
            Self::Jewett1999 => "jewett1999",
            Self::Hannay2019 => "hannay2019",
        }
    }
}

/// The whole parameter set of one pacemaker.
#[derive(Debug, Clone, PartialEq)]
pub enum PacemakerSet {
    /// `hilaire2007`.
    Hilaire(HilaireSet),
    /// `forger1999`.
    Forger(ForgerSet),
    /// `jewett1999`.
    Jewett(JewettSet),
    /// `hannay2019`.
    Hannay(HannaySet),
}

/// Where phase is read and where habitual days begin, whatever the model.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PacemakerReading {
    /// Polar angle of the marker, radians.
    pub angle_rad: f64,
    /// `CBTmin` after the marker, minutes.
    pub cbtmin_offset_min: f64,
    /// DLMO before `CBTmin`, minutes.
    pub dlmo_before_cbtmin_min: f64,
    /// From DLMO to melatonin offset, minutes.
    pub melatonin_duration_min: f64,
    /// Share of the habitual amplitude below which phase is ill-defined.
    pub amplitude_floor: f64,
    /// First two state variables and `n` at the first habitual midnight.
    pub start: [f64; 3],
    /// Habitual days lived before the roster.
    pub habitual_days: f64,
}

impl PacemakerReading {
    fn new(marker: &PacemakerMarker, start: &HabitualStart) -> Self {
        Self {
            angle_rad: marker.angle.value.to_radians(),
            cbtmin_offset_min: marker.cbtmin_offset.value * 60.0,
            dlmo_before_cbtmin_min: marker.dlmo_before_cbtmin.value * 60.0,
            melatonin_duration_min: marker.melatonin_duration.value * 60.0,
            amplitude_floor: marker.amplitude_floor.value,
            start: [start.first.value, start.second.value, start.n.value],
            habitual_days: start.habitual_days.value,
        }
    }
}

impl PacemakerSet {
    /// The embedded set of a pacemaker.
    ///
    /// # Panics
    ///
    /// Never in a built program: a test reads every file.
    pub fn embedded(name: PacemakerName) -> Self {
        match name {
            PacemakerName::Hilaire2007 => Self::Hilaire(
                toml::from_str(include_str!("parameters/hilaire2007.toml")).expect(READ_BY_A_TEST),
            ),
            PacemakerName::Forger1999 => Self::Forger(
                toml::from_str(include_str!("parameters/forger1999.toml")).expect(READ_BY_A_TEST),
            ),
            PacemakerName::Jewett1999 => Self::Jewett(
                toml::from_str(include_str!("parameters/jewett1999.toml")).expect(READ_BY_A_TEST),
            ),
            PacemakerName::Hannay2019 => Self::Hannay(
                toml::from_str(include_str!("parameters/hannay2019.toml")).expect(READ_BY_A_TEST),
            ),
        }
    }

    /// Replaces the numbers by those of a file of the same model.
    fn replace(&mut self, text: &str) -> Result<(), ParameterError> {
        match self {
            Self::Hilaire(set) => *set = whole(text)?,
            Self::Forger(set) => *set = whole(text)?,
            Self::Jewett(set) => *set = whole(text)?,
            Self::Hannay(set) => *set = whole(text)?,
        }
        Ok(())
    }

    /// Where phase is read and where habitual days begin.
    pub fn reading(&self) -> PacemakerReading {
        match self {
            Self::Hilaire(set) => PacemakerReading::new(&set.marker, &set.start),
            Self::Forger(set) => PacemakerReading::new(&set.marker, &set.start),
            Self::Jewett(set) => PacemakerReading::new(&set.marker, &set.start),
            Self::Hannay(set) => PacemakerReading::new(&set.marker, &set.start),
        }
    }

    /// Name of the set and its publication.
    pub fn name_and_publication(&self) -> (&str, &str) {
        match self {
            Self::Hilaire(set) => (&set.name, &set.publication),
            Self::Forger(set) => (&set.name, &set.publication),
            Self::Jewett(set) => (&set.name, &set.publication),
            Self::Hannay(set) => (&set.name, &set.publication),
        }
    }

    /// Every number of the set with the key under which it stands.
    pub fn listed(&self) -> Vec<(String, &Sourced)> {
        match self {
            Self::Hilaire(set) => set.listed(),
            Self::Forger(set) => set.listed(),
            Self::Jewett(set) => set.listed(),
            Self::Hannay(set) => set.listed(),
        }
    }
}

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

    /// Numbers that would make nonsense of every result are refused.
    fn check(&self) -> Result<(), ParameterError> {
        if let Some((set, key, number)) = self
            .listed()
            .into_iter()
            .find(|(_, _, number)| !number.value.is_finite())
        {
            return Err(ParameterError::OutOfRange {
                key: format!("{set} {key}"),
                low: f64::MIN,
                high: f64::MAX,
                found: number.value,
            });
        }
        let days = self.pacemaker.reading().habitual_days;
        within("start.habitual_days", days, (10.0, 1000.0))?;
        for (key, number, bounds) in self.bounded() {
            within(key, number.value, bounds)?;
        }
        Ok(())
    }

    /// Numbers with the bounds within which the equations keep their sense. This program's choice, no source.
    fn bounded(&self) -> Vec<(&'static str, &Sourced, (f64, f64))> {
        let (scene, sleep, people) = (&self.light.scene, &self.sleep, &self.ensemble);
        let rates = &self.cascade.rates;
        let lux = (0.0, 200_000.0);
        let minutes = (0.5, 1000.0);
        vec![
            (
                "two-process homeostat.tau_rise",
                &sleep.homeostat.tau_rise,
                (1.0, 100.0),
            ),
            (
                "two-process homeostat.tau_fall",
                &sleep.homeostat.tau_fall,
                (0.5, 50.0),
            ),
            (
                "two-process effort.share_at_stake",
                &sleep.effort.share_at_stake,
                (0.05, 1.0),
            ),
            (
                "two-process effort.shortest_sleep",
                &sleep.effort.shortest_sleep,
                (0.05, 4.0),
            ),
            ("ensemble period.sd", &people.period.sd, (0.0, 1.0)),
            (
                "ensemble habit.mid_sleep_sd",
                &people.habit.mid_sleep_sd,
                (0.0, 6.0),
            ),
            ("ensemble habit.need_sd", &people.habit.need_sd, (0.0, 2.0)),
            (
                "ensemble clipping.sd_units",
                &people.clipping.sd_units,
                (0.0, 5.0),
            ),
            (
                "ensemble clipping.need_sd_units",
                &people.clipping.need_sd_units,
                (0.0, 5.0),
            ),
            (
                "hpa-cascade rates.half_life_crh",
                &rates.half_life_crh,
                minutes,
            ),
            (
                "hpa-cascade rates.half_life_acth",
                &rates.half_life_acth,
                minutes,
            ),
            (
                "hpa-cascade rates.half_life_cortisol",
                &rates.half_life_cortisol,
                minutes,
            ),
            ("ensemble period.mean", &people.period.mean, (23.0, 25.5)),
            ("ensemble habit.need", &people.habit.need, (4.0, 12.0)),
            ("light scene.home_day", &scene.home_day, lux),
            ("light scene.home_evening", &scene.home_evening, lux),
            ("light scene.work", &scene.work, lux),
            ("light scene.commute_day", &scene.commute_day, lux),
            ("light scene.commute_dark", &scene.commute_dark, lux),
            ("light eye.factor", &self.light.eye.factor, (0.0, 1.0)),
        ]
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

/// A number within its bounds, or the error that names them.
fn within(key: &str, found: f64, (low, high): (f64, f64)) -> Result<(), ParameterError> {
    if (low..=high).contains(&found) {
        return Ok(());
    }
    Err(ParameterError::OutOfRange {
        key: key.to_owned(),
        low,
        high,
        found,
    })
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
        for name in [
            PacemakerName::Hilaire2007,
            PacemakerName::Forger1999,
            PacemakerName::Jewett1999,
            PacemakerName::Hannay2019,
        ] {
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
