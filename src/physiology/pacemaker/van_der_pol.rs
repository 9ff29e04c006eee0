//! The oscillators of van der Pol type: `forger1999`, `jewett1999`, `hilaire2007`.
//!
//! | symbol | meaning | unit |
//! |---|---|---|
//! | `x`, `xc` | state of the oscillator, clockwise in the (x, xc) plane | 1 |
//! | `n` | share of activated photoreceptors | 1 |
//! | `alpha` | activation rate by light | 1/min |
//! | `tau` | intrinsic period | h |

use super::{STEP_H, runge_kutta};
use crate::numeric::lane;

/// Which right-hand side.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Form {
    /// The simpler model of 1999.
    Simple,
    /// The revised limit cycle of 1999, with the drive of sleep and waking of 2007 where it is not 0.
    Revised,
}

/// The numbers of the equations, ready for use.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct VanDerPol {
    pub(super) form: Form,
    pub(super) beta: f64,
    pub(super) gain: f64,
    pub(super) mu: f64,
    pub(super) q: f64,
    pub(super) k: f64,
    pub(super) f: f64,
    pub(super) arousal: Arousal,
}

/// Drive of sleep and waking; all 0 where light alone drives the clock.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub(super) struct Arousal {
    pub(super) rho: f64,
    pub(super) awake_share: f64,
    pub(super) steepness: f64,
}

impl VanDerPol {
    /// `(24 / (f tau))^2`, the stiffness that gives each member its period.
    pub(super) fn stiffness(&self, tau_h: f64) -> f64 {
        let ratio = 24.0 / (self.f * tau_h);
        ratio * ratio
    }

    /// One minute of one lane.
    #[inline]
    pub(super) fn step(
        &self,
        state: [f64; 3],
        alpha: f64,
        arousal: f64,
        stiffness: f64,
    ) -> [f64; 3] {
        match self.form {
            Form::Simple => runge_kutta(state, STEP_H, |s| self.simple(s, alpha, stiffness)),
            Form::Revised => runge_kutta(state, STEP_H, |s| {
                self.revised(s, alpha, arousal, stiffness)
            }),
        }
    }

    /// Drive of light: `B = G (1 - n) alpha (1 - 0.4 x)(1 - 0.4 xc)`; the two 0.4 belong to the form of the published equation.
    #[inline]
    fn drive(&self, [x, xc, n]: [f64; 3], alpha: f64) -> f64 {
        self.gain * alpha * (1.0 - n) * (1.0 - 0.4 * x) * (1.0 - 0.4 * xc)
    }

    #[inline]
    fn photoreceptors(&self, n: f64, alpha: f64) -> f64 {
        60.0 * (alpha * (1.0 - n) - self.beta * n)
    }

    /// Right-hand side of the simpler model, per hour.
    #[inline]
    fn simple(&self, state: [f64; 3], alpha: f64, stiffness: f64) -> [f64; 3] {
        const P12: f64 = std::f64::consts::PI / 12.0;
        let [x, xc, n] = state;
        let drive = self.drive(state, alpha);
        let limit_cycle = self.mu * (xc - 4.0 * xc * xc * xc / 3.0);
        [
            P12 * (xc + drive),
            P12 * (limit_cycle - x * (stiffness + self.k * drive)),
            self.photoreceptors(n, alpha),
        ]
    }

    /// Right-hand side of the revised limit cycle, per hour.
    #[inline]
    fn revised(&self, state: [f64; 3], alpha: f64, arousal: f64, stiffness: f64) -> [f64; 3] {
        const P12: f64 = std::f64::consts::PI / 12.0;
        let [x, xc, n] = state;
        let drive = self.drive(state, alpha);
        let x3 = x * x * x;
        let non_photic = arousal * (1.0 - lane::tanh(self.arousal.steepness * x));
        let limit_cycle = self.mu * (x / 3.0 + 4.0 * x3 / 3.0 - 256.0 * x3 * x3 * x / 105.0);
        [
            P12 * (xc + limit_cycle + drive + non_photic),
            P12 * (self.q * drive * xc - x * (stiffness + self.k * drive)),
            self.photoreceptors(n, alpha),
        ]
    }
}
