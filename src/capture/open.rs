//! Opening a capture.

use std::fs::File;
use std::io::{Read, Seek, SeekFrom};
use std::path::{Path, PathBuf};
use std::sync::Arc;

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
    Ok(Capture { path: path.to_owned(), format, bits_per_sample, source, truncated, doubts })
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

    /// BLAKE3 of the file's bytes as they are now, hex; read in blocks, telling `watch` how far it is.
    ///
    /// # Errors
    /// [`CaptureError::Io`]; a cancelled watch gives one of the kind `Interrupted`.
    pub fn blake3(&self, watch: &Watch) -> Result<String, CaptureError> {
        let io = |reason| CaptureError::Io { path: self.path.clone(), reason };
        let mut file = File::open(&self.path).map_err(io)?;
        let n_bytes = file.metadata().map_err(io)?.len();
        let mut hasher = blake3::Hasher::new();
        let mut block = vec![0; HASHED_AT_ONCE];
        let mut n_done = 0_u64;
        loop {
            watch.check().map_err(|c| io(std::io::Error::new(std::io::ErrorKind::Interrupted, c)))?;
            let n = match file.read(&mut block) {
                Ok(0) => return Ok(hasher.finalize().to_hex().to_string()),
                Ok(n) => n,
                Err(reason) if reason.kind() == std::io::ErrorKind::Interrupted => continue,
                Err(reason) => return Err(io(reason)),
            };
            hasher.update(block.get(..n).unwrap_or_default());
            n_done += n as u64;
            watch.report(n_done as f64 / n_bytes.max(1) as f64);
        }
    }
}
