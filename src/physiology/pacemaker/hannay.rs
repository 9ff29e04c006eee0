//! The macroscopic pacemaker `hannay2019`, single population.
//!
//! | symbol | meaning | unit |
//! |---|---|---|
//! | `R` | collective amplitude | 1 |
//! | `psi` | collective phase, counter-clockwise | rad |
//! | `n` | share of activated photoreceptors | 1 |
//! | `omega0` | natural frequency | rad/h |

use super::{STEP_H, runge_kutta};
use crate::numeric::lane;

/// The numbers of the equations, ready for use.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Hannay {
    pub(super) beta: f64,
    pub(super) gain: f64,
    pub(super) coupling: f64,
    pub(super) gamma: f64,
    pub(super) beta1: f64,
    pub(super) a1: f64,
    pub(super) a2: f64,
    pub(super) beta_l1: f64,
    pub(super) beta_l2: f64,
    pub(super) sigma: f64,
}

impl Hannay {
    /// The natural frequency that gives a dark period of `tau_h`: `2 pi / tau - (K/2) sin(beta1)(1 + R*^4)`, `R*^4 = 1 - 2 gamma / (K cos beta1)`.
    pub(super) fn frequency(&self, tau_h: f64) -> f64 {
        let r4 = 1.0 - 2.0 * self.gamma / (self.coupling * libm::cos(self.beta1));
        2.0 * std::f64::consts::PI / tau_h
            - self.coupling / 2.0 * libm::sin(self.beta1) * (1.0 + r4)
    }

    /// One minute of one lane.
    #[inline]
    pub(super) fn step(&self, state: [f64; 3], alpha: f64, frequency: f64) -> [f64; 3] {
        let (sine, cosine) = lane::sin_cos(self.beta1);
        runge_kutta(state, STEP_H, |s| {
            self.rate(s, alpha, frequency, (sine, cosine))
        })
    }

    /// Right-hand side, per hour.
    #[inline]
    fn rate(
        &self,
        [r, psi, n]: [f64; 3],
        alpha: f64,
        frequency: f64,
        (sine1, cosine1): (f64, f64),
    ) -> [f64; 3] {
        /// The amplitude stands in a denominator and never vanishes in light that people meet.
        const SMALLEST_AMPLITUDE: f64 = 1e-3;
        let r = r.max(SMALLEST_AMPLITUDE);
        let drive = self.gain * (1.0 - n) * alpha;
        let r3 = r * r * r;
        let (r4, r8) = (r3 * r, r3 * r3 * r * r);
        let (s1, c1) = lane::sin_cos(psi + self.beta_l1);
        let (s2, c2) = lane::sin_cos(2.0 * psi + self.beta_l2);
        let half = drive / 2.0;
        let amplitude = half * (self.a1 * (1.0 - r4) * c1 + self.a2 * r * (1.0 - r8) * c2);
        let phase =
            self.sigma * drive - half * (self.a1 * (r3 + 1.0 / r) * s1 + self.a2 * (1.0 + r8) * s2);
        [
            -self.gamma * r + self.coupling / 2.0 * cosine1 * r * (1.0 - r4) + amplitude,
            frequency + self.coupling / 2.0 * sine1 * (1.0 + r4) + phase,
            60.0 * (alpha * (1.0 - n) - self.beta * n),
        ]
    }
}
