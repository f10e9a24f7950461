//! Arguments in, exit status out.

use std::io::{stderr, stdout};
use std::process::ExitCode;

use panewise::cli::{self, Outcome, Streams};

fn main() -> ExitCode {
    let (mut out, mut err) = (stdout(), stderr());
    let mut streams = Streams { out: &mut out, err: &mut err };
    let status = match cli::run(std::env::args_os(), &mut streams) {
        Outcome::Done(status) => status,
        Outcome::OpenWindow(start) => cli::without_window(start.as_ref(), &"the window is still to come", &mut streams),
    };
    ExitCode::from(status)
}
