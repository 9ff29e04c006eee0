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

    /// Value, slope and bend at a time.
    fn at(&self, time_h: f64) -> [f64; 3] {
        let [mut value, mut slope, mut bend] = [self.coefficients[0], 0.0, 0.0];
        for (index, period) in self.periods_h.iter().enumerate() {
            let speed = 2.0 * std::f64::consts::PI / period;
            let (sine, cosine) = (libm::sin(speed * time_h), libm::cos(speed * time_h));
            let (beta, gamma) = (
                self.coefficients[1 + 2 * index],
                self.coefficients[2 + 2 * index],
            );
            value += beta * cosine + gamma * sine;
            slope += speed * (gamma * cosine - beta * sine);
            bend -= speed * speed * (beta * cosine + gamma * sine);
        }
        [value, slope, bend]
    }

    /// Times of the highest and the lowest point over a period: a grid, then Newton's rule.
    fn extremes(&self, longest_h: f64) -> (f64, f64) {
        /// Steps of the grid in the shortest period.
        const STEPS: f64 = 48.0;
        let shortest = self.periods_h.iter().copied().fold(longest_h, f64::min);
        let step_h = shortest / STEPS;
        let (mut high, mut low) = ((f64::MIN, 0.0), (f64::MAX, 0.0));
        let mut time = 0.0;
        while time < longest_h {
            let value = self.at(time)[0];
            if value > high.0 {
                high = (value, time);
            }
            if value < low.0 {
                low = (value, time);
            }
            time += step_h;
        }
        (
            self.polished(high.1, step_h, longest_h),
            self.polished(low.1, step_h, longest_h),
        )
    }

    fn polished(&self, from_h: f64, reach_h: f64, longest_h: f64) -> f64 {
        let mut time = from_h;
        for _ in 0..50 {
            let [_, slope, bend] = self.at(time);
            let step = slope / bend;
            if !step.is_finite() || step.abs() < 1e-14 {
                break;
            }
            time -= step.clamp(-reach_h, reach_h);
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
        let (peak_h, trough_h) = curve.extremes(longest);
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
