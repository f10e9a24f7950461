//! Walking the chunks of a RIFF/WAVE file: which samples it holds and where they lie.
//!
//! Nothing is taken on a header's word: every length is held against the file's, and a header whose samples could be
//! read in more than one way is refused.
//!
//! Source: Multimedia Programming Interface and Data Specifications 1.0, IBM and Microsoft 1991 (RIFF, WAVE), and the
//! public definitions of WAVEFORMATEX and WAVEFORMATEXTENSIBLE.

use std::io::{Read, Seek, SeekFrom};
use std::path::Path;

use super::CaptureError;

/// How a sample is written.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Encoding {
    /// Integers of so many bits, in as many bits.
    Integer(u16),
    /// 32-bit floating point.
    Float32,
}

impl Encoding {
    pub(super) fn bits(self) -> u16 {
        match self {
            Self::Integer(bits) => bits,
            Self::Float32 => 32,
        }
    }
}

/// Where the samples of a WAVE file are and how to read them.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Layout {
    pub(super) encoding: Encoding,
    pub(super) channels: u16,
    pub(super) rate_hz: u32,
    /// First byte of the samples.
    pub(super) data_start: u64,
    /// Whole frames that are there.
    pub(super) frames: u64,
    /// Whether the header claims more than is there.
    pub(super) truncated: bool,
    pub(super) doubts: Vec<String>,
}

impl Layout {
    pub(super) fn bytes_per_frame(&self) -> u16 {
        self.channels * (self.encoding.bits() / 8)
    }
}

/// Chunks looked at before a file is given up: real ones have a dozen.
const MAX_CHUNKS: usize = 4096;

/// Bytes of a format chunk that matter: those of WAVEFORMATEXTENSIBLE.
const FORMAT_BYTES: u64 = 40;

/// The tail of the GUIDs that stand for a plain format tag.
const TAG_GUID: [u8; 14] = [0, 0, 0, 0, 0x10, 0, 0x80, 0, 0, 0xAA, 0, 0x38, 0x9B, 0x71];

struct Chunk {
    id: [u8; 4],
    claimed: u64,
    start: u64,
}

/// Finds the samples of a WAVE file of `len` bytes.
///
/// # Errors
/// [`CaptureError`] where they cannot be read rightly.
pub(super) fn survey(path: &Path, mut file: impl Read + Seek, len: u64) -> Result<Layout, CaptureError> {
    let io = |reason| CaptureError::Io { path: path.to_owned(), reason };
    let malformed = |what: String| CaptureError::Malformed { path: path.to_owned(), what };
    let (mut format, mut data) = (None, None);
    let mut at = 12;
    for _ in 0..MAX_CHUNKS {
        let Some(chunk) = next_chunk(&mut file, at, len).map_err(io)? else { break };
        let there = chunk.claimed.min(len - chunk.start);
        match &chunk.id {
            b"fmt " if format.is_none() => {
                let mut bytes = Vec::new();
                (&mut file).take(there.min(FORMAT_BYTES)).read_to_end(&mut bytes).map_err(io)?;
                format = Some(bytes);
            }
            b"data" if data.is_none() => data = Some((chunk.start, chunk.claimed, there)),
            _ => {}
        }
        if format.is_some() && data.is_some() {
            break;
        }
        if chunk.claimed > there {
            let id = String::from_utf8_lossy(&chunk.id).escape_debug().to_string();
            let what = format!("its chunk \"{id}\" claims {} bytes where {there} are left", chunk.claimed);
            return Err(malformed(what));
        }
        at = after(&mut file, &chunk, len).map_err(io)?;
    }
    let format = format.ok_or_else(|| malformed("it has no format chunk (\"fmt \")".to_owned()))?;
    let mut layout = read_format(path, &format)?;
    let (start, claimed, there) = data.ok_or_else(|| malformed("it has no data chunk".to_owned()))?;
    place_data(&mut layout, start, claimed, there);
    if layout.frames == 0 {
        return Err(CaptureError::NoFrames { path: path.to_owned() });
    }
    Ok(layout)
}

fn next_chunk(file: &mut (impl Read + Seek), at: u64, len: u64) -> std::io::Result<Option<Chunk>> {
    let Some(start) = at.checked_add(8).filter(|&s| s <= len) else { return Ok(None) };
    file.seek(SeekFrom::Start(at))?;
    let (mut id, mut size) = ([0; 4], [0; 4]);
    file.read_exact(&mut id)?;
    file.read_exact(&mut size)?;
    Ok(Some(Chunk { id, claimed: u64::from(u32::from_le_bytes(size)), start }))
}

/// Where the chunk after `chunk` begins. Chunks of odd length are padded with a zero byte; some writers forget it, and
/// no chunk's name begins with zero.
fn after(file: &mut (impl Read + Seek), chunk: &Chunk, len: u64) -> std::io::Result<u64> {
    let end = chunk.start + chunk.claimed;
    if chunk.claimed.is_multiple_of(2) || end >= len {
        return Ok(end);
    }
    file.seek(SeekFrom::Start(end))?;
    let mut pad = [0; 1];
    file.read_exact(&mut pad)?;
    Ok(if pad == [0] { end + 1 } else { end })
}

