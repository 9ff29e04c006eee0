//! The oscillators of van der Pol type: `forger1999`, `jewett1999`, `hilaire2007`.
//!
//! | symbol | meaning | unit |
//! |---|---|---|
//! | `x`, `xc` | state of the oscillator, clockwise in the (x, xc) plane | 1 |
//! | `drive` | `G alpha (1 - n)`, light before the factors of phase | 1 |
//! | `arousal` | `rho (1/3 - sigma)`, sleep and waking before the factor of phase | 1 |
//! | `tau` | intrinsic period | h |

use super::kernel::{LaneInput, Oscillator, runge_kutta};
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
    pub(super) mu: f64,
    pub(super) q: f64,
    pub(super) k: f64,
    pub(super) f: f64,
    pub(super) arousal: Arousal,
    /// Cosine and sine of the angle at which the marker is read.
    pub(super) marker: (f64, f64),
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

    /// Drive of light with the factors of phase; the two 0.4 belong to the form of the published equation.
    #[inline(always)]
    fn light(x: f64, xc: f64, drive: f64) -> f64 {
        drive * ((1.0 - 0.4 * x) * (1.0 - 0.4 * xc))
    }

    /// Has the polar angle passed the marker? The oscillator runs clockwise.
    #[inline(always)]
    fn passed(&self, before: [f64; 2], after: [f64; 2]) -> bool {
        let (cosine, sine) = self.marker;
        let aside = |[x, xc]: [f64; 2]| -xc * cosine - x * sine;
        let ahead = after[0] * cosine - after[1] * sine;
        lane::all([aside(before) < 0.0, aside(after) >= 0.0, ahead > 0.0])
    }
}

/// The simpler model.
#[derive(Debug, Clone, Copy)]
pub(super) struct Simple<'a>(pub(super) &'a VanDerPol);

impl Oscillator for Simple<'_> {
    #[inline(always)]
    fn step(&self, state: [f64; 2], input: LaneInput, step_h: f64) -> [f64; 2] {
        const P12: f64 = std::f64::consts::PI / 12.0;
        let model = self.0;
        runge_kutta(state, input.drive, step_h, |[x, xc], drive| {
            let light = VanDerPol::light(x, xc, drive);
            let limit_cycle = model.mu * (xc - 4.0 / 3.0 * xc * xc * xc);
            [
                P12 * (xc + light),
                P12 * (limit_cycle - x * (input.pace + model.k * light)),
            ]
        })
    }

    #[inline(always)]
    fn passed(&self, before: [f64; 2], after: [f64; 2]) -> bool {
        self.0.passed(before, after)
    }
}

/// The revised limit cycle.
#[derive(Debug, Clone, Copy)]
pub(super) struct Revised<'a, const AROUSED: bool>(pub(super) &'a VanDerPol);

impl<const AROUSED: bool> Oscillator for Revised<'_, AROUSED> {
    #[inline(always)]
    fn step(&self, state: [f64; 2], input: LaneInput, step_h: f64) -> [f64; 2] {
        const P12: f64 = std::f64::consts::PI / 12.0;
        let model = self.0;
        runge_kutta(state, input.drive, step_h, |[x, xc], drive| {
            let light = VanDerPol::light(x, xc, drive);
            let square = x * x;
            let limit_cycle =
                x * (1.0 / 3.0 + square * (4.0 / 3.0 - 256.0 / 105.0 * (square * square)));
            let mut push = xc + model.mu * limit_cycle + light;
            if AROUSED {
                push += input.arousal * lane::one_minus_tanh(model.arousal.steepness * x);
            }
            [
                P12 * push,
                P12 * (model.q * light * xc - x * (input.pace + model.k * light)),
            ]
        })
    }

    #[inline(always)]
    fn passed(&self, before: [f64; 2], after: [f64; 2]) -> bool {
        self.0.passed(before, after)
    }
}
