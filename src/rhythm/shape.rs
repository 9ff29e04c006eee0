//! Peak, trough and magnitude of a fitted curve of one or several periods.

use nalgebra::{DMatrix, DVector};

/// The fitted curve as a whole.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Shape {
    /// Time of the highest point after the reference time, hours.
    pub peak_h: f64,
    /// Highest point.
    pub peak: f64,
    /// Standard error of the time of the highest point, hours.
    pub peak_se_h: f64,
    /// Time of the lowest point, hours.
    pub trough_h: f64,
    /// Lowest point.
    pub trough: f64,
    /// Half the distance between them.
    pub magnitude: f64,
    /// Its standard error.
    pub magnitude_se: f64,
    /// Lag of the highest point, degrees of the longest period, in (-360, 0].
    pub orthophase_deg: f64,
    /// Lag of the lowest point.
    pub bathyphase_deg: f64,
}

/// Value, first and second derivative of a curve.
struct Curve<'a> {
    coefficients: &'a [f64],
    periods_h: &'a [f64],
}

impl Curve<'_> {
    /// Rows of the design for value, slope and bend at a time.
    fn rows(&self, time_h: f64) -> [Vec<f64>; 3] {
        let mut rows = [vec![1.0], vec![0.0], vec![0.0]];
        for period in self.periods_h {
            let speed = 2.0 * std::f64::consts::PI / period;
            let (sine, cosine) = (libm::sin(speed * time_h), libm::cos(speed * time_h));
            rows[0].extend([cosine, sine]);
            rows[1].extend([-speed * sine, speed * cosine]);
            rows[2].extend([-speed * speed * cosine, -speed * speed * sine]);
        }
        rows
    }

    fn at(&self, time_h: f64) -> [f64; 3] {
        self.rows(time_h)
            .map(|row| row.iter().zip(self.coefficients).map(|(a, b)| a * b).sum())
    }

    /// Highest (`sign` 1) or lowest (-1) point over a period: a grid, then Newton's rule.
    fn extreme(&self, longest_h: f64, sign: f64) -> f64 {
        const STEPS: u32 = 288;
        let mut best = (f64::NEG_INFINITY, 0.0);
        for step in 0..STEPS {
            let time = longest_h * f64::from(step) / f64::from(STEPS);
            let value = sign * self.at(time)[0];
            if value > best.0 {
                best = (value, time);
            }
        }
        let mut time = best.1;
        for _ in 0..50 {
            let [_, slope, bend] = self.at(time);
            let step = slope / bend;
            if !step.is_finite() || step.abs() < 1e-14 {
                break;
            }
            time -= step.clamp(-0.5, 0.5);
        }
        crate::numeric::circular::wrap(time, longest_h)
    }
}

impl Shape {
    /// Of a curve with coefficients M, beta, gamma, ...; none when the periods are not harmonics of the longest.
    pub fn of(coefficients: &[f64], covariance: &DMatrix<f64>, periods_h: &[f64]) -> Option<Self> {
        let longest = periods_h.iter().copied().fold(0.0, f64::max);
        let harmonic = |period: &f64| {
            let ratio = longest / period;
            (ratio - ratio.round()).abs() < 1e-9
        };
        if !periods_h.iter().all(harmonic) {
            return None;
        }
        let curve = Curve {
            coefficients,
            periods_h,
        };
        let peak_h = curve.extreme(longest, 1.0);
        let trough_h = curve.extreme(longest, -1.0);
        let (peak, trough) = (curve.at(peak_h), curve.at(trough_h)[0]);
        let row = |time: f64, order: usize| DVector::from_vec(curve.rows(time)[order].clone());
        let slope = row(peak_h, 1);
        let apart = row(peak_h, 0) - row(trough_h, 0);
        let variance = |row: &DVector<f64>| row.dot(&(covariance * row));
        Some(Self {
            peak_h,
            peak: peak[0],
            peak_se_h: variance(&slope).sqrt() / peak[2].abs(),
            trough_h,
            trough,
            magnitude: (peak[0] - trough) / 2.0,
            magnitude_se: variance(&apart).sqrt() / 2.0,
            orthophase_deg: -360.0 * peak_h / longest,
            bathyphase_deg: -360.0 * trough_h / longest,
        })
    }
}
