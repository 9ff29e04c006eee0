//! Circadian pacemakers: how does the clock move under light, sleep and waking?
//!
//! Four published models, each with its own whole parameter set; the state is always three numbers a member:
//! `x`, `xc`, `n` for the oscillators of van der Pol type, `R`, `psi`, `n` for the macroscopic one.
//! The members of a unit are the lanes: one formula, no branch on data, no library function inside the loop over lanes.
#![expect(
    clippy::inline_always,
    reason = "the loop over lanes is compiled for several instruction sets; what it calls must be inlined"
)]

mod drive;
mod hannay;
mod kernel;
mod marker;
mod van_der_pol;

pub use drive::UnitDrive;
pub use kernel::{Moved, PacemakerState, Passing};
pub use marker::MarkerReader;

use super::parameters::{PacemakerReading, PacemakerSet};
use crate::numeric::instruction_set::InstructionSet;
use drive::{LightLaw, LightNumbers, Saturation};
use hannay::Hannay;
use kernel::Advance;
use van_der_pol::{Arousal, Form, Revised, Simple, VanDerPol};

/// Members simulated side by side.
pub const LANES: usize = 16;

/// Longest step of the integration, minutes: the phase error against an adaptive solver stays below 0.01 min over 80 days up to 10 000 lux.
pub const LONGEST_STEP_MIN: i64 = 6;
/// Lengths of step for which the photoreceptors are prepared: 1 to the longest, minutes.
const STEPS: usize = 6;

/// A pacemaker with the numbers of its set, ready for use.
#[derive(Debug, Clone, PartialEq)]
pub struct Pacemaker {
    model: Model,
    light: LightLaw,
    reading: PacemakerReading,
    instructions: InstructionSet,
    longest_step_min: i64,
}

#[derive(Debug, Clone, PartialEq)]
enum Model {
    VanDerPol(VanDerPol),
    Hannay(Hannay),
}

/// The light process of a set.
macro_rules! light_law {
    ($set:ident, $saturation:expr) => {
        LightLaw::new(
            &LightNumbers {
                alpha0: &$set.process_l.alpha0,
                beta: &$set.process_l.beta,
                gain: &$set.process_l.gain,
                exponent: &$set.process_l.exponent,
                i0: &$set.process_l.i0,
            },
            $saturation,
        )
    };
}

fn cosine_and_sine(angle_rad: f64) -> (f64, f64) {
    (libm::cos(angle_rad), libm::sin(angle_rad))
}

fn sine_and_cosine(angle_rad: f64) -> (f64, f64) {
    (libm::sin(angle_rad), libm::cos(angle_rad))
}

impl Pacemaker {
    /// The equations with the numbers of a parameter set, on the best instruction set of this machine.
    pub fn new(set: &PacemakerSet) -> Self {
        Self::on(InstructionSet::best(), set)
    }

    /// The same on an instruction set of one's choice; the results have the same bits on all.
    pub fn on(instructions: InstructionSet, set: &PacemakerSet) -> Self {
        let reading = set.reading();
        let (model, light) = match set {
            PacemakerSet::Hilaire(s) => (
                Model::VanDerPol(VanDerPol {
                    form: Form::Revised,
                    mu: s.process_p.mu.value,
                    q: s.process_p.q.value,
                    k: s.process_p.k.value,
                    f: s.process_p.f.value,
                    arousal: Arousal {
                        rho: s.non_photic.rho.value,
                        awake_share: s.non_photic.awake_share.value,
                        steepness: s.non_photic.steepness.value,
                    },
                    marker: cosine_and_sine(reading.angle_rad),
                }),
                light_law!(s, Saturation::Dim(s.process_l.i1.value)),
            ),
            PacemakerSet::Jewett(s) => (
                Model::VanDerPol(VanDerPol {
                    form: Form::Revised,
                    mu: s.process_p.mu.value,
                    q: s.process_p.q.value,
                    k: s.process_p.k.value,
                    f: s.process_p.f.value,
                    arousal: Arousal::default(),
                    marker: cosine_and_sine(reading.angle_rad),
                }),
                light_law!(s, Saturation::Open),
            ),
            PacemakerSet::Forger(s) => (
                Model::VanDerPol(VanDerPol {
                    form: Form::Simple,
                    mu: s.process_p.mu.value,
                    q: 0.0,
                    k: s.process_p.k.value,
                    f: s.process_p.f.value,
                    arousal: Arousal::default(),
                    marker: cosine_and_sine(reading.angle_rad),
                }),
                light_law!(s, Saturation::Open),
            ),
            PacemakerSet::Hannay(s) => (
                Model::Hannay(Hannay {
                    coupling: s.oscillator.coupling.value,
                    gamma: s.oscillator.gamma.value,
                    beta1: s.oscillator.beta1.value,
                    a1: s.oscillator.a1.value,
                    a2: s.oscillator.a2.value,
                    beta_l1: sine_and_cosine(s.oscillator.beta_l1.value),
                    beta_l2: sine_and_cosine(s.oscillator.beta_l2.value),
                    sigma: s.oscillator.sigma.value,
                    marker_rad: reading.angle_rad,
                }),
                light_law!(s, Saturation::Hill),
            ),
        };
        Self {
            model,
            light,
            reading,
            instructions,
            longest_step_min: LONGEST_STEP_MIN,
        }
    }

