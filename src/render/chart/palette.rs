//! The looks of the figures: one class for each, in the colours of Okabe and Ito.
//!
//! On paper only black, grey and blue carry text. Vermilion and purple draw lines and hatches; sky fills, with a dark outline.
//! The purple of lines is darkened on paper to 5:1, because a thin line in the published purple is faint in print.
//! Everything also differs in hatch, dash or lightness, so that a greyscale print reads the same.

use crate::render::svg::{Hatch, Look};

/// Thin lines behind the data.
pub(super) const GRID: Look = Look::plain("grid");
/// Axis lines and frames.
pub(super) const AXIS: Look = Look::plain("axis");
/// Text of second rank.
pub(super) const SOFT: Look = Look::plain("soft");
/// Text with a rim in the colour of the paper, to stay readable on top of other things.
pub(super) const HALO: Look = Look::plain("halo");
/// Text of second rank on top of other things.
pub(super) const SOFT_HALO: Look = Look::plain("halo soft");
/// Strokes of the mark that says a bar is cut.
pub(super) const BREAK: Look = Look::plain("axis break");
/// The colour of the paper, to leave a gap in something.
pub(super) const PAPER: Look = Look::plain("paper");
/// Duty: blue hatch.
pub(super) const DUTY: Look = Look::hatched("duty", Hatch::Rising(55));
/// Sleep: solid blue.
pub(super) const SLEEP: Look = Look::plain("sleep");
/// Biological night: purple outline.
pub(super) const NIGHT: Look = Look::plain("night");
/// An hour that the local day does not have, or a date outside the roster.
pub(super) const VOID: Look = Look::plain("void");
/// Compressed window: dense vermilion hatch.
pub(super) const COMPRESSED: Look = Look::hatched("compressed", Hatch::Falling(45));
/// Narrow window: sky with sparse dots; lines would be taken for limits.
pub(super) const NARROW: Look = Look::plain("narrow");
/// Window without a criterion met: plain pale fill.
pub(super) const UNMARKED: Look = Look::plain("unmarked");
/// Window that the roster does not allow to judge: dashed outline, no fill.
pub(super) const NOT_JUDGED: Look = Look::plain("not-judged");
/// Limit lines.
pub(super) const LIMIT: Look = Look::plain("limit");
/// 5-95 % band of a curve.
pub(super) const BAND: Look = Look::plain("band");
/// Median of a curve.
pub(super) const MEDIAN: Look = Look::plain("median");
/// Ray of the habitual value.
pub(super) const HABITUAL: Look = Look::plain("habitual");
/// Markers by case.
pub(super) const MARKS: [Look; 3] = [
    Look::plain("mark-a"),
    Look::plain("mark-b"),
    Look::plain("mark-c"),
];
/// Ranges by case.
pub(super) const RANGES: [Look; 3] = [
    Look::plain("range-a"),
    Look::plain("range-b"),
    Look::plain("range-c"),
];

/// Styles of all figures; a page holds them once, in a `<style>` in its head.
///
/// Every rule is bound to the classes `acro-chart` (the figures), `acro-defs` (the patterns) and
/// `acro-scroll` (a box around a figure that lets a narrow screen scroll sideways rather than shrink the text; give it `tabindex="0"`).
/// The dark colours are for screens only, so a print from a dark screen is black on white.
pub const CHART_CSS: &str = concat!(
    ".acro-scroll{overflow-x:auto}",
    ".acro-chart{display:block;width:100%;height:auto;max-width:62rem;min-width:35rem;color:#000;fill:currentColor;",
    "font-family:\"Helvetica Neue\",Arial,\"Liberation Sans\",sans-serif;forced-color-adjust:none}",
    ".acro-chart .paper{fill:#fff}",
    ".acro-chart .soft{fill:#595959}",
    ".acro-chart .halo{paint-order:stroke;stroke:#fff;stroke-width:4;stroke-linejoin:round}",
    ".acro-chart .grid{fill:none;stroke:#c8c8c8;stroke-width:.8}",
    ".acro-chart .axis{fill:none;stroke:currentColor;stroke-width:1}",
    ".acro-chart .duty{fill:#fff;stroke:#0072b2;stroke-width:1}",
    ".acro-chart .duty .lines{stroke-width:1.4}",
    ".acro-chart .sleep{fill:#0072b2}",
    ".acro-chart .night{fill:none;stroke:#b0508a;stroke-width:1.8;stroke-linejoin:round}",
    ".acro-chart .void{fill:url(#acro-fill-void);stroke:#767676;stroke-width:.8;stroke-dasharray:2 2}",
    ".acro-chart .compressed{fill:#fff;stroke:#000;stroke-width:1.2}",
    ".acro-chart .compressed .lines{stroke:#d55e00;stroke-width:2.3}",
    ".acro-chart .narrow{fill:url(#acro-fill-narrow);stroke:#000;stroke-width:1.2}",
    ".acro-chart .unmarked{fill:#efefef;stroke:#444;stroke-width:1}",
    ".acro-chart .not-judged{fill:none;stroke:#000;stroke-width:1.2;stroke-dasharray:4 3}",
    ".acro-chart .limit{fill:none;stroke:#000;stroke-width:1}",
    ".acro-chart .band{fill:#56b4e9;stroke:#0072b2;stroke-width:.6}",
    ".acro-chart .median{fill:none;stroke:#000;stroke-width:1.4;stroke-linejoin:round}",
    ".acro-chart .habitual{fill:none;stroke:#000;stroke-width:1.6;stroke-dasharray:7 4}",
    ".acro-chart .mark-a{fill:#0072b2;stroke:#fff;stroke-width:.7}",
    ".acro-chart .mark-b{fill:#fff;stroke:#000;stroke-width:1.3}",
    ".acro-chart .mark-c{fill:#cc79a7;stroke:#000;stroke-width:1}",
    ".acro-chart .range-a{fill:none;stroke:#0072b2;stroke-width:1.4}",
    ".acro-chart .range-b{fill:none;stroke:#595959;stroke-width:1.2;stroke-dasharray:3 2}",
    ".acro-chart .range-c{fill:none;stroke:#b0508a;stroke-width:1.2;stroke-dasharray:1 2}",
    ".acro-defs{position:absolute;width:0;height:0;overflow:hidden}",
    "#acro-fill-narrow rect{fill:#56b4e9}",
    "#acro-fill-narrow circle{fill:#000}",
    "#acro-fill-void rect{fill:none}",
    "#acro-fill-void path{stroke:#767676;stroke-width:.8}",
    "@media screen and (prefers-color-scheme:dark){",
    ".acro-chart{color:#eee}",
    ".acro-chart .paper{fill:#161616}",
    ".acro-chart .soft{fill:#b5b5b5}",
    ".acro-chart .halo{stroke:#161616}",
    ".acro-chart .grid{stroke:#4a4a4a}",
    ".acro-chart .duty{fill:#161616;stroke:#56b4e9}",
    ".acro-chart .sleep{fill:#56b4e9}",
    ".acro-chart .night{stroke:#cc79a7}",
    ".acro-chart .void{stroke:#999}",
    ".acro-chart .compressed,.acro-chart .narrow,.acro-chart .not-judged,.acro-chart .limit,.acro-chart .habitual{stroke:#eee}",
    ".acro-chart .compressed{fill:#161616}",
    ".acro-chart .unmarked{fill:#333;stroke:#bbb}",
    ".acro-chart .band{fill:#0b5c8a;stroke:#56b4e9}",
    ".acro-chart .median{stroke:#fff}",
    ".acro-chart .mark-a{fill:#56b4e9;stroke:#161616}",
    ".acro-chart .mark-b{fill:#161616;stroke:#eee}",
    ".acro-chart .range-a{stroke:#56b4e9}",
    ".acro-chart .range-b{stroke:#bbb}",
    ".acro-chart .range-c{stroke:#cc79a7}",
    "#acro-fill-narrow rect{fill:#0072b2}",
    "#acro-fill-narrow circle{fill:#fff}",
    "#acro-fill-void path{stroke:#999}",
    "}",
    "@media print{.acro-chart{min-width:0;max-width:none}.acro-scroll{overflow:visible}}",
);

