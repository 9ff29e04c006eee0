//! A smooth periodic function, tabulated once and read by linear interpolation.
//!
//! Reading a table costs a few nanoseconds; five sines or two powers cost a hundred.
#![expect(
    clippy::inline_always,
    reason = "the instruction set of the calling loop must reach the reading"
)]

use super::lane::ROUNDER;

/// Entries of the table; a power of two, so that an index wraps by its low bits.
const ENTRIES: usize = 2048;
/// Entries as a number and as the mask of an index.
const ENTRIES_F64: f64 = 2048.0;
const MASK: u64 = 2047;
/// Minutes of the period.
const PERIOD_MIN: f64 = 1440.0;

/// A function of minutes with a period of one day.
#[derive(Debug, Clone, PartialEq)]
pub struct PeriodicTable {
    /// One value every 1440/2048 min.
    values: Box<[f64; ENTRIES]>,
}

impl PeriodicTable {
    /// Tabulates `function`, which is given minutes in [0, 1440).
    pub fn of(function: impl Fn(f64) -> f64) -> Self {
        let mut values = Box::new([0.0; ENTRIES]);
        let mut minute = 0.0;
        for value in values.iter_mut() {
            *value = function(minute);
            minute += PERIOD_MIN / ENTRIES_F64;
        }
        Self { values }
    }

    /// The function at `minute`, whatever the number of periods from 0. Branch-free.
    ///
    /// Linear interpolation is off by at most an eighth of the second derivative times the squared distance of the entries:
    /// below 1e-5 for the functions used here.
    ///
    /// # Range
    ///
    /// Minutes up to 1e12 of either sign.
    ///
    /// # Example
    ///
    /// ```
    /// use acroshift::numeric::periodic_table::PeriodicTable;
    /// let table = PeriodicTable::of(|minute| (minute * std::f64::consts::TAU / 1440.0).sin());
    /// assert!((table.at(-1080.0) - 1.0).abs() < 1e-5);
    /// ```
    #[inline(always)]
    pub fn at(&self, minute: f64) -> f64 {
        let position = minute * (ENTRIES_F64 / PERIOD_MIN);
        // The low bits of the sum hold the whole entries, in two's complement when negative.
        let shifted = (position - 0.5) + ROUNDER;
        let part = position - (shifted - ROUNDER);
        let bits = shifted.to_bits();
        let here = self.values[(bits & MASK) as usize];
        let next = self.values[(bits.wrapping_add(1) & MASK) as usize];
        here + part * (next - here)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn values_between_the_entries_are_interpolated() {
        let table = PeriodicTable::of(|minute| {
            if minute < 720.0 {
                minute
            } else {
                1440.0 - minute
            }
        });
        assert!((table.at(10.25) - 10.25).abs() < 1e-12);
        assert!((table.at(-0.5) - 0.5).abs() < 1e-12);
        assert!((table.at(1440.0 * 5.0 + 3.0) - 3.0).abs() < 1e-9);
    }
}
