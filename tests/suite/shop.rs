//! What the tests work with: a fresh folder, an invented capture, the real binary.

use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Output};

use rand_core::{Rng, SeedableRng};
use rand_pcg::Pcg64;
use serde_json::Value;

pub(crate) const RATE_HZ: u32 = 4096;

/// A folder of its own for one test.
pub(crate) struct Shop(tempfile::TempDir);

impl Shop {
    pub(crate) fn new() -> Self {
        Self(tempfile::tempdir().unwrap())
    }

    pub(crate) fn path(&self, name: &str) -> PathBuf {
        self.0.path().join(name)
    }

    /// Eight seconds of two channels: shaft, vane pass and a weaker tone in noise; the second channel at half height.
    pub(crate) fn pump(&self, name: &str) -> PathBuf {
        self.pump_with(name, 0.4)
    }

    pub(crate) fn pump_with(&self, name: &str, vane_pass: f64) -> PathBuf {
        let tones = [(24.96, 0.2), (124.8, vane_pass), (411.3, 0.01)];
        let mut noise = Pcg64::seed_from_u64(2);
        let mut value = |i: u32| {
            let t = f64::from(i) / f64::from(RATE_HZ);
            let tones: f64 = tones.iter().map(|(f, a)| a * (std::f64::consts::TAU * f * t + a).cos()).sum();
            tones + 1e-4 * (f64::from(noise.next_u32()) / f64::from(u32::MAX) - 0.5)
        };
        let path = self.path(name);
        let spec = hound::WavSpec {
            channels: 2,
            sample_rate: RATE_HZ,
            bits_per_sample: 24,
            sample_format: hound::SampleFormat::Int,
        };
        let mut writer = hound::WavWriter::create(&path, spec).unwrap();
        for i in 0..8 * RATE_HZ {
            let sample = value(i).clamp(-1.0, 1.0 - 1.0 / f64::from(1 << 23)) * f64::from(1 << 23);
            writer.write_sample(sample.round() as i32).unwrap();
            writer.write_sample((sample / 2.0).round() as i32).unwrap();
        }
        writer.finalize().unwrap();
        path
    }

    /// Runs the program in the folder, without a display.
    pub(crate) fn run(&self, arguments: &[&str]) -> Ran {
        Ran::of(self.command(arguments).output().unwrap())
    }

    pub(crate) fn command(&self, arguments: &[&str]) -> Command {
        let mut command = Command::new(env!("CARGO_BIN_EXE_panewise"));
        command.args(arguments).current_dir(self.0.path()).env("PANEWISE_HOME", self.path("home"));
        command.env_remove("DISPLAY").env_remove("WAYLAND_DISPLAY").env_remove("WAYLAND_SOCKET");
        command
    }
}

/// What a run of the program gave.
#[derive(Debug)]
pub(crate) struct Ran {
    pub(crate) status: i32,
    pub(crate) out: String,
    pub(crate) err: String,
}

impl Ran {
    pub(crate) fn of(output: Output) -> Self {
        Self {
            status: output.status.code().unwrap_or(-1),
            out: String::from_utf8(output.stdout).unwrap(),
            err: String::from_utf8(output.stderr).unwrap(),
        }
    }

    /// What it printed, after it ended well.
    #[track_caller]
    pub(crate) fn done(self) -> String {
        assert_eq!((self.status, self.err.as_str()), (0, ""), "{}", self.out);
        self.out
    }

    #[track_caller]
    pub(crate) fn json(self) -> Value {
        serde_json::from_str(&self.done()).unwrap()
    }

    /// What it said in its one line, after it refused.
    #[track_caller]
    pub(crate) fn refused(self) -> String {
        assert_eq!((self.status, self.out.as_str()), (2, ""), "{}", self.err);
        assert_eq!(self.err.matches('\n').count(), 1, "{}", self.err);
        assert!(self.err.starts_with("panewise: ") && self.err.ends_with('\n'), "{}", self.err);
        self.err
    }
}

pub(crate) fn bytes(path: &Path) -> Vec<u8> {
    fs::read(path).unwrap()
}
