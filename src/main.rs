//! Arguments in, exit status out.

use std::io::{stderr, stdout};
use std::process::ExitCode;

use panewise::cli::{self, Outcome, Streams};
use panewise::ui;

fn main() -> ExitCode {
    let (mut out, mut err) = (stdout(), stderr());
    let mut streams = Streams { out: &mut out, err: &mut err };
    let status = match cli::run(std::env::args_os(), &mut streams) {
        Outcome::Done(status) => status,
        Outcome::OpenWindow(start) => match ui::run(start.clone()) {
            Ok(()) => cli::DONE,
            Err(why) => cli::without_window(start.as_ref(), &why, &mut streams),
        },
    };
    ExitCode::from(status)
}
