//! The only place that prints or writes files.

use super::Stop;
use acroshift::render::{csv, html, json};
use acroshift::report::{Audience, ScreenReport};
use anyhow::Context;
use std::fs::{self, DirBuilder, File, OpenOptions};
use std::io::{self, BufWriter, StdoutLock, Write};
use std::path::{Path, PathBuf};

/// Standard output, for results.
pub(super) fn results() -> BufWriter<StdoutLock<'static>> {
    BufWriter::new(io::stdout().lock())
}

/// Messages on standard error. Where nobody can read them the work goes on: the exit code tells.
pub(super) fn tell(text: &[u8]) {
    let _ = io::stderr().lock().write_all(text);
}

/// Did the reader of our output go away?
pub(super) fn is_broken_pipe(error: &anyhow::Error) -> bool {
    error.chain().any(|cause| {
        cause
            .downcast_ref::<io::Error>()
            .is_some_and(|io| io.kind() == io::ErrorKind::BrokenPipe)
            || cause
                .downcast_ref::<serde_json::Error>()
                .is_some_and(|json| json.io_error_kind() == Some(io::ErrorKind::BrokenPipe))
    })
}

/// An existing folder with files in it is not touched without `--force`.
pub(super) fn check_folder(folder: &Path, force: bool, audience: Audience) -> Result<(), Stop> {
    if folder.file_name().is_none() {
        return Err(Stop::usage(format!(
            "{} is no name for a new folder",
            folder.display()
        )));
    }
    if folder.exists() && !folder.is_dir() {
        return Err(Stop::usage(format!(
            "{} is a file; name a folder",
            folder.display()
        )));
    }
    if holds_other_audience(folder, audience) {
        return Err(Stop::usage(format!(
            "{} holds a report for another audience; a {} report is not written there, not even with --force; give another --out",
            folder.display(),
            audience.word()
        )));
    }
    let filled = fs::read_dir(folder).is_ok_and(|mut entries| entries.next().is_some());
    if filled && !force {
        return Err(Stop::usage(format!(
            "{} exists and is not empty; give --force to replace its report",
            folder.display()
        )));
    }
    Ok(())
}

/// Does the folder hold a result that was made for somebody else?
fn holds_other_audience(folder: &Path, audience: Audience) -> bool {
    let Ok(text) = fs::read_to_string(folder.join("result.json")) else {
        return false;
    };
    serde_json::from_str::<serde_json::Value>(&text)
        .ok()
        .and_then(|result| Some(result["run"]["audience"].as_str()? != audience.word()))
        .unwrap_or(false)
}

/// Writes every file of a report into a folder beside the target first, so that nothing half-written bears its final name.
pub(super) fn write_folder(folder: &Path, report: &ScreenReport) -> Result<(), Stop> {
    let staging = staging_of(folder)?;
    let written =
        write_staged(&staging, report).and_then(|names| put_in_place(&staging, folder, &names));
    if written.is_err() {
        // The first error is told; that the rest of the staging folder stays is a lesser harm.
        let _ = fs::remove_dir_all(&staging);
    }
    Ok(written?)
}

/// `output/.ward.partial` for `output/ward`.
fn staging_of(folder: &Path) -> Result<PathBuf, Stop> {
    let Some(name) = folder.file_name() else {
        return Err(Stop::usage(format!(
            "{} is no name for a new folder",
            folder.display()
        )));
    };
    let mut staged = std::ffi::OsString::from(".");
    staged.push(name);
    staged.push(".partial");
    Ok(folder.with_file_name(staged))
}

fn write_staged(staging: &Path, report: &ScreenReport) -> anyhow::Result<Vec<&'static str>> {
    if staging.exists() {
        fs::remove_dir_all(staging).with_context(|| format!("removing {}", staging.display()))?;
    }
    if let Some(parent) = staging
        .parent()
        .filter(|parent| !parent.as_os_str().is_empty())
    {
        fs::create_dir_all(parent).with_context(|| format!("making {}", parent.display()))?;
    }
    private_folder(staging)?;
    let mut names = vec!["report.html", "result.json", "findings.csv"];
    write_file(staging, "report.html", |out| Ok(html::write(report, out)?))?;
    write_file(staging, "result.json", |out| Ok(json::write(report, out)?))?;
    write_file(staging, "findings.csv", |out| Ok(csv::write(report, out)?))?;
    names.extend(write_tables(staging, report)?);
    Ok(names)
}

#[cfg(feature = "parquet")]
fn write_tables(staging: &Path, report: &ScreenReport) -> anyhow::Result<Vec<&'static str>> {
    use acroshift::render::parquet;
    for (name, table) in parquet::TABLES {
        write_file(staging, name, |out| Ok(parquet::write(table, report, out)?))?;
    }
    Ok(parquet::TABLES.iter().map(|(name, _)| *name).collect())
}

#[cfg(not(feature = "parquet"))]
#[expect(
    clippy::unnecessary_wraps,
    reason = "the same signature with and without the feature"
)]
fn write_tables(_staging: &Path, _report: &ScreenReport) -> anyhow::Result<Vec<&'static str>> {
    Ok(Vec::new())
}

fn put_in_place(staging: &Path, folder: &Path, names: &[&str]) -> anyhow::Result<()> {
    if !folder.exists() {
        return fs::rename(staging, folder).with_context(|| format!("making {}", folder.display()));
    }
    for name in names {
        let target = folder.join(name);
        fs::rename(staging.join(name), &target)
            .with_context(|| format!("writing {}", target.display()))?;
    }
    fs::remove_dir_all(staging).with_context(|| format!("removing {}", staging.display()))
}

fn write_file(
    staging: &Path,
    name: &str,
    write: impl FnOnce(&mut BufWriter<File>) -> anyhow::Result<()>,
) -> anyhow::Result<()> {
    let path = staging.join(name);
    let context = || format!("writing {}", path.display());
    let mut out = BufWriter::new(private_file(&path).with_context(context)?);
    write(&mut out).with_context(context)?;
    out.flush().with_context(context)?;
    out.get_ref().sync_all().with_context(context)
}

/// A file that only its owner may read.
fn private_file(path: &Path) -> io::Result<File> {
    let mut options = OpenOptions::new();
    options.write(true).create_new(true);
    #[cfg(unix)]
    std::os::unix::fs::OpenOptionsExt::mode(&mut options, 0o600);
    options.open(path)
}

/// A folder that only its owner may enter.
fn private_folder(path: &Path) -> anyhow::Result<()> {
    let mut builder = DirBuilder::new();
    #[cfg(unix)]
    std::os::unix::fs::DirBuilderExt::mode(&mut builder, 0o700);
    builder
        .create(path)
        .with_context(|| format!("making {}", path.display()))
}
