//! Cautions that stand in every report: fixed text from one file.

use serde::Deserialize;

/// One caution.
#[derive(Debug, Clone, PartialEq, Eq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Caution {
    /// Its title.
    pub title: String,
    /// The line for the first page.
    pub short: String,
    /// The text for the appendix.
    pub text: String,
}

/// The block of cautions.
#[derive(Debug, Clone, PartialEq, Eq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Cautions {
    /// Version of the text.
    pub version: u32,
    /// The sentence that ends every report.
    pub device: String,
    /// The cautions.
    #[serde(rename = "caution")]
    pub list: Vec<Caution>,
}

impl Cautions {
    /// The fixed text.
    ///
    /// # Panics
    ///
    /// Never in a built program: a test reads the file.
    pub fn fixed() -> Self {
        toml::from_str(include_str!("cautions.toml")).expect("the embedded file is read by a test")
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn all_cautions_are_there() {
        let cautions = Cautions::fixed();
        assert_eq!(cautions.list.len(), 9);
        assert!(cautions.device.contains("Not a medical device"));
    }
}
