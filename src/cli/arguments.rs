//! What was typed.

use acroshift::physiology::PacemakerName;
use chrono::NaiveDate;
use clap::{Args, Parser, Subcommand, ValueEnum};
use std::path::PathBuf;

const EXAMPLE: &str = "Example, on the demo roster:
  acroshift screen rosters/tern-quay-ward.csv --rules uk-wtr,adv-nordic,adv-review,adv-hse --out output/ward

Exit codes: 0 done; 1 findings at or above --fail-on; 2 wrong usage; 3 input errors; 4 the computer refused.";

const SAMPLE_EXAMPLE: &str = "Example, a morning value of a nurse of the demo ward:
  acroshift sample rosters/tern-quay-ward.csv --audience clinician --worker N03 --at 2026-03-27T09:00 --matrix serum --value 310 --unit nmol/L

Exit codes: 0 done; 2 wrong usage or the wrong audience; 3 input errors, or the roster does not tell enough.";

const RHYTHM_EXAMPLE: &str = "Example, the saliva of three invented workers:
  acroshift rhythm rosters/tern-quay-saliva.csv --periods 24,12 --log

Exit codes: 0 done; 2 wrong usage; 3 input errors.";

const VALIDATE_EXAMPLE: &str = "Example, the table of VALIDATION.md:
  acroshift validate --format markdown";

const EXPLAIN_EXAMPLE: &str = "Example, a rule that the demo roster does not meet:
  acroshift explain uk-daily-rest";

/// Names the compressed recovery windows of a work roster, with law, advice and model side by side.
#[derive(Debug, Parser)]
#[command(name = "acroshift", version, about, arg_required_else_help = true)]
pub(crate) struct Arguments {
    /// What to do.
    #[command(subcommand)]
    pub(crate) command: Command,
}

/// The verbs.
#[derive(Debug, Subcommand)]
pub(crate) enum Command {
    /// Screen rosters: which recovery windows are compressed, and why.
    #[command(after_help = EXAMPLE)]
    Screen(ScreenOptions),
    /// Place a cortisol sample in the biological time of a worker: band, timing, next comparable times.
    #[command(after_help = SAMPLE_EXAMPLE)]
    Sample(SampleOptions),
    /// Fit the rhythm of measured cortisol: cosinor, saliva measures, population.
    #[command(after_help = RHYTHM_EXAMPLE)]
    Rhythm(RhythmOptions),
    /// Run published experiments through the models: observed against modelled, misses included.
    #[command(after_help = VALIDATE_EXAMPLE)]
    Validate(ValidateOptions),
    /// Explain a code: a problem of the input, a finding, a rule or a rule pack.
    #[command(after_help = EXPLAIN_EXAMPLE)]
    Explain(ExplainOptions),
}

/// Options of `explain`.
#[derive(Debug, Args)]
pub(crate) struct ExplainOptions {
    /// A code as the program prints it: T21, compressed-rest, uk-daily-rest, uk-wtr.
    #[arg(value_name = "CODE")]
    pub(crate) code: String,
}

/// Options of `sample`.
#[derive(Debug, Args)]
pub(crate) struct SampleOptions {
    /// Rosters: long tables as .csv or .xlsx; - reads standard input.
    #[arg(required = true, value_name = "ROSTER")]
    pub(crate) rosters: Vec<PathBuf>,

    /// Worker, as the roster names it.
    #[arg(long, value_name = "NAME")]
    pub(crate) worker: String,

    /// Local date and time of the sample: 2026-03-27T09:00.
    #[arg(long, value_name = "TIME")]
    pub(crate) at: String,

    /// What is sampled.
    #[arg(long, value_enum)]
    pub(crate) matrix: MatrixName,

    /// A measured value.
    #[arg(long, requires = "unit")]
    pub(crate) value: Option<f64>,

    /// Its unit: nmol/L, ug/dL or ng/mL.
    #[arg(long)]
    pub(crate) unit: Option<String>,

    /// Minimum of body temperature known from outside, clock time; melatonin onset + 7 h. Needs --sleep.
    #[arg(long, value_name = "HH:MM", requires = "sleep")]
    pub(crate) cbtmin: Option<String>,

    /// Habitual sleep beside it: 08:00-16:00.
    #[arg(long, value_name = "HH:MM-HH:MM", requires = "cbtmin")]
    pub(crate) sleep: Option<String>,

    /// List the next times at which a sample would be comparable with a day worker's.
    #[arg(long)]
    pub(crate) next_window: bool,

