//! The macroscopic pacemaker `hannay2019`, single population.
//!
//! | symbol | meaning | unit |
//! |---|---|---|
//! | `R` | collective amplitude | 1 |
//! | `psi` | collective phase, counter-clockwise | rad |
//! | `drive` | `G alpha (1 - n)` | 1/h |
//! | `omega0` | natural frequency | rad/h |

use super::kernel::{LaneInput, Oscillator, runge_kutta};
use crate::numeric::lane;

/// The numbers of the equations, ready for use.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Hannay {
    pub(super) coupling: f64,
    pub(super) gamma: f64,
    pub(super) beta1: f64,
    pub(super) a1: f64,
    pub(super) a2: f64,
    /// Sine and cosine of the two constant angles.
    pub(super) beta_l1: (f64, f64),
    pub(super) beta_l2: (f64, f64),
    pub(super) sigma: f64,
    /// Phase at which the marker is read, rad.
    pub(super) marker_rad: f64,
}

impl Hannay {
    /// The natural frequency that gives a dark period of `tau_h`: `2 pi / tau - (K/2) sin(beta1)(1 + R*^4)`, `R*^4 = 1 - 2 gamma / (K cos beta1)`.
    pub(super) fn frequency(&self, tau_h: f64) -> f64 {
        let r4 = 1.0 - 2.0 * self.gamma / (self.coupling * libm::cos(self.beta1));
        2.0 * std::f64::consts::PI / tau_h
            - self.coupling / 2.0 * libm::sin(self.beta1) * (1.0 + r4)
    }
}

impl Oscillator for &Hannay {
    #[inline(always)]
    fn step(&self, state: [f64; 2], input: LaneInput, step_h: f64) -> [f64; 2] {
        /// The amplitude stands in a denominator and never vanishes in light that people meet.
        const SMALLEST_AMPLITUDE: f64 = 1e-3;
        let (sine1, cosine1) = lane::sin_cos(self.beta1);
        let half_coupling = self.coupling / 2.0;
        runge_kutta(state, input.drive, step_h, |[r, psi], drive| {
            let r = r.max(SMALLEST_AMPLITUDE);
            let r3 = r * r * r;
            let (r4, r8) = (r3 * r, r3 * r3 * (r * r));
            let (sine, cosine) = lane::sin_cos(psi);
            let (double_sine, double_cosine) = (2.0 * sine * cosine, 1.0 - 2.0 * sine * sine);
            let (s1, c1) = turned((sine, cosine), self.beta_l1);
            let (s2, c2) = turned((double_sine, double_cosine), self.beta_l2);
            let half = drive / 2.0;
            let amplitude = half * (self.a1 * (1.0 - r4) * c1 + self.a2 * r * (1.0 - r8) * c2);
            let phase = self.sigma * drive
                - half * (self.a1 * (r3 + 1.0 / r) * s1 + self.a2 * (1.0 + r8) * s2);
            [
                -self.gamma * r + half_coupling * cosine1 * r * (1.0 - r4) + amplitude,
                input.pace + half_coupling * sine1 * (1.0 + r4) + phase,
            ]
        })
    }

    #[inline(always)]
    fn passed(&self, before: [f64; 2], after: [f64; 2]) -> bool {
        let from = lane::within_a_turn(before[1] - self.marker_rad);
        let to = lane::within_a_turn(after[1] - self.marker_rad);
        lane::all([from < 0.0, to >= 0.0, to - from < 1.0])
    }
}

/// Sine and cosine of a sum of angles.
#[inline(always)]
fn turned((sine, cosine): (f64, f64), (sine_by, cosine_by): (f64, f64)) -> (f64, f64) {
    (
        sine * cosine_by + cosine * sine_by,
        cosine * cosine_by - sine * sine_by,
    )
}
