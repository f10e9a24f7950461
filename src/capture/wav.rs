//! The reader of WAV recordings.
//!
//! `riff.rs` finds the samples; `hound` decodes them. It is shown the samples behind a plain header made here, because
//! with headers as they are met it loses its place behind a chunk of odd length, reads samples that are shorter than
//! their containers at a wrong level, and cannot seek in those.

use std::fs::File;
use std::io::{BufReader, Read, Seek, SeekFrom};
use std::path::{Path, PathBuf};
use std::sync::{Arc, Mutex, PoisonError};

use hound::{Sample, WavReader};

use super::CaptureError;
use super::open::{Opened, Reader};
use super::riff::{Encoding, Layout, survey};
use crate::signal::{SignalError, Source};

pub(super) const READER: Reader = Reader { accepts, open };

fn accepts(head: &[u8]) -> bool {
    head.starts_with(b"RIFF") && head.get(8..12) == Some(b"WAVE")
}

fn open(path: &Path, file: File) -> Result<Opened, CaptureError> {
    let io = |reason| CaptureError::Io { path: path.to_owned(), reason };
    let n_bytes = file.metadata().map_err(io)?.len();
    let mut layout = survey(path, BufReader::new(&file), n_bytes)?;
    let doubts = std::mem::take(&mut layout.doubts);
    let truncated = layout.truncated;
    let (format, bits_per_sample) = match layout.encoding {
        Encoding::Integer(bits) => (format!("WAV, {bits}-bit integer"), Some(u32::from(bits))),
        Encoding::Float32 => ("WAV, 32-bit float".to_owned(), None),
    };
    let source = Arc::new(WavSource { path: path.to_owned(), file: Arc::new(file), layout, decoder: Mutex::new(None) });
    Ok(Opened { format, bits_per_sample, source, truncated, doubts })
}

type Decoder = WavReader<BufReader<Plain>>;

/// Bytes read from the file at a time.
const BUFFER_BYTES: usize = 1 << 16;

#[derive(Debug)]
struct WavSource {
    path: PathBuf,
    file: Arc<File>,
    layout: Layout,
    /// None before the first read and after a failed one: `hound` seeks relative to where it believes to be, and is
    /// wrong about that after an error.
    decoder: Mutex<Option<NamedDecoder>>,
}

struct NamedDecoder(Decoder);

impl std::fmt::Debug for NamedDecoder {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str("WAV decoder")
    }
}

impl Source for WavSource {
    fn sample_rate_hz(&self) -> f64 {
        f64::from(self.layout.rate_hz)
    }

    fn n_channels(&self) -> usize {
        usize::from(self.layout.channels)
    }

    fn n_frames(&self) -> u64 {
        self.layout.frames
    }

    fn bits_per_sample(&self) -> Option<u32> {
        match self.layout.encoding {
            Encoding::Integer(bits) => Some(u32::from(bits)),
            Encoding::Float32 => None,
        }
    }

    fn read_frames(&self, start: u64, out: &mut [f64]) -> Result<(), SignalError> {
        let end = start.saturating_add(out.len().div_ceil(self.n_channels()) as u64);
        if end > self.layout.frames {
            return Err(SignalError::OutOfRange { start, end, frames: self.layout.frames });
        }
        let mut slot = self.decoder.lock().unwrap_or_else(PoisonError::into_inner);
        let mut decoder = match slot.take() {
            Some(NamedDecoder(decoder)) => decoder,
            None => self.start_decoder().map_err(|what| self.unreadable(&what, start))?,
        };
        // A WAV file has fewer than 2^32 frames, so the cast is exact.
        decoder.seek(start as u32).map_err(|e| self.unreadable(&e, start))?;
        let filled = match self.layout.encoding {
            Encoding::Integer(bits) => {
                let step = 0.5_f64.powi(i32::from(bits) - 1);
                fill(&mut decoder, out, |x: i32| f64::from(x) * step)
            }
            Encoding::Float32 => fill(&mut decoder, out, |x: f32| f64::from(x)),
        };
        filled.map_err(|(i, what)| self.unreadable(&what, start + (i / self.n_channels()) as u64))?;
        *slot = Some(NamedDecoder(decoder));
        Ok(())
    }
}

