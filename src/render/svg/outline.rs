//! The `d` attribute of a path, written in few characters.

use std::fmt::Write as _;

use plotters_backend::BackendCoord;

use crate::render::svg::{Hatch, Tenths};

/// The hatch keeps this far inside of its rectangle, so that the ends of its lines stay under the outline.
const INSET: i32 = 8;

/// Path data of the shapes drawn since the last flush.
///
/// Steps are relative, because a difference is shorter than a position; the grid is whole numbers, so no rounding adds up.
#[derive(Debug, Clone, Default)]
pub(crate) struct Outline {
    data: String,
}

impl Outline {
    /// The data so far; the outline is empty afterwards.
    pub(crate) fn take(&mut self) -> String {
        std::mem::take(&mut self.data)
    }

    /// A closed rectangle.
    pub(crate) fn rectangle(&mut self, from: BackendCoord, to: BackendCoord) {
        let width = i64::from(to.0) - i64::from(from.0);
        let height = i64::from(to.1) - i64::from(from.1);
        self.begin(from);
        for (command, step) in [('h', width), ('v', height), ('h', -width)] {
            self.data.push(command);
            self.number(step);
        }
        self.data.push('z');
    }

    /// An open line through the points.
    pub(crate) fn line(&mut self, points: impl IntoIterator<Item = BackendCoord>) {
        let mut last: Option<BackendCoord> = None;
        let mut drawn = false;
        for point in points {
            match last {
                None => self.begin(point),
                // A step of nothing adds characters and no ink.
                Some(here) if here == point => continue,
                Some(here) => {
                    if !drawn {
                        self.data.push('l');
                        drawn = true;
                    }
                    self.number(i64::from(point.0) - i64::from(here.0));
                    self.number(i64::from(point.1) - i64::from(here.1));
                }
            }
            last = Some(point);
        }
    }

    /// A closed line through the points.
    pub(crate) fn polygon(&mut self, points: impl IntoIterator<Item = BackendCoord>) {
        let before = self.data.len();
        self.line(points);
        if self.data.len() > before {
            self.data.push('z');
        }
    }

    /// Slanted lines across a rectangle.
    ///
    /// All rectangles of a drawing share one set of lines, as if it lay under the page, so neighbours do not clash.
    pub(crate) fn hatch(&mut self, from: BackendCoord, to: BackendCoord, hatch: Hatch) {
        let (left, right) = (from.0.min(to.0) + INSET, from.0.max(to.0) - INSET);
        let (top, bottom) = (from.1.min(to.1) + INSET, from.1.max(to.1) - INSET);
        if left >= right || top >= bottom {
            return;
        }
        // A rising line holds x + y, a falling one x - y; mirrored upside down, it is a rising one.
        let (step, low, high, mirrored) = match hatch {
            Hatch::Rising(step) => (step, top, bottom, false),
            Hatch::Falling(step) => (step, -bottom, -top, true),
        };
        let step = i32::from(step.max(1));
        let first = (left + low).div_euclid(step) + 1;
        let last = (right + high - 1).div_euclid(step);
        for line in first..=last {
            let sum = line * step;
            let (start, end) = (left.max(sum - high), right.min(sum - low));
            let y = |x: i32| if mirrored { x - sum } else { sum - x };
            self.line([(start, y(start)), (end, y(end))]);
        }
    }

    fn begin(&mut self, point: BackendCoord) {
        self.data.push('M');
        self.number(point.0.into());
        self.number(point.1.into());
    }

    /// A minus sign or a command letter already parts two numbers; otherwise a space does.
    fn number(&mut self, tenths: i64) {
        if tenths >= 0 && self.data.ends_with(|last: char| last.is_ascii_digit()) {
            self.data.push(' ');
        }
        write!(self.data, "{}", Tenths(tenths)).expect("writing to a String cannot fail");
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_line_is_relative_and_leaves_out_points_that_repeat() {
        let mut outline = Outline::default();
        outline.line([(10, 10), (10, 10), (15, 8), (15, 8), (35, 28)]);
        assert_eq!(outline.take(), "M1 1l.5-.2 2 2");
        assert_eq!(outline.take(), "");
    }

    #[track_caller]
    fn hatched(to: BackendCoord, hatch: Hatch, expected: &str) {
        let mut outline = Outline::default();
        outline.hatch((-INSET, -INSET), (to.0 + INSET, to.1 + INSET), hatch);
        assert_eq!(outline.take(), expected);
    }

    #[test]
    fn hatch_lines_end_at_the_sides_of_the_rectangle() {
        hatched((40, 20), Hatch::Rising(20), "M0 2l2-2M2 2l2-2");
        hatched((40, 20), Hatch::Falling(20), "M0 0l2 2M2 0l2 2");
    }

    #[test]
    fn a_rectangle_too_small_for_a_line_has_none() {
        hatched((0, 20), Hatch::Rising(20), "");
        hatched((3, 3), Hatch::Rising(20), "");
    }

    #[test]
    fn an_empty_polygon_writes_nothing() {
        let mut outline = Outline::default();
        outline.polygon([]);
        assert_eq!(outline.take(), "");
    }
}
