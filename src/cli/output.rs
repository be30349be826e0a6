//! Reading scenario text, writing files whole, printing, and what goes wrong with any of them.

use std::fmt::Display;
use std::io::{IsTerminal, Read, Write};
use std::path::Path;
use std::process::ExitCode;

use crate::scenario::Diagnostics;

/// What ends a command early.
pub enum Failure {
    /// The input is wrong: exit status 2.
    Input(String),
    /// The scenario has mistakes, each with its place: exit status 2.
    Scenario(Diagnostics),
    /// The computation could not be done: exit status 3.
    Computation(String),
    /// The reader of our output went away.
    ClosedPipe,
}

impl Failure {
    pub fn input(message: impl Display) -> Self {
        Self::Input(message.to_string())
    }

    pub fn computation(message: impl Display) -> Self {
        Self::Computation(message.to_string())
    }

    /// Prints the failure to standard error and gives the exit status.
    pub fn report(self) -> ExitCode {
        let (message, code) = match self {
            Self::Input(message) => (format!("error: {message}"), 2),
            Self::Scenario(diagnostics) => (diagnostics.render(colour_on(&std::io::stderr())), 2),
            Self::Computation(message) => (format!("error: {message}"), 3),
            Self::ClosedPipe => return ExitCode::SUCCESS,
        };
        // Nothing is left to tell anyone when standard error itself is gone.
        let _ = writeln!(std::io::stderr(), "{}", message.trim_end());
        ExitCode::from(code)
    }
}

/// Colour only on a terminal and never under `NO_COLOR`.
pub fn colour_on(stream: &impl IsTerminal) -> bool {
    stream.is_terminal() && std::env::var_os("NO_COLOR").is_none_or(|v| v.is_empty())
}

/// Prints to standard output.
///
/// # Errors
/// [`Failure::ClosedPipe`] when the reader has gone, [`Failure::Computation`] for other faults of writing.
pub fn print(text: &str) -> Result<(), Failure> {
    let mut out = std::io::stdout().lock();
    let written =
        out.write_all(text.as_bytes()).and_then(|()| out.write_all(if text.ends_with('\n') { b"" } else { b"\n" }));
    match written.and_then(|()| out.flush()) {
        Ok(()) => Ok(()),
        Err(e) if e.kind() == std::io::ErrorKind::BrokenPipe => Err(Failure::ClosedPipe),
        Err(e) => Err(Failure::computation(format!("writing to standard output: {e}"))),
    }
}

/// Prints JSON, indented.
///
/// # Errors
/// As [`print`].
pub fn print_json(value: &serde_json::Value) -> Result<(), Failure> {
    print(&format!("{value:#}"))
}

/// Text of a scenario file; `-` is standard input.
///
/// # Errors
/// [`Failure::Input`] names the file and what is wrong with it.
pub fn read_text(path: &str) -> Result<String, Failure> {
    let bytes = if path == "-" {
        let mut bytes = Vec::new();
        std::io::stdin().read_to_end(&mut bytes).map(|_| bytes)
    } else {
        std::fs::read(path)
    };
    let bytes = bytes.map_err(|e| Failure::input(format!("{path}: {e}")))?;
    String::from_utf8(bytes)
        .map_err(|e| Failure::input(format!("{path}: not UTF-8 text (byte {})", e.utf8_error().valid_up_to())))
}

/// Writes a file whole: to a temporary name in the same folder, then renamed over the old one.
///
/// # Errors
/// [`Failure::Computation`] names the file; the old file is then untouched.
pub fn write_whole(path: &Path, bytes: &[u8]) -> Result<(), Failure> {
    let name = path.file_name().map(|n| n.to_string_lossy().into_owned()).unwrap_or_default();
    let temporary = path.with_file_name(format!(".{name}.{}.part", std::process::id()));
    let attempt = || -> std::io::Result<()> {
        let mut file = std::fs::File::create(&temporary)?;
        file.write_all(bytes)?;
        file.sync_all()?;
        std::fs::rename(&temporary, path)
    };
    attempt().map_err(|e| {
        let _ = std::fs::remove_file(&temporary);
        Failure::computation(format!("writing {}: {e}", path.display()))
    })
}
