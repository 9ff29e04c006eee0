//! A rhythm as a vector with a covariance: amplitude, acrophase, and the limits that its ellipse gives.

use nalgebra::{Matrix2, Vector2};

/// A vector (beta, gamma) with its covariance.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Ellipse {
    /// Estimate.
    pub vector: Vector2<f64>,
    /// Covariance.
    pub covariance: Matrix2<f64>,
}

/// Standard errors by the delta method.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Delta {
    /// Of the amplitude.
    pub amplitude_se: f64,
    /// Of the acrophase, radians.
    pub acrophase_se: f64,
    /// Covariance of amplitude and acrophase.
    pub covariance: f64,
}

/// Limits of an acrophase as turns from the estimate, radians.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TurnLimits {
    /// Lower.
    pub from: f64,
    /// Upper.
    pub to: f64,
}

impl Ellipse {
    /// `-atan2(gamma, beta)` in (-2 pi, 0].
    pub fn acrophase_rad(&self) -> f64 {
        let phase = -libm::atan2(self.vector.y, self.vector.x);
        if phase > 0.0 {
            phase - 2.0 * std::f64::consts::PI
        } else {
            phase
        }
    }

    /// Variances along the vector, across it in the direction of a growing acrophase, and between the two.
    fn along_and_across(&self) -> (f64, f64, f64) {
        let phase = self.acrophase_rad();
        let (sine, cosine) = (libm::sin(phase), libm::cos(phase));
        let along = Vector2::new(cosine, -sine);
        let across = Vector2::new(-sine, -cosine);
        let v = &self.covariance;
        (
            along.dot(&(v * along)),
            along.dot(&(v * across)),
            across.dot(&(v * across)),
        )
    }

    /// Standard errors of amplitude and acrophase.
    pub fn delta(&self) -> Delta {
        let amplitude = self.vector.norm();
        let (along, between, across) = self.along_and_across();
        Delta {
            amplitude_se: along.sqrt(),
            acrophase_se: across.sqrt() / amplitude,
            covariance: between / amplitude,
        }
    }

    /// Squared distance of the pole from the centre in units of the covariance.
    pub fn distance_of_pole(&self) -> f64 {
        self.covariance.try_inverse().map_or(f64::NAN, |inverse| {
            self.vector.dot(&(inverse * self.vector))
        })
    }

    /// Half-lines from the pole that touch the ellipse of squared radius `squared`; none when it covers the pole.
    ///
    /// # Source
    ///
    /// Fieller limits with the square of a t, conservative limits with twice an F: Cornelissen's program of 1980 (seen); closed form derived.
    pub fn tangents(&self, squared: f64) -> Option<TurnLimits> {
        let distance = self.distance_of_pole();
        if distance.is_nan() || distance <= squared {
            return None;
        }
        let amplitude = self.vector.norm();
        let (along, between, across) = self.along_and_across();
        let divisor = amplitude * amplitude - squared * along;
        let root = (squared * squared * between * between + squared * across * divisor).sqrt();
        let touching = |sign: f64| {
            let turn = libm::atan((-squared * between + sign * root) / divisor);
            let normal = Vector2::new(-libm::sin(turn), libm::cos(turn));
            let w = Matrix2::new(along, between, between, across);
            let reach = w * normal;
            let touch = Vector2::new(amplitude, 0.0)
                + reach * (amplitude * libm::sin(turn) / normal.dot(&reach));
            // Beyond a right angle the line is touched on its other side.
            if touch.dot(&Vector2::new(libm::cos(turn), libm::sin(turn))) < 0.0 {
                turn + if turn < 0.0 { 1.0 } else { -1.0 } * std::f64::consts::PI
            } else {
                turn
            }
        };
        let (a, b) = (touching(-1.0), touching(1.0));
        Some(TurnLimits {
            from: a.min(b),
            to: a.max(b),
        })
    }

    /// Nearest and farthest distance of the pole from the ellipse of squared radius `squared`; the nearest is 0 when it is covered.
    pub fn distances(&self, squared: f64) -> (f64, f64) {
        let Some(cholesky) = self.covariance.cholesky() else {
            return (f64::NAN, f64::NAN);
        };
        let spread = cholesky.l() * squared.sqrt();
        let farthest = self.extreme(&spread, 1.0);
        let covered = self.distance_of_pole() <= squared;
        let nearest = if covered {
            0.0
        } else {
            self.extreme(&spread, -1.0)
        };
        (nearest, farthest)
    }

    /// Distance of the ellipse from the pole, farthest (`sign` 1) or nearest (-1): a coarse search round the ellipse, then Newton's rule.
    fn extreme(&self, spread: &Matrix2<f64>, sign: f64) -> f64 {
        const DIRECTIONS: u32 = 48;
        let point =
            |turn: f64| self.vector + spread * Vector2::new(libm::cos(turn), libm::sin(turn));
        let mut best = (f64::NEG_INFINITY, 0.0);
        for step in 0..DIRECTIONS {
            let turn = 2.0 * std::f64::consts::PI * f64::from(step) / f64::from(DIRECTIONS);
            let squared = sign * point(turn).norm_squared();
            if squared > best.0 {
                best = (squared, turn);
            }
        }
        let mut turn = best.1;
        for _ in 0..60 {
            let here = point(turn);
            let unit = Vector2::new(libm::cos(turn), libm::sin(turn));
            let first = spread * Vector2::new(-unit.y, unit.x);
            let second = spread * -unit;
            let slope = here.dot(&first);
            let bend = first.norm_squared() + here.dot(&second);
            let step = if sign * bend < 0.0 {
                slope / bend
            } else {
                // Not yet where the distance bends the right way: go uphill a little.
                -sign * slope.signum() * 0.02
            };
            turn -= step.clamp(-0.1, 0.1);
            if step.abs() < 1e-15 {
                break;
            }
        }
        point(turn).norm()
    }
}
