//! Light and sleep as they act on the members of a unit between two edges of their lives.

use super::{LANES, Pacemaker, STEPS};
use crate::units::Sourced;

/// Activation of the photoreceptors by light.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct LightLaw {
    alpha0: f64,
    exponent: f64,
    i0: f64,
    saturation: Saturation,
    /// Recovery of the photoreceptors, 1/min.
    beta: f64,
    /// Gain from activation to drive.
    gain: f64,
}

/// How activation saturates with light.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Saturation {
    /// `alpha0 (I/I0)^p`
    Open,
    /// `alpha0 (I/I0)^p I/(I + I1)`, lux.
    Dim(f64),
    /// `alpha0 I^p/(I^p + I0)`
    Hill,
}

/// The numbers of a light process as a parameter set holds them.
pub(super) struct LightNumbers<'a> {
    pub(super) alpha0: &'a Sourced,
    pub(super) beta: &'a Sourced,
    pub(super) gain: &'a Sourced,
    pub(super) exponent: &'a Sourced,
    pub(super) i0: &'a Sourced,
}

impl LightLaw {
    pub(super) fn new(numbers: &LightNumbers<'_>, saturation: Saturation) -> Self {
        Self {
            alpha0: numbers.alpha0.value,
            exponent: numbers.exponent.value,
            i0: numbers.i0.value,
            saturation,
            beta: numbers.beta.value,
            gain: numbers.gain.value,
        }
    }

    /// Activation rate, 1/min; 0 in darkness.
    pub(super) fn alpha(&self, light_lux: f64) -> f64 {
        if light_lux <= 0.0 {
            return 0.0;
        }
        let relative = || libm::pow(light_lux / self.i0, self.exponent);
        self.alpha0
            * match self.saturation {
                Saturation::Open => relative(),
                Saturation::Dim(i1_lux) => relative() * light_lux / (light_lux + i1_lux),
                Saturation::Hill => {
                    let raised = libm::pow(light_lux, self.exponent);
                    raised / (raised + self.i0)
                }
            }
    }
}

/// What acts on the members of a unit until the next edge: constants, so that `n` is known exactly.
///
/// # Equation
///
/// ```text
/// dn/dt = alpha (1 - n) - beta n   per minute;   n(t) = n' + (n(0) - n') e^(-(alpha + beta) t),   n' = alpha / (alpha + beta)
/// ```
#[derive(Debug, Clone, PartialEq)]
pub struct UnitDrive {
    /// `G alpha`.
    pub(super) gain_alpha: [f64; LANES],
    /// `n'`, the steady share of activated photoreceptors.
    pub(super) steady: [f64; LANES],
    /// What half a step and a whole step of 1, 2, ... minutes leave of the distance from it: `e^(-(alpha + beta) t)`.
    left: [[[f64; LANES]; 2]; STEPS],
    /// `rho (1/3 - sigma)`.
    pub(super) arousal: [f64; LANES],
    lux: [f64; LANES],
}

impl UnitDrive {
    /// What half a step and a whole step leave of the distance of `n` from its steady share.
    #[inline(always)]
    pub(super) fn left_after(&self, minutes: i64) -> (&[f64; LANES], &[f64; LANES]) {
        let index = usize::try_from(minutes - 1).unwrap_or(0).min(STEPS - 1);
        let [half, whole] = &self.left[index];
        (half, whole)
    }

    /// Darkness and waking for every member.
    pub fn dark(pacemaker: &Pacemaker) -> Self {
        let mut drive = Self {
            gain_alpha: [0.0; LANES],
            steady: [0.0; LANES],
            left: [[[0.0; LANES]; 2]; STEPS],
            arousal: [0.0; LANES],
            lux: [f64::NAN; LANES],
        };
        for lane in 0..LANES {
            drive.set(pacemaker, lane, 0.0, false);
        }
        drive
    }

    /// Puts one member into light and into sleep or waking; lux at the eye.
    pub fn set(&mut self, pacemaker: &Pacemaker, lane: usize, lux: f64, asleep: bool) {
        if self.lux[lane].to_bits() != lux.to_bits() {
            let law = &pacemaker.light;
            let alpha = law.alpha(lux);
            let rate = alpha + law.beta;
            self.lux[lane] = lux;
            self.gain_alpha[lane] = law.gain * alpha;
            self.steady[lane] = alpha / rate;
            let half_minute = libm::exp(-rate / 2.0);
            let mut half = 1.0;
            for [of_half, of_whole] in &mut self.left {
                half *= half_minute;
                of_half[lane] = half;
                of_whole[lane] = half * half;
            }
        }
        self.arousal[lane] = pacemaker.arousal(asleep);
    }
}
