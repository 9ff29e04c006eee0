//! Files of the command line: rosters and the site file.

use super::Stop;
use acroshift::diagnostic::{Code, Diagnostic};
use acroshift::intake::site::Site;
use acroshift::intake::{self, Input, Intake, Reading};
use acroshift::roster::Roster;
use acroshift::source::Origin;
use acroshift::timeline::LightLogs;
use std::io::Read;
use std::path::{Path, PathBuf};

pub(super) fn site(path: Option<&Path>) -> Result<Site, Stop> {
    let Some(path) = path else {
        return Ok(Site::default());
    };
    let text = std::fs::read_to_string(path)
        .map_err(|error| Stop::usage(format!("{}: {error}", path.display())))?;
    intake::site::read(&text).map_err(|error| Stop::usage(format!("{}: {error}", path.display())))
}

/// Measured light, its file, and what is wrong with it.
#[derive(Default)]
pub(super) struct ReadLight {
    pub(super) logs: LightLogs,
    pub(super) file: Option<File>,
    pub(super) diagnostics: Vec<Diagnostic>,
}

/// Reads the light log of a roster's workers, where one is given.
pub(super) fn light_log(path: Option<&Path>, roster: Option<&Roster>) -> ReadLight {
    let (Some(path), Some(roster)) = (path, roster) else {
        return ReadLight::default();
    };
    let file = read_file(path);
    let (logs, diagnostics) = match &file.refused {
        Some(reason) => (LightLogs::default(), vec![unreadable(&file, reason)]),
        None => intake::light_log::read(&file.input(), roster),
    };
    ReadLight {
        logs,
        file: Some(file),
        diagnostics,
    }
}

fn unreadable(file: &File, reason: &str) -> Diagnostic {
    let origin = Origin::File {
        file: file.name.clone(),
    };
    Diagnostic::new(
        Code::Unreadable,
        origin,
        format!("cannot be read: {reason}"),
    )
}

/// A file, or why it could not be read.
pub(super) struct File {
    pub(super) name: String,
    pub(super) bytes: Vec<u8>,
    pub(super) refused: Option<String>,
}

impl File {
    fn input(&self) -> Input<'_> {
        Input {
            name: &self.name,
            bytes: &self.bytes,
        }
    }
}

pub(super) fn read(paths: &[PathBuf]) -> Vec<File> {
    paths.iter().map(|path| read_file(path)).collect()
}

fn read_file(path: &Path) -> File {
    if path.as_os_str() == "-" {
        let mut bytes = Vec::new();
        let refused = std::io::stdin().read_to_end(&mut bytes).err();
        return File {
            name: "standard input".to_owned(),
            bytes,
            refused: refused.map(|error| error.to_string()),
        };
    }
    let name = path.file_name().map_or_else(
        || path.display().to_string(),
        |name| name.to_string_lossy().into_owned(),
    );
    let (bytes, refused) = if path.is_dir() {
        (
            Vec::new(),
            Some("is a folder; name the roster files in it".to_owned()),
        )
    } else {
        match std::fs::read(path) {
            Ok(bytes) => (bytes, None),
            Err(error) => (Vec::new(), Some(error.to_string())),
        }
    };
    File {
        name,
        bytes,
        refused,
    }
}

pub(super) fn rosters(files: &[File], reading: &Reading) -> Intake {
    let inputs: Vec<Input<'_>> = files
        .iter()
        .filter(|file| file.refused.is_none())
        .map(File::input)
        .collect();
    let mut read = intake::read(&inputs, reading);
    for file in files {
        if let Some(reason) = &file.refused {
            read.diagnostics.insert(0, unreadable(file, reason));
        }
    }
    read
}
