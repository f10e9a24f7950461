//! The headless commands: arguments in, text out, an exit status.
//!
//! Exit status: 0 done; 1 the work found a problem (a recheck that differs); 2 bad usage or input, with one line on
//! stderr that says what, where and what to do. A reader that stops reading (a broken pipe) is no failure.

mod arguments;
mod error;
mod grammar;
mod read;
mod recheck;
mod start;
mod usage;

use std::ffi::OsString;
use std::fmt;
use std::io::{self, Write};
use std::path::PathBuf;

use clap::Parser;
use clap::error::ErrorKind;

use arguments::{Arguments, Task, WindowsWish};
use error::CliError;
use grammar::WindowList;
pub(crate) use start::demonstration;

/// Done.
pub const DONE: u8 = 0;
/// The work found a problem.
pub const FOUND_A_PROBLEM: u8 = 1;
/// Bad usage or input.
pub const BAD_INPUT: u8 = 2;

/// Where the commands write to.
pub struct Streams<'a> {
    /// What was asked for.
    pub out: &'a mut dyn Write,
    /// What went wrong, a line each.
    pub err: &'a mut dyn Write,
}

impl fmt::Debug for Streams<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("Streams")
    }
}

/// What is to happen after the arguments are read.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Outcome {
    /// The command is done, with this exit status.
    Done(u8),
    /// The window is to be opened, with this capture or session.
    OpenWindow(Option<PathBuf>),
}

/// Reads the arguments (the program's name first) and does what they ask, all but opening the window.
pub fn run(arguments: impl IntoIterator<Item = OsString>, streams: &mut Streams<'_>) -> Outcome {
    let given: Vec<OsString> = arguments.into_iter().collect();
    let arguments = match Arguments::try_parse_from(&given) {
        Ok(arguments) => arguments,
        Err(error) => return Outcome::Done(refuse(&error, &given, streams)),
    };
    let status = match arguments.task {
        None => match arguments.start.as_deref().and_then(usage::no_start) {
            Some(said) => Err(CliError::Usage(said)),
            None => return Outcome::OpenWindow(arguments.start.or_else(demonstration)),
        },
        Some(Task::Read(wish)) => read::read(&wish, streams.out).map(|()| DONE),
        Some(Task::Recheck(wish)) => recheck::recheck(&wish, streams.out),
        Some(Task::Windows(wish)) => windows(&wish, streams.out).map(|()| DONE),
    };
    Outcome::Done(finish(status, streams))
}

/// What is done where the window cannot be opened: says why in one line and gives the reading of `start` as text.
pub fn without_window(start: Option<&PathBuf>, why: &dyn fmt::Display, streams: &mut Streams<'_>) -> u8 {
    let Some(path) = start else {
        say(streams, &format!("{why}; 'panewise read CAPTURE' works without a window"));
        return BAD_INPUT;
    };
    match read::text_of(path) {
        Ok(text) => {
            say(streams, &format!("{why}; here is the reading of {} as text", path.display()));
            finish(put(streams.out, text.as_bytes()).map(|()| DONE), streams)
        }
        Err(error) => {
            say(streams, &format!("{why}; {error}"));
            BAD_INPUT
        }
    }
}

fn windows(wish: &WindowsWish, out: &mut dyn Write) -> Result<(), CliError> {
    if let (Some(WindowList(windows)), Some(duration_s)) = (&wish.kernel, wish.duration) {
        return put(out, crate::report::kernels_svg(windows, duration_s).as_bytes());
    }
    if wish.json {
        return put(out, &crate::report::windows_json()?);
    }
    put(out, crate::report::windows_table().as_bytes())
}

/// Writes what was asked for, to the end, or for as long as somebody reads: a broken pipe is no failure, and changes
/// nothing of the exit status.
fn put(out: &mut dyn Write, bytes: &[u8]) -> Result<(), CliError> {
    match out.write_all(bytes).and_then(|()| out.flush()) {
        Err(reason) if reason.kind() != io::ErrorKind::BrokenPipe => Err(CliError::Output(reason)),
        _ => Ok(()),
    }
}

/// The exit status of a command; a failure is told in one line.
fn finish(result: Result<u8, CliError>, streams: &mut Streams<'_>) -> u8 {
    match result {
        Ok(status) => status,
        Err(error) => {
            say(streams, &error.to_string());
            BAD_INPUT
        }
    }
}

/// Help and version are what was asked for; anything else is told in one line.
fn refuse(error: &clap::Error, given: &[OsString], streams: &mut Streams<'_>) -> u8 {
    if matches!(error.kind(), ErrorKind::DisplayHelp | ErrorKind::DisplayVersion) {
        let text = error.render().to_string();
        return finish(put(streams.out, text.as_bytes()).map(|()| DONE), streams);
    }
    say(streams, &usage::told(error, given));
    BAD_INPUT
}

/// One line on stderr, whatever the message holds.
fn say(streams: &mut Streams<'_>, message: &str) {
    let line: String = message.chars().map(|c| if c.is_control() { ' ' } else { c }).collect();
    // Where stderr cannot be written there is nobody to tell.
    let _ = writeln!(streams.err, "panewise: {line}");
}