impl WavSource {
    fn start_decoder(&self) -> hound::Result<Decoder> {
        let plain = Plain {
            head: plain_header(&self.layout),
            file: Arc::clone(&self.file),
            layout: self.layout.clone(),
            at: 0,
        };
        WavReader::new(BufReader::with_capacity(BUFFER_BYTES, plain))
    }

    fn unreadable(&self, why: &dyn std::fmt::Display, frame: u64) -> SignalError {
        SignalError::Unreadable { what: format!("{} could not be read ({why})", self.path.display()), frame }
    }
}

fn fill<S: Sample>(
    decoder: &mut Decoder,
    out: &mut [f64],
    normalised: impl Fn(S) -> f64,
) -> Result<(), (usize, hound::Error)> {
    let mut samples = decoder.samples::<S>();
    for (i, slot) in out.iter_mut().enumerate() {
        let ended = || std::io::Error::from(std::io::ErrorKind::UnexpectedEof).into();
        *slot = samples.next().unwrap_or_else(|| Err(ended())).map(&normalised).map_err(|e| (i, e))?;
    }
    Ok(())
}

const HEADER_BYTES: usize = 44;

/// The shortest header that states the layout. The rate in it is 1 Hz: nothing is read from it, and no product of a
/// real one can overflow.
fn plain_header(layout: &Layout) -> [u8; HEADER_BYTES] {
    let align = layout.bytes_per_frame();
    let tag: u16 = if layout.encoding == Encoding::Float32 { 3 } else { 1 };
    let n_bytes = (layout.frames * u64::from(align)) as u32;
    let mut header = [0; HEADER_BYTES];
    let fields: [&[u8]; 12] = [
        b"RIFF",
        &n_bytes.saturating_add(36).to_le_bytes(),
        b"WAVEfmt ",
        &16_u32.to_le_bytes(),
        &tag.to_le_bytes(),
        &layout.channels.to_le_bytes(),
        &1_u32.to_le_bytes(),
        &u32::from(align).to_le_bytes(),
        &align.to_le_bytes(),
        &layout.encoding.bits().to_le_bytes(),
        b"data",
        &n_bytes.to_le_bytes(),
    ];
    for (to, &from) in header.iter_mut().zip(fields.iter().copied().flatten()) {
        *to = from;
    }
    header
}

/// The samples of a file behind a plain header.
struct Plain {
    head: [u8; HEADER_BYTES],
    file: Arc<File>,
    layout: Layout,
    at: u64,
}

impl Read for Plain {
    fn read(&mut self, out: &mut [u8]) -> std::io::Result<usize> {
        let head = self.head.get(self.at as usize..).unwrap_or_default();
        let n = if head.is_empty() {
            let mut file = &*self.file;
            file.seek(SeekFrom::Start(self.layout.data_start + self.at - HEADER_BYTES as u64))?;
            file.read(out)?
        } else {
            let n = head.len().min(out.len());
            out.iter_mut().zip(head).for_each(|(to, &from)| *to = from);
            n
        };
        self.at += n as u64;
        Ok(n)
    }
}

impl Seek for Plain {
    fn seek(&mut self, to: SeekFrom) -> std::io::Result<u64> {
        let n_bytes = HEADER_BYTES as u64 + self.layout.frames * u64::from(self.layout.bytes_per_frame());
        let target = match to {
            SeekFrom::Start(at) => Some(at),
            SeekFrom::Current(by) => self.at.checked_add_signed(by),
            SeekFrom::End(by) => n_bytes.checked_add_signed(by),
        };
        self.at = target.ok_or(std::io::ErrorKind::InvalidInput)?;
        Ok(self.at)
    }
}