    /// IANA time zone of the workplace, where the roster names none.
    #[arg(long, value_name = "IANA")]
    pub(crate) zone: Option<String>,

    /// Site file.
    #[arg(long, value_name = "SITE.toml")]
    pub(crate) site: Option<PathBuf>,

    /// Light measured at the eye: a table of worker, time, lux.
    #[arg(long, value_name = "LIGHT.csv")]
    pub(crate) light_log: Option<PathBuf>,

    /// Simulated people; rounded up to a multiple of 8.
    #[arg(long, value_name = "N", default_value_t = 64, value_parser = clap::value_parser!(u16).range(1..=4096))]
    pub(crate) members: u16,

    /// Seed of the simulated people.
    #[arg(long, value_name = "N", default_value_t = 1)]
    pub(crate) seed: u64,

    /// For whom; a sample is for the clinician only.
    #[arg(long, value_enum, default_value_t = AudienceName::Planner)]
    pub(crate) audience: AudienceName,

    /// What is printed on standard output.
    #[arg(long, value_enum, default_value_t = Format::Text)]
    pub(crate) format: Format,
}

/// What is sampled.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub(crate) enum MatrixName {
    /// Total cortisol.
    Serum,
    /// Free cortisol.
    Saliva,
}

/// Options of `rhythm`.
#[derive(Debug, Args)]
pub(crate) struct RhythmOptions {
    /// Table of samples: subject, time, value, unit and, if known, matrix, assay and the time of waking; - reads standard input.
    #[arg(value_name = "SAMPLES")]
    pub(crate) samples: PathBuf,

    /// Periods in hours, separated by commas.
    #[arg(long, value_name = "H,...", value_delimiter = ',', default_values_t = [24.0])]
    pub(crate) periods: Vec<f64>,

    /// Fit the natural logarithm: geometric MESOR, peak over trough.
    #[arg(long)]
    pub(crate) log: bool,

    /// Hour from which phases are counted: 0 for midnight, or a person's mid-sleep.
    #[arg(
        long,
        value_name = "H",
        default_value_t = 0.0,
        allow_negative_numbers = true
    )]
    pub(crate) reference: f64,

    /// Fit the rest when some rows cannot be used.
    #[arg(long)]
    pub(crate) allow_partial: bool,

    /// What is printed on standard output.
    #[arg(long, value_enum, default_value_t = RhythmFormat::Text)]
    pub(crate) format: RhythmFormat,
}

/// What is printed on standard output.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub(crate) enum RhythmFormat {
    /// Lines for the terminal.
    Text,
    /// Schema acroshift.rhythm/1.
    Json,
    /// One row per subject and period.
    Csv,
}

/// Options of `validate`.
#[derive(Debug, Args)]
pub(crate) struct ValidateOptions {
    /// Experiments of your own, in the format of src/validation/experiments.toml [default: those of the program].
    #[arg(long, value_name = "FILE.toml")]
    pub(crate) experiments: Option<PathBuf>,

    /// Model of the body clock; of all four the first one is scored.
    #[arg(long, value_enum, value_name = "NAME", default_value_t = PacemakerOption::All)]
    pub(crate) pacemaker: PacemakerOption,

    /// Parameters in the place of those of the program: a file, or hpa-cascade-measured.
    #[arg(long, value_name = "FILE.toml")]
    pub(crate) parameters: Vec<String>,

    /// Simulated people; rounded up to a multiple of 8.
    #[arg(long, value_name = "N", default_value_t = 32, value_parser = clap::value_parser!(u16).range(1..=4096))]
    pub(crate) members: u16,

    /// Seed of the simulated people.
    #[arg(long, value_name = "N", default_value_t = 1)]
    pub(crate) seed: u64,

    /// What is printed on standard output.
    #[arg(long, value_enum, default_value_t = TableFormat::Text)]
    pub(crate) format: TableFormat,
}

/// What is printed on standard output.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub(crate) enum TableFormat {
    /// Lines for the terminal.
    Text,
    /// A table for documents.
    Markdown,
    /// Schema acroshift.validate/1.
    Json,
    /// One row per outcome and pacemaker.
    Csv,
    /// A page of its own.
    Html,
}

/// Options of `screen`.
#[derive(Debug, Args)]
pub(crate) struct ScreenOptions {
    /// Rosters: long tables as .csv or .xlsx; - reads standard input.
    #[arg(required = true, value_name = "ROSTER")]
    pub(crate) rosters: Vec<PathBuf>,