macro_rules! definitions {
    () => {
        concat!(
            "<defs>",
            r##"<pattern id="acro-fill-narrow" width="7" height="7" patternUnits="userSpaceOnUse"><rect width="7" height="7"/><circle cx="2" cy="2" r=".9"/><circle cx="5.5" cy="5.5" r=".9"/></pattern>"##,
            r##"<pattern id="acro-fill-void" width="6" height="6" patternUnits="userSpaceOnUse"><rect width="6" height="6"/><path d="M0 0l6 6M0 6l6-6"/></pattern>"##,
            "</defs>",
        )
    };
}

/// The patterns, for a file of its own.
pub(super) const DEFINITIONS: &str = definitions!();

/// The fill patterns that all figures of a page share: an invisible `<svg>`, to be put once before the first figure.
///
/// It has no size rather than `display:none`, because several browsers do not draw patterns that stand in a hidden element.
pub fn pattern_definitions() -> &'static str {
    concat!(
        r#"<svg class="acro-defs" width="0" height="0" aria-hidden="true" focusable="false">"#,
        definitions!(),
        "</svg>\n"
    )
}

#[cfg(test)]
mod tests {
    use super::*;

    const LOOKS: [Look; 19] = [
        GRID, AXIS, SOFT, HALO, SOFT_HALO, BREAK, PAPER, DUTY, SLEEP, NIGHT, VOID, COMPRESSED,
        NARROW, UNMARKED, NOT_JUDGED, LIMIT, BAND, MEDIAN, HABITUAL,
    ];

    #[test]
    fn every_class_has_a_look() {
        for look in LOOKS.iter().chain(&MARKS).chain(&RANGES) {
            let class = look.class.split(' ').next().unwrap();
            let is_styled =
                |rule: &str| CHART_CSS.contains(&format!(".acro-chart .{class}{rule}{{"));
            assert!(is_styled(""), "{class}");
            assert_eq!(is_styled(" .lines"), look.hatch.is_some(), "{class}");
        }
    }

    #[test]
    fn every_pattern_is_defined_once_and_used() {
        for name in ["narrow", "void"] {
            let defined = format!("id=\"acro-fill-{name}\"");
            assert_eq!(pattern_definitions().matches(&defined).count(), 1, "{name}");
            assert_eq!(
                CHART_CSS
                    .matches(&format!("url(#acro-fill-{name})"))
                    .count(),
                1,
                "{name}"
            );
        }
    }

    #[test]
    fn braces_of_the_style_sheet_are_balanced_and_it_can_stand_in_xml() {
        assert_eq!(
            CHART_CSS.matches('{').count(),
            CHART_CSS.matches('}').count()
        );
        assert!(!CHART_CSS.contains(['<', '&']));
    }

    #[test]
    fn four_classes_of_window_have_four_fills() {
        let fill = |look: Look| {
            let selector = format!(".acro-chart .{}{{", look.class);
            let (_, rule) = CHART_CSS.split_once(&selector).unwrap();
            (rule.split([';', '}']).next().unwrap(), look.hatch.is_some())
        };
        let mut fills = [COMPRESSED, NARROW, UNMARKED, NOT_JUDGED].map(fill);
        fills.sort_unstable();
        assert!(fills.windows(2).all(|pair| pair[0] != pair[1]), "{fills:?}");
    }
}
