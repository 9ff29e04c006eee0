//! What the charts show, free of any format.
//!
//! Hours are elapsed hours unless a field says that it is a clock hour.
//! A figure carries its own title and a text alternative, because a picture that cannot be read aloud is not finished.

/// A stretch of time on a figure's own axis, hours.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Span {
    /// Where it begins, hours on the axis.
    pub from_h: f64,
    /// Where it ends, hours on the axis.
    pub to_h: f64,
}

/// Median and 5-95 % range of the ensemble members.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Band {
    /// Median of the members.
    pub median: f64,
    /// 5th percentile of the members.
    pub p05: f64,
    /// 95th percentile of the members.
    pub p95: f64,
}

/// How a bar of the recovery strip is drawn: one look per class of window.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum BarLook {
    /// A window that met a criterion for compression.
    Compressed,
    /// A window that met a narrower advice or model criterion only.
    Narrow,
    /// No criterion met.
    Unmarked,
    /// The roster does not hold what is needed to judge the window.
    NotJudged,
}

/// One recovery window as a bar.
#[derive(Debug, Clone, PartialEq)]
pub struct WindowBar {
    /// When the window begins, in words: `Tue 10 Mar 21:30`.
    pub start: String,
    /// Length in elapsed hours.
    pub hours: f64,
    /// Class of the window.
    pub look: BarLook,
}

/// A limit drawn across the recovery strip.
#[derive(Debug, Clone, PartialEq)]
pub struct LimitLine {
    /// Position, hours.
    pub hours: f64,
    /// What the limit is: `11 h`.
    pub label: String,
}

/// The measured gaps of one worker against the limits.
#[derive(Debug, Clone, PartialEq)]
pub struct RecoveryStrip {
    /// Title of the figure.
    pub title: String,
    /// Text alternative.
    pub description: String,
    /// One bar per window, in order of time.
    pub bars: Vec<WindowBar>,
    /// Limits, ascending.
    pub limits: Vec<LimitLine>,
}

/// One local date of the raster.
#[derive(Debug, Clone, PartialEq)]
pub struct RasterRow {
    /// The date: `Mon 09 Mar`.
    pub label: String,
    /// Length of the local day: 24, or 23 or 25 h at a clock change.
    pub day_h: f64,
    /// Duty, hours since local midnight.
    pub work: Vec<Span>,
    /// Times at which at least half of the members sleep, hours since local midnight.
    pub sleep: Vec<Span>,
    /// Median modelled biological night, hours since local midnight.
    pub biological_night: Vec<Span>,
}

/// Double-plotted raster: each row shows a date and the date after it.
#[derive(Debug, Clone, PartialEq)]
pub struct Raster {
    /// Title of the figure.
    pub title: String,
    /// Text alternative.
    pub description: String,
    /// One row per local date, in order.
    pub rows: Vec<RasterRow>,
}

/// A dated tick of the cortisol curve.
#[derive(Debug, Clone, PartialEq)]
pub struct DayTick {
    /// Position on the axis, hours.
    pub at_h: f64,
    /// The date: `Mon 09`.
    pub label: String,
}

/// One point of the cortisol curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CurvePoint {
    /// Position on the axis, hours.
    pub at_h: f64,
    /// Total serum cortisol, nmol/L.
    pub nmol_l: Band,
}

/// Modelled cortisol over the roster with its curve band.
#[derive(Debug, Clone, PartialEq)]
pub struct CortisolCurve {
    /// Title of the figure.
    pub title: String,
    /// Text alternative.
    pub description: String,
    /// Curve and band, ascending in time.
    pub points: Vec<CurvePoint>,
    /// Duty on the same axis.
    pub work: Vec<Span>,
    /// Sleep on the same axis.
    pub sleep: Vec<Span>,
    /// Local midnights.
    pub days: Vec<DayTick>,
}

/// `CBTmin` of one date on the clock face.
#[derive(Debug, Clone, PartialEq)]
pub struct PhaseDay {
    /// The date: `Mon 09 Mar`.
    pub label: String,
    /// Clock hour of `CBTmin`; the band may run past midnight (values below 0 or above 24).
    pub clock_h: Band,
    /// Said when the members see morning daylight in one half and not in the other.
    pub case: Option<String>,
}

/// Modelled `CBTmin` by day on a 24-h clock face.
#[derive(Debug, Clone, PartialEq)]
pub struct PhaseClock {
    /// Title of the figure.
    pub title: String,
    /// Text alternative.
    pub description: String,
    /// Median habitual `CBTmin`, clock hour.
    pub habitual_h: f64,
    /// One entry per date and case.
    pub days: Vec<PhaseDay>,
}
