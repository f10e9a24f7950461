//! Rewrites `sample-captures/`: the same bytes on every machine and every run.
//!
//! Sines and noise come from `libm` and a seeded generator, whose results depend on neither the system nor the
//! compiler. Run it with `cargo run --example make_sample_captures`, or name another folder to write to.

mod samples;

use std::error::Error;
use std::path::PathBuf;

fn main() -> Result<(), Box<dyn Error>> {
    let own = || PathBuf::from(concat!(env!("CARGO_MANIFEST_DIR"), "/sample-captures"));
    let folder = std::env::args_os().nth(1).map_or_else(own, PathBuf::from);
    std::fs::create_dir_all(&folder)?;
    for (name, bytes) in samples::files()? {
        std::fs::write(folder.join(name), bytes)?;
    }
    Ok(())
}
