//! Measured cortisol: what was sampled, when, and how much there was.

/// What was or will be sampled.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Matrix {
    /// Saliva: free cortisol.
    Saliva,
    /// Serum or plasma: total cortisol.
    Serum,
}

impl Matrix {
    /// In words.
    pub fn word(self) -> &'static str {
        match self {
            Self::Saliva => "saliva",
            Self::Serum => "serum",
        }
    }
}

/// One sample.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sample {
    /// Hours since the midnight that begins the first date of the series (or as written, where times are decimal hours).
    pub time_h: f64,
    /// Concentration, nmol/L; half the limit where it lies below it.
    pub nmol_l: f64,
    /// Was it below the limit of detection?
    pub below_limit: bool,
    /// Waking of that day, in the same hours.
    pub waking_h: Option<f64>,
}

/// The samples of one subject, matrix, assay and group, ascending in time.
#[derive(Debug, Clone, PartialEq)]
pub struct Series {
    /// Name or number of the subject as written.
    pub subject: String,
    /// What was sampled, where it is said.
    pub matrix: Option<Matrix>,
    /// Assay as written.
    pub assay: Option<String>,
    /// Group of the subject as written.
    pub group: Option<String>,
    /// Samples.
    pub samples: Vec<Sample>,
}

impl Series {
    /// Matrix and assay in words: values of two specimens are never put together.
    pub fn specimen(&self) -> String {
        let matrix = self.matrix.map_or("matrix not said", Matrix::word);
        match &self.assay {
            Some(assay) => format!("{matrix}, {assay}"),
            None => format!("{matrix}, assay not said"),
        }
    }
}
