//! Light- and sleep-driven circadian pacemaker, `hilaire2007`: how does the clock move?
//!
//! | symbol | meaning | unit |
//! |---|---|---|
//! | `x`, `xc` | state of the oscillator, clockwise in the (x, xc) plane | 1 |
//! | `n` | share of activated photoreceptors | 1 |
//! | `alpha` | activation rate by light | 1/min |
//! | `tau` | intrinsic period | h |
//!
//! The members of a unit are the lanes: one formula, no branch, no library function inside the loop over lanes.

use super::parameters::PacemakerSet;
use crate::numeric::lane;

/// Members simulated side by side.
pub const LANES: usize = 16;

/// Minutes after which a second crossing of the marker angle is believed: one marker per cycle, never two.
const SHORTEST_CYCLE_MIN: f64 = 12.0 * 60.0;
/// Step of the integration, hours: one minute. The error against an adaptive solver is below 0.001 min of phase (rk4 step table of the reference runs).
const STEP_H: f64 = 1.0 / 60.0;

/// State of the members of a unit, structure of arrays.
#[derive(Debug, Clone, PartialEq)]
pub struct PacemakerState {
    /// First oscillator variable.
    pub x: [f64; LANES],
    /// Second oscillator variable.
    pub xc: [f64; LANES],
    /// Share of activated photoreceptors.
    pub n: [f64; LANES],
}

/// What acts on the members during one step.
#[derive(Debug, Clone, PartialEq)]
pub struct PacemakerInput {
    /// Activation rate by light, 1/min.
    pub alpha: [f64; LANES],
    /// Non-photic drive before its phase factor: `rho (1/3 - sigma)`.
    pub arousal: [f64; LANES],
}

/// The numbers of the equations, ready for use.
#[derive(Debug, Clone, PartialEq)]
pub struct Pacemaker {
    alpha0: f64,
    beta: f64,
    gain: f64,
    exponent: f64,
    i0_lux: f64,
    i1_lux: f64,
    mu: f64,
    q: f64,
    k: f64,
    f: f64,
    rho: f64,
    awake_share: f64,
    steepness: f64,
    marker_angle: f64,
    marker_offset_min: f64,
    start: (f64, f64, f64),
}

impl Pacemaker {
    /// The equations with the numbers of a parameter set.
    pub fn new(set: &PacemakerSet) -> Self {
        Self {
            alpha0: set.process_l.alpha0.value,
            beta: set.process_l.beta.value,
            gain: set.process_l.gain.value,
            exponent: set.process_l.exponent.value,
            i0_lux: set.process_l.i0.value,
            i1_lux: set.process_l.i1.value,
            mu: set.process_p.mu.value,
            q: set.process_p.q.value,
            k: set.process_p.k.value,
            f: set.process_p.f.value,
            rho: set.non_photic.rho.value,
            awake_share: set.non_photic.awake_share.value,
            steepness: set.non_photic.steepness.value,
            marker_angle: set.marker.angle.value.to_radians(),
            marker_offset_min: set.marker.cbtmin_offset.value * 60.0,
            start: (set.start.x.value, set.start.xc.value, set.start.n.value),
        }
    }

    /// The state from which habitual days are lived.
    pub fn start(&self) -> PacemakerState {
        let (x, xc, n) = self.start;
        PacemakerState {
            x: [x; LANES],
            xc: [xc; LANES],
            n: [n; LANES],
        }
    }