    /// IANA time zone of the workplace, where the roster names none: Europe/London.
    #[arg(long, value_name = "IANA")]
    pub(crate) zone: Option<String>,

    /// First date to use (year-month-day).
    #[arg(long, value_name = "DATE")]
    pub(crate) from: Option<NaiveDate>,

    /// Last date to use (year-month-day).
    #[arg(long, value_name = "DATE")]
    pub(crate) to: Option<NaiveDate>,

    /// Site file: zone, rules, task light, commute, morning daylight, declared derogations.
    #[arg(long, value_name = "SITE.toml")]
    pub(crate) site: Option<PathBuf>,

    /// Light measured at the eye: a table of worker, time, lux; for the clinician only.
    #[arg(long, value_name = "LIGHT.csv")]
    pub(crate) light_log: Option<PathBuf>,

    /// Rule packs, separated by commas [default: eu-wtd,adv-nordic].
    ///
    /// Law: uk-wtr (Great Britain), eu-wtd (EU minimum). Advice: adv-nordic, adv-review, adv-hse.
    #[arg(long, value_name = "PACK,...", value_delimiter = ',')]
    pub(crate) rules: Vec<String>,

    /// Simulated people; rounded up to a multiple of 8.
    #[arg(long, value_name = "N", default_value_t = 32, value_parser = clap::value_parser!(u16).range(1..=4096))]
    pub(crate) members: u16,

    /// Seed of the simulated people.
    #[arg(long, value_name = "N", default_value_t = 1)]
    pub(crate) seed: u64,

    /// Model of the body clock; all shows the spread between the four beside the first.
    #[arg(long, value_enum, value_name = "NAME", default_value_t = PacemakerOption::Hilaire2007)]
    pub(crate) pacemaker: PacemakerOption,

    /// Parameters in the place of those of the program: a file, or hpa-cascade-measured.
    #[arg(long, value_name = "FILE.toml")]
    pub(crate) parameters: Vec<String>,

    /// Threads to use [default: all].
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u16).range(1..=1024))]
    pub(crate) threads: Option<u16>,

    /// For whom the report is.
    #[arg(long, value_enum, default_value_t = AudienceName::Planner)]
    pub(crate) audience: AudienceName,

    /// What is printed on standard output.
    #[arg(long, value_enum, default_value_t = Format::Text)]
    pub(crate) format: Format,

    /// Folder for report.html, result.json, findings.csv and the Parquet tables.
    #[arg(long, value_name = "DIR")]
    pub(crate) out: Option<PathBuf>,

    /// Replace the files of an existing output folder.
    #[arg(long)]
    pub(crate) force: bool,

    /// Report on the rest when some rows cannot be used.
    #[arg(long)]
    pub(crate) allow_partial: bool,

    /// End with exit code 1 when there are findings at or above this level.
    #[arg(long, value_enum, value_name = "LEVEL")]
    pub(crate) fail_on: Option<Level>,
}

/// For whom the report is.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub(crate) enum AudienceName {
    /// Scheduler or manager: no physiology beside a name.
    Planner,
    /// Occupational health, bound to secrecy.
    Clinician,
}

/// A published model of the body clock.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub(crate) enum PacemakerOption {
    /// Light and sleep-wake drive.
    #[value(name = "hilaire2007")]
    Hilaire2007,
    /// Light drive, simpler model.
    #[value(name = "forger1999")]
    Forger1999,
    /// Light drive, revised limit cycle.
    #[value(name = "jewett1999")]
    Jewett1999,
    /// Light drive, macroscopic; read its shifts, its clock times stand early.
    #[value(name = "hannay2019")]
    Hannay2019,
    /// All four; the first is read, the others stand beside it.
    All,
}

impl PacemakerOption {
    /// The pacemakers meant, the one that is read first.
    pub(crate) fn names(self) -> Vec<PacemakerName> {
        match self {
            Self::Hilaire2007 => vec![PacemakerName::Hilaire2007],
            Self::Forger1999 => vec![PacemakerName::Forger1999],
            Self::Jewett1999 => vec![PacemakerName::Jewett1999],
            Self::Hannay2019 => vec![PacemakerName::Hannay2019],
            Self::All => PacemakerName::ALL.to_vec(),
        }
    }
}

/// What is printed on standard output.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub(crate) enum Format {
    /// A summary in words.
    Text,
    /// The whole result as JSON, with its schema named.
    Json,
}

/// A level of attention.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub(crate) enum Level {
    /// Look first.
    Priority,
    /// Look next.
    Review,
    /// For the record.
    Note,
}
