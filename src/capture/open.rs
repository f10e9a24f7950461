//! Opening a capture.

use std::fs::File;
use std::io::{Read, Seek, SeekFrom};
use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::time::SystemTime;

use super::{CaptureError, foreign, wav};
use crate::signal::{Source, Watch};

/// One kind of recording: how it is told and how it is opened.
pub(super) struct Reader {
    /// Whether a file that begins with these bytes (up to [`HEAD`]) is of this kind.
    pub(super) accepts: fn(&[u8]) -> bool,
    /// Opens the file.
    pub(super) open: fn(&Path, File) -> Result<Opened, CaptureError>,
}

/// What a reader makes of a file.
pub(super) struct Opened {
    pub(super) format: String,
    pub(super) bits_per_sample: Option<u32>,
    pub(super) source: Arc<dyn Source>,
    pub(super) truncated: bool,
    pub(super) doubts: Vec<String>,
}

/// Every reader there is, asked in this order.
const READERS: [Reader; 1] = [wav::READER];

/// Bytes a reader may look at to tell its kind.
const HEAD: usize = 512;

/// An open recording.
#[derive(Debug, Clone)]
pub struct Capture {
    /// Where it is.
    pub path: PathBuf,
    /// Its format in words: `WAV, 24-bit integer`.
    pub format: String,
    /// Bits of a sample where samples are integers, whose full scale 2^(bits-1) reads as 1.0; none where they are
    /// floating point, which pass unchanged.
    pub bits_per_sample: Option<u32>,
    /// Its samples.
    pub source: Arc<dyn Source>,
    /// Whether the file holds less than its header claims; a sentence in `doubts` says how much.
    pub truncated: bool,
    /// What was doubtful on opening, a sentence each.
    pub doubts: Vec<String>,
    /// What the system said of the file when it was opened.
    pub stamp: Stamp,
}

/// What tells that a file is another one, or was written to, without reading it through.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Stamp {
    n_bytes: u64,
    modified: Option<SystemTime>,
    /// Device and number of the file, where the system counts its files.
    place: Option<(u64, u64)>,
}

impl Stamp {
    fn of(file: &File) -> std::io::Result<Self> {
        let about = file.metadata()?;
        #[cfg(unix)]
        let place = {
            use std::os::unix::fs::MetadataExt;
            Some((about.dev(), about.ino()))
        };
        #[cfg(not(unix))]
        let place = None;
        Ok(Self { n_bytes: about.len(), modified: about.modified().ok(), place })
    }
}

/// Opens the recording at `path`; its kind is told by its first bytes, never by its name.
///
/// # Errors
/// [`CaptureError`]: whatever cannot be read rightly is refused.
pub fn open(path: &Path) -> Result<Capture, CaptureError> {
    let io = |reason| CaptureError::Io { path: path.to_owned(), reason };
    // Asked first: opening a pipe would wait for its writer.
    let about = std::fs::metadata(path).map_err(io)?;
    if !about.is_file() {
        return Err(CaptureError::NotAFile { path: path.to_owned() });
    }
    let mut file = File::open(path).map_err(io)?;
    let stamp = Stamp::of(&file).map_err(io)?;
    let mut head = Vec::with_capacity(HEAD);
    (&mut file).take(HEAD as u64).read_to_end(&mut head).map_err(io)?;
    file.seek(SeekFrom::Start(0)).map_err(io)?;
    if head.is_empty() {
        return Err(CaptureError::Empty { path: path.to_owned() });
    }
    let Some(reader) = READERS.iter().find(|reader| (reader.accepts)(&head)) else {
        return Err(CaptureError::NotARecording { path: path.to_owned(), seems: foreign::seems(&head) });
    };
    let Opened { format, bits_per_sample, source, truncated, doubts } = (reader.open)(path, file)?;
    Ok(Capture { path: path.to_owned(), format, bits_per_sample, source, truncated, doubts, stamp })
}

/// Bytes hashed between two looks at the watch.
const HASHED_AT_ONCE: usize = 1 << 18;

impl Capture {
    /// Frames a second, in hertz.
    pub fn sample_rate_hz(&self) -> f64 {
        self.source.sample_rate_hz()
    }

    /// How many channels there are.
    pub fn n_channels(&self) -> usize {
        self.source.n_channels()
    }

    /// How many frames there are.
    pub fn n_frames(&self) -> u64 {
        self.source.n_frames()
    }

    /// BLAKE3 of the file's bytes, hex; read in blocks, telling `watch` how far it is.
    ///
    /// # Errors
    /// [`CaptureError::Replaced`] where the file is not the one that was opened, or was written to since: the hash would
    /// be that of other bytes than the samples come from. [`CaptureError::Io`]; a cancelled watch gives one of the kind `Interrupted`.
    pub fn blake3(&self, watch: &Watch) -> Result<String, CaptureError> {
        let io = |reason| CaptureError::Io { path: self.path.clone(), reason };
        let mut file = File::open(&self.path).map_err(io)?;
        let n_bytes = self.stamp.n_bytes;
        self.check_stamp(&file)?;
        let mut hasher = blake3::Hasher::new();
        let mut block = vec![0; HASHED_AT_ONCE];
        let mut n_done = 0_u64;
        loop {
            watch.check().map_err(|c| io(std::io::Error::new(std::io::ErrorKind::Interrupted, c)))?;
            let n = match file.read(&mut block) {
                Ok(0) => {
                    // It may have been written to meanwhile.
                    self.check_stamp(&file)?;
                    return Ok(hasher.finalize().to_hex().to_string());
                }
                Ok(n) => n,
                Err(reason) if reason.kind() == std::io::ErrorKind::Interrupted => continue,
                Err(reason) => return Err(io(reason)),
            };
            hasher.update(block.get(..n).unwrap_or_default());
            n_done += n as u64;
            watch.report(n_done as f64 / n_bytes.max(1) as f64);
        }
    }

    fn check_stamp(&self, file: &File) -> Result<(), CaptureError> {
        match Stamp::of(file) {
            Ok(now) if now == self.stamp => Ok(()),
            Ok(_) => Err(CaptureError::Replaced { path: self.path.clone() }),
            Err(reason) => Err(CaptureError::Io { path: self.path.clone(), reason }),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn write(path: &Path, level: i16) {
        let spec = hound::WavSpec {
            channels: 1,
            sample_rate: 1000,
            bits_per_sample: 16,
            sample_format: hound::SampleFormat::Int,
        };
        let mut writer = hound::WavWriter::create(path, spec).unwrap();
        (0..100).for_each(|_| writer.write_sample(level).unwrap());
        writer.finalize().unwrap();
    }

    #[test]
    fn bytes_that_the_samples_do_not_come_from_are_not_hashed() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("pump.wav");
        write(&path, 5);
        let capture = open(&path).unwrap();
        let hash = capture.blake3(&Watch::new()).unwrap();
        assert_eq!(hash, blake3::hash(&std::fs::read(&path).unwrap()).to_hex().to_string());

        // Another recording of the same length takes its place.
        let other = folder.path().join("other.wav");
        write(&other, 6);
        std::fs::rename(&other, &path).unwrap();
        assert!(matches!(capture.blake3(&Watch::new()), Err(CaptureError::Replaced { .. })));

        // The same file is written to.
        let capture = open(&path).unwrap();
        std::thread::sleep(std::time::Duration::from_millis(20));
        write(&path, 7);
        assert!(matches!(capture.blake3(&Watch::new()), Err(CaptureError::Replaced { .. })));
    }
}