    /// The same pacemaker with a shorter longest step, minutes, at least 1; for convergence tests.
    #[must_use]
    pub fn with_longest_step(self, longest_step_min: i64) -> Self {
        Self {
            longest_step_min: longest_step_min.clamp(1, LONGEST_STEP_MIN),
            ..self
        }
    }

    /// The instruction set on which it runs.
    pub fn instructions(&self) -> InstructionSet {
        self.instructions
    }

    /// The state from which habitual days are lived.
    pub fn start(&self) -> PacemakerState {
        PacemakerState::everywhere(self.reading.start)
    }

    /// Activation rate of the photoreceptors.
    ///
    /// # Equation
    ///
    /// ```text
    /// alpha(I) = alpha0 (I / I0)^p                      forger1999, jewett1999
    /// alpha(I) = alpha0 (I / I0)^p I / (I + I1)         hilaire2007
    /// alpha(I) = alpha0 I^p / (I^p + I0)                hannay2019
    /// ```
    ///
    /// # Units
    ///
    /// `light_lux` photopic lux at the eye; result 1/min.
    ///
    /// # Range
    ///
    /// Darkness and anything below give 0.
    ///
    /// # Source
    ///
    /// As the parameter set of the model. In one public code of hilaire2007 the two constants are swapped; this is the form of the other.
    ///
    /// # Example
    ///
    /// ```
    /// use acroshift::physiology::{ModelSets, pacemaker::Pacemaker};
    /// let pacemaker = Pacemaker::new(&ModelSets::embedded().pacemaker);
    /// // 0.1 (9500/9500)^0.5 9500/9600
    /// assert!((pacemaker.alpha(9500.0) - 0.1 * 9500.0 / 9600.0).abs() < 1e-12);
    /// assert_eq!(pacemaker.alpha(0.0), 0.0);
    /// ```
    pub fn alpha(&self, light_lux: f64) -> f64 {
        self.light.alpha(light_lux)
    }

    /// Non-photic drive before its phase factor: `rho (1/3 - sigma)`, sigma = 1 asleep; 0 in models without one.
    pub fn arousal(&self, asleep: bool) -> f64 {
        match &self.model {
            Model::VanDerPol(model) => {
                let sigma = if asleep { 1.0 } else { 0.0 };
                model.arousal.rho * (model.arousal.awake_share - sigma)
            }
            Model::Hannay(_) => 0.0,
        }
    }

    /// The constant that gives a member its dark period: `(24 / (f tau))^2`, or the natural frequency in rad/h.
    pub fn pace(&self, tau_h: f64) -> f64 {
        match &self.model {
            Model::VanDerPol(model) => model.stiffness(tau_h),
            Model::Hannay(model) => model.frequency(tau_h),
        }
    }

