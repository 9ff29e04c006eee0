//! How much room does a text need, without reading a font?
//!
//! Widths are rounded up from the common sans-serif faces, so a text is rather narrower than its estimate.

/// Distance of two baselines, in font sizes.
pub(crate) const LINE: f64 = 1.25;

/// Estimated width of a text, in the unit of `size`.
pub(crate) fn width(text: &str, size: f64, bold: bool) -> f64 {
    let ems: f64 = text.chars().map(ems).sum();
    ems * size * if bold { 1.08 } else { 1.0 }
}

/// Lines of at most the given width, broken at spaces; a longer word stands alone on its line.
pub(crate) fn wrap(text: &str, size: f64, bold: bool, room: f64) -> Vec<String> {
    let mut lines: Vec<String> = Vec::new();
    for word in text.split_whitespace() {
        match lines.last_mut() {
            Some(line)
                if width(line, size, bold) + width(word, size, bold) + size * 0.3 <= room =>
            {
                line.push(' ');
                line.push_str(word);
            }
            _ => lines.push(word.to_owned()),
        }
    }
    lines
}

fn ems(character: char) -> f64 {
    match character {
        'i' | 'j' | 'l' | '.' | ',' | ':' | ';' | '\'' | '|' | '!' => 0.3,
        ' ' | 'f' | 't' | 'r' | 'I' | '(' | ')' | '/' | '-' => 0.38,
        'm' | 'w' | 'M' | 'W' | '%' | '@' => 0.92,
        'A'..='Z' => 0.7,
        '\u{1100}'.. => 1.0,
        _ => 0.58,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_long_title_is_broken_at_spaces_and_loses_no_word() {
        let title = "Generic adult on line 7, not the person who works it";
        let lines = wrap(title, 10.0, false, 120.0);
        assert!(lines.len() > 1, "{lines:?}");
        assert_eq!(lines.join(" "), title);
        assert!(
            lines.iter().all(|line| width(line, 10.0, false) <= 120.0),
            "{lines:?}"
        );
    }

    #[test]
    fn a_word_wider_than_the_room_stands_alone() {
        assert_eq!(
            wrap("a Donaudampfschiff b", 10.0, false, 30.0),
            ["a", "Donaudampfschiff", "b"]
        );
        assert!(wrap("", 10.0, false, 30.0).is_empty());
    }
}