    /// Activation rate of the photoreceptors.
    ///
    /// # Equation
    ///
    /// ```text
    /// alpha(I) = alpha0 (I / I0)^p I / (I + I1)
    /// ```
    ///
    /// # Units
    ///
    /// `light_lux` photopic lux at the eye; result 1/min.
    ///
    /// # Source
    ///
    /// St. Hilaire et al. 2007, J Theor Biol 247:583. In one public code the two constants are swapped; this is the form of the other.
    ///
    /// # Range
    ///
    /// Darkness and anything below give 0.
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
        if light_lux <= 0.0 {
            return 0.0;
        }
        self.alpha0 * libm::pow(light_lux / self.i0_lux, self.exponent) * light_lux
            / (light_lux + self.i1_lux)
    }

    /// Non-photic drive before its phase factor: `rho (1/3 - sigma)`, sigma = 1 asleep.
    pub fn arousal(&self, asleep: bool) -> f64 {
        let sigma = if asleep { 1.0 } else { 0.0 };
        self.rho * (self.awake_share - sigma)
    }

    /// `(24 / (f tau))^2`, the stiffness that gives each member its period.
    pub fn stiffness(&self, tau_h: f64) -> f64 {
        let ratio = 24.0 / (self.f * tau_h);
        ratio * ratio
    }

    /// One minute of classical Runge-Kutta under constant light and sleep state.
    ///
    /// # Equation
    ///
    /// ```text
    /// B      = G (1 - n) alpha (1 - 0.4 x)(1 - 0.4 xc);  Ns = rho (1/3 - sigma)(1 - tanh 10 x)
    /// dx/dt  = (pi/12) [ xc + mu (x/3 + 4 x^3/3 - 256 x^7/105) + B + Ns ]
    /// dxc/dt = (pi/12) { q B xc - x [ (24/(f tau))^2 + k B ] }
    /// dn/dt  = 60 [ alpha (1 - n) - beta n ]                      (rates per minute, time in hours)
    /// ```
    ///
    /// # Source
    ///
    /// St. Hilaire et al. 2007; process P of Jewett, Forger and Kronauer 1999, J Biol Rhythms 14:493. Deviations: none.
    ///
    /// # Units
    ///
    /// `state` and `input` hold one value per member; `stiffness` is that of [`Pacemaker::stiffness`]. The state is moved by one minute.
    ///
    /// # Range
    ///
    /// Up to 10 000 lux the phase error of one-minute steps is below 0.001 min against an adaptive solver; at 100 000 lux 0.001 min.
    ///
    /// # Example
    ///
    /// ```
    /// use acroshift::physiology::pacemaker::{LANES, Pacemaker, PacemakerInput};
    /// use acroshift::physiology::ModelSets;
    /// let pacemaker = Pacemaker::new(&ModelSets::embedded().pacemaker);
    /// let mut state = pacemaker.start();
    /// let dark = PacemakerInput { alpha: [0.0; LANES], arousal: [pacemaker.arousal(true); LANES] };
    /// let stiffness = [pacemaker.stiffness(24.2); LANES];
    /// for _ in 0..60 {
    ///     pacemaker.step(&mut state, &dark, &stiffness);
    /// }
    /// // Photoreceptors recover in the dark: n = 0.3 exp(-60 * 0.007).
    /// assert!((state.n[0] - 0.3 * (-0.42_f64).exp()).abs() < 1e-6);
    /// ```
    pub fn step(
        &self,
        state: &mut PacemakerState,
        input: &PacemakerInput,
        stiffness: &[f64; LANES],
    ) {
        for (i, &stiffness) in stiffness.iter().enumerate() {
            let rate =
                |x, xc, n| self.rate([x, xc, n], input.alpha[i], input.arousal[i], stiffness);
            let (x, xc, n) = (state.x[i], state.xc[i], state.n[i]);
            let half = STEP_H / 2.0;
            let a = rate(x, xc, n);
            let b = rate(x + half * a[0], xc + half * a[1], n + half * a[2]);
            let c = rate(x + half * b[0], xc + half * b[1], n + half * b[2]);
            let d = rate(x + STEP_H * c[0], xc + STEP_H * c[1], n + STEP_H * c[2]);
            let sixth = STEP_H / 6.0;
            state.x[i] = x + sixth * (a[0] + 2.0 * b[0] + 2.0 * c[0] + d[0]);
            state.xc[i] = xc + sixth * (a[1] + 2.0 * b[1] + 2.0 * c[1] + d[1]);
            state.n[i] = n + sixth * (a[2] + 2.0 * b[2] + 2.0 * c[2] + d[2]);
        }
    }

    /// Right-hand side, per hour.
    #[inline]
    fn rate(&self, [x, xc, n]: [f64; 3], alpha: f64, arousal: f64, stiffness: f64) -> [f64; 3] {
        const P12: f64 = std::f64::consts::PI / 12.0;
        let drive = self.gain * alpha * (1.0 - n) * (1.0 - 0.4 * x) * (1.0 - 0.4 * xc);
        let x3 = x * x * x;
        let non_photic = arousal * (1.0 - lane::tanh(self.steepness * x));
        let limit_cycle = self.mu * (x / 3.0 + 4.0 * x3 / 3.0 - 256.0 * x3 * x3 * x / 105.0);
        [
            P12 * (xc + limit_cycle + drive + non_photic),
            P12 * (self.q * drive * xc - x * (stiffness + self.k * drive)),
            60.0 * (alpha * (1.0 - n) - self.beta * n),
        ]
    }

    /// Signed angle past the marker, in (-pi, pi]; it rises through 0 once per cycle.
    fn angle_past_marker(&self, x: f64, xc: f64) -> f64 {
        crate::numeric::circular::wrap_half(
            -libm::atan2(xc, x) - self.marker_angle,
            2.0 * std::f64::consts::PI,
        )
    }

    /// Where within the minute the state crossed the marker angle, as a share of the minute.
    ///
    /// The polar angle is used, never a count of minima of `x`: light near `CBTmin` makes a second minimum in one cycle.
    fn crossing(&self, before: (f64, f64), after: (f64, f64)) -> Option<f64> {
        let from = self.angle_past_marker(before.0, before.1);
        let to = self.angle_past_marker(after.0, after.1);
        (from < 0.0 && to >= 0.0 && to - from < 1.0).then(|| from / (from - to))
    }
}

/// Finds `CBTmin` as the state moves on.
#[derive(Debug, Clone, PartialEq)]
pub struct MarkerReader {
    last_crossing_min: f64,
}

impl MarkerReader {
    /// A reader that has seen no marker yet.
    pub fn new() -> Self {
        Self {
            last_crossing_min: f64::NEG_INFINITY,
        }
    }

    /// A reader that knows the last `CBTmin`, minutes since the epoch.
    pub fn after(pacemaker: &Pacemaker, cbtmin_min: f64) -> Self {
        Self {
            last_crossing_min: cbtmin_min - pacemaker.marker_offset_min,
        }
    }

    /// `CBTmin` in minutes since the epoch, if the minute from `minute` held the crossing that announces it.
    pub fn read(
        &mut self,
        pacemaker: &Pacemaker,
        minute: f64,
        before: (f64, f64),
        after: (f64, f64),
    ) -> Option<f64> {
        let crossing = minute + pacemaker.crossing(before, after)?;
        if crossing - self.last_crossing_min <= SHORTEST_CYCLE_MIN {
            return None;
        }
        self.last_crossing_min = crossing;
        Some(crossing + pacemaker.marker_offset_min)
    }
}

impl Default for MarkerReader {
    fn default() -> Self {
        Self::new()
    }
}