    /// Moves a unit under constant light and sleep: classical Runge-Kutta in steps of at most [`LONGEST_STEP_MIN`], the photoreceptors exactly.
    ///
    /// Goes from the minute `from` for `minutes`, or to the end of the step in which the first member passes its marker.
    /// Steps end on whole multiples of their length, and where light or sleep change.
    ///
    /// # Equation
    ///
    /// ```text
    /// van der Pol type, B = G (1 - n) alpha (1 - 0.4 x)(1 - 0.4 xc), Ns = rho (1/3 - sigma)(1 - tanh 10 x):
    /// forger1999   dx/dt  = (pi/12) [ xc + B ]
    ///              dxc/dt = (pi/12) { mu (xc - 4 xc^3/3) - x [ (24/(f tau))^2 + k B ] }
    /// jewett1999, hilaire2007 (with Ns)
    ///              dx/dt  = (pi/12) [ xc + mu (x/3 + 4 x^3/3 - 256 x^7/105) + B + Ns ]
    ///              dxc/dt = (pi/12) { q B xc - x [ (24/(f tau))^2 + k B ] }
    /// hannay2019, B = G (1 - n) alpha:
    ///              dR/dt   = -gamma R + (K/2) cos(b1) R (1 - R^4) + (B/2) [ A1 (1 - R^4) cos(psi + b2) + A2 R (1 - R^8) cos(2 psi + b3) ]
    ///              dpsi/dt = omega0 + (K/2) sin(b1)(1 + R^4) + sigma B - (B/2) [ A1 (R^3 + 1/R) sin(psi + b2) + A2 (1 + R^8) sin(2 psi + b3) ]
    /// all          dn/dt = 60 [ alpha (1 - n) - beta n ]                      (rates per minute, time in hours)
    /// ```
    ///
    /// # Units
    ///
    /// `state` and `drive` hold one value per member; `pace` is that of [`Pacemaker::pace`].
    ///
    /// # Range
    ///
    /// Up to 10 000 lux the phase error is below 0.01 min against an adaptive solver over 80 days.
    ///
    /// # Source
    ///
    /// As the parameter set of the model. Deviations: none.
    ///
    /// # Example
    ///
    /// ```
    /// use acroshift::physiology::pacemaker::{LANES, Pacemaker, UnitDrive};
    /// use acroshift::physiology::ModelSets;
    /// let pacemaker = Pacemaker::new(&ModelSets::embedded().pacemaker);
    /// let mut state = pacemaker.start();
    /// let dark = UnitDrive::dark(&pacemaker);
    /// let pace = [pacemaker.pace(24.2); LANES];
    /// let moved = pacemaker.advance(&mut state, &dark, &pace, (0, 60));
    /// assert_eq!(moved.minutes, 60);
    /// // Photoreceptors recover in the dark: n = 0.3 exp(-60 * 0.007).
    /// assert!((state.n[0] - 0.3 * (-0.42_f64).exp()).abs() < 1e-12);
    /// ```
    pub fn advance(
        &self,
        state: &mut PacemakerState,
        drive: &UnitDrive,
        pace: &[f64; LANES],
        (from, minutes): (i64, i64),
    ) -> Moved {
        // The model is chosen once, outside the loop over lanes.
        macro_rules! with {
            ($oscillator:expr) => {
                self.instructions.run(Advance {
                    oscillator: $oscillator,
                    state,
                    drive,
                    pace,
                    from,
                    minutes,
                    longest_step: self.longest_step_min,
                })
            };
        }
        match &self.model {
            Model::VanDerPol(model) => match (model.form, model.arousal.rho > 0.0) {
                (Form::Simple, _) => with!(Simple(model)),
                (Form::Revised, true) => with!(Revised::<true>(model)),
                (Form::Revised, false) => with!(Revised::<false>(model)),
            },
            Model::Hannay(model) => with!(model),
        }
    }

    /// Signed angle past the marker, in (-pi, pi]; it rises through 0 once per cycle.
    fn angle_past_marker(&self, first: f64, second: f64) -> f64 {
        let angle = match &self.model {
            // The oscillator runs clockwise.
            Model::VanDerPol(_) => -libm::atan2(second, first),
            Model::Hannay(_) => second,
        };
        crate::numeric::circular::wrap_half(
            angle - self.reading.angle_rad,
            2.0 * std::f64::consts::PI,
        )
    }

    /// Radius of the oscillation, in the unit of its first variable.
    pub fn radius(&self, (first, second): (f64, f64)) -> f64 {
        match &self.model {
            Model::VanDerPol(_) => libm::hypot(first, second),
            Model::Hannay(_) => first,
        }
    }

    /// Where within a step the state crossed the marker angle, as a share of the step.
    ///
    /// The polar angle is used, never a count of minima of `x`: light near `CBTmin` makes a second minimum in one cycle.
    fn crossing(&self, before: (f64, f64), after: (f64, f64)) -> Option<f64> {
        let from = self.angle_past_marker(before.0, before.1);
        let to = self.angle_past_marker(after.0, after.1);
        (from < 0.0 && to >= 0.0 && to - from < 1.0).then(|| from / (from - to))
    }
}