fn place_data(layout: &mut Layout, start: u64, claimed: u64, there: u64) {
    let frame = u64::from(layout.bytes_per_frame());
    layout.data_start = start;
    layout.frames = there / frame;
    layout.truncated = claimed > there;
    if layout.truncated {
        let frames = layout.frames;
        layout.doubts.push(format!(
            "The header claims {claimed} bytes of samples and {there} are there: the {frames} whole frames are used."
        ));
    } else if !there.is_multiple_of(frame) {
        let rest = there % frame;
        layout.doubts.push(format!("The last {rest} bytes of the samples are not a whole frame and are left out."));
    }
}

fn u16_at(bytes: &[u8], at: usize) -> Option<u16> {
    bytes.get(at..at + 2)?.try_into().ok().map(u16::from_le_bytes)
}

fn u32_at(bytes: &[u8], at: usize) -> Option<u32> {
    bytes.get(at..at + 4)?.try_into().ok().map(u32::from_le_bytes)
}

/// The fields of a format chunk.
struct Format {
    tag: u16,
    channels: u16,
    rate_hz: u32,
    bytes_a_second: u32,
    block_align: u16,
    /// Bits of the place a sample takes.
    bits: u16,
    /// Bits of it that count, where the chunk tells.
    valid_bits: u16,
}

fn fields(bytes: &[u8]) -> Option<Format> {
    let mut format = Format {
        tag: u16_at(bytes, 0)?,
        channels: u16_at(bytes, 2)?,
        rate_hz: u32_at(bytes, 4)?,
        bytes_a_second: u32_at(bytes, 8)?,
        block_align: u16_at(bytes, 12)?,
        bits: u16_at(bytes, 14)?,
        valid_bits: 0,
    };
    if format.tag == 0xFFFE {
        format.valid_bits = u16_at(bytes, 18)?;
        let guid = bytes.get(24..40)?;
        format.tag = if guid.get(2..)? == TAG_GUID { u16_at(guid, 0)? } else { 0xFFFE };
    }
    if format.valid_bits == 0 {
        format.valid_bits = format.bits;
    }
    Some(format)
}

fn read_format(path: &Path, bytes: &[u8]) -> Result<Layout, CaptureError> {
    let malformed = |what: String| CaptureError::Malformed { path: path.to_owned(), what };
    let unsupported = |what: String| CaptureError::Unsupported { path: path.to_owned(), what };
    let Some(format) = fields(bytes) else {
        return Err(malformed(format!("its format chunk is cut short at {} bytes", bytes.len())));
    };
    if format.channels == 0 {
        return Err(CaptureError::NoChannels { path: path.to_owned() });
    }
    if format.rate_hz == 0 {
        return Err(CaptureError::NoRate { path: path.to_owned() });
    }
    let encoding = encoding(&format).map_err(unsupported)?;
    let Format { channels, bits, valid_bits, block_align, .. } = format;
    if bits == 0 {
        return Err(malformed("its format chunk says 0 bits a sample".to_owned()));
    }
    let expected = u32::from(channels) * u32::from(bits.div_ceil(8));
    if u32::from(block_align) != expected {
        return Err(malformed(format!(
            "it says {block_align} bytes a frame (block align), but {channels} x {bits} bits take {expected}"
        )));
    }
    if valid_bits != bits {
        return Err(unsupported(format!(
            "its samples have {valid_bits} bits in places of {bits}, and the header does not say at which end, so \
             their level would be a guess"
        )));
    }
    let encoding = encoding.ok_or_else(|| unsupported(format!("it holds {}", name(&format))))?;
    let mut doubts = Vec::new();
    let rate = u64::from(format.rate_hz);
    if u64::from(format.bytes_a_second) != rate * u64::from(block_align) {
        doubts.push(format!(
            "The header's bytes a second ({}) disagree with its sample rate ({rate} Hz x {block_align} bytes): check \
             the rate against a known tone.",
            format.bytes_a_second
        ));
    }
    let (rate_hz, truncated) = (format.rate_hz, false);
    Ok(Layout { encoding, channels, rate_hz, data_start: 0, frames: 0, truncated, doubts })
}

/// The encoding where it can be read, none where the bits are of another count.
fn encoding(format: &Format) -> Result<Option<Encoding>, String> {
    match (format.tag, format.bits) {
        (1, 8 | 16 | 24 | 32) => Ok(Some(Encoding::Integer(format.bits))),
        (3, 32) => Ok(Some(Encoding::Float32)),
        (1 | 3, _) => Ok(None),
        _ => Err(format!("it holds {}", name(format))),
    }
}

fn name(format: &Format) -> String {
    match format.tag {
        1 => format!("{}-bit integer samples", format.bits),
        3 => format!("{}-bit floating-point samples", format.bits),
        6 => "A-law samples".to_owned(),
        7 => "\u{b5}-law samples".to_owned(),
        2 | 17 => "ADPCM-compressed samples".to_owned(),
        0x55 => "MPEG-compressed samples".to_owned(),
        tag => format!("samples of the format tag {tag}"),
    }
}
