//! Files that are odd, broken or not recordings at all: read rightly or refused in one sentence, never a panic.

use std::path::{Path, PathBuf};

use panewise::capture::{self, Capture, CaptureError};
use panewise::signal::{SignalError, Span, Watch, read_channel};

use crate::truth::folder;

/// A chunk with its length, padded to even.
fn chunk(id: &[u8], body: &[u8]) -> Vec<u8> {
    let mut bytes = id.to_vec();
    bytes.extend((body.len() as u32).to_le_bytes());
    bytes.extend(body);
    if body.len() % 2 == 1 {
        bytes.push(0);
    }
    bytes
}

fn riff(chunks: &[Vec<u8>]) -> Vec<u8> {
    let body = chunks.concat();
    let mut bytes = b"RIFF".to_vec();
    bytes.extend((body.len() as u32 + 4).to_le_bytes());
    bytes.extend(b"WAVE");
    bytes.extend(body);
    bytes
}

fn format(tag: u16, channels: u16, rate: u32, align: u16, bits: u16) -> Vec<u8> {
    let mut body = Vec::new();
    body.extend(tag.to_le_bytes());
    body.extend(channels.to_le_bytes());
    body.extend(rate.to_le_bytes());
    body.extend(rate.wrapping_mul(u32::from(align)).to_le_bytes());
    body.extend(align.to_le_bytes());
    body.extend(bits.to_le_bytes());
    chunk(b"fmt ", &body)
}

fn extensible(bits: u16, valid: u16, tag: u16, align: u16) -> Vec<u8> {
    let mut body = format(0xFFFE, 1, 1000, align, bits)[8..].to_vec();
    body.extend(22_u16.to_le_bytes());
    body.extend(valid.to_le_bytes());
    body.extend(4_u32.to_le_bytes());
    body.extend(tag.to_le_bytes());
    body.extend([0, 0, 0, 0, 0x10, 0, 0x80, 0, 0, 0xAA, 0, 0x38, 0x9B, 0x71]);
    chunk(b"fmt ", &body)
}

fn data(body: &[u8]) -> Vec<u8> {
    chunk(b"data", body)
}

struct Scratch(tempfile::TempDir);

impl Scratch {
    fn new() -> Self {
        Self(tempfile::tempdir().unwrap())
    }

    fn file(&self, bytes: &[u8]) -> PathBuf {
        let path = self.0.path().join("capture.bin");
        std::fs::write(&path, bytes).unwrap();
        path
    }

    fn open(&self, bytes: &[u8]) -> Result<Capture, CaptureError> {
        capture::open(&self.file(bytes))
    }

    fn samples(&self, bytes: &[u8]) -> Vec<f64> {
        all(&self.open(bytes).unwrap())
    }

    fn refusal(&self, bytes: &[u8]) -> String {
        let message = self.open(bytes).unwrap_err().to_string();
        assert!(message.contains("capture.bin") && !message.contains('\n'), "{message}");
        message
    }
}

fn all(capture: &Capture) -> Vec<f64> {
    let span = Span { start: 0, samples: capture.n_frames() };
    let channels = capture.n_channels();
    let read = |c| read_channel(&*capture.source, c, span, &Watch::new()).unwrap();
    (0..channels).flat_map(read).collect()
}

#[test]
fn integers_of_every_width_are_normalised_by_their_full_scale_and_floats_are_not() {
    let scratch = Scratch::new();
    let eight = riff(&[format(1, 1, 1000, 1, 8), data(&[0, 128, 255])]);
    assert_eq!(scratch.samples(&eight), [-1.0, 0.0, 127.0 / 128.0]);
    let sixteen = riff(&[format(1, 1, 1000, 2, 16), data(&[0, 0x80, 1, 0, 0xFF, 0x7F])]);
    assert_eq!(scratch.samples(&sixteen), [-1.0, 1.0 / 32_768.0, 32_767.0 / 32_768.0]);
    let twenty_four = riff(&[format(1, 1, 1000, 3, 24), data(&[0, 0, 0x80, 0xFF, 0xFF, 0xFF])]);
    assert_eq!(scratch.samples(&twenty_four), [-1.0, -1.0 / 8_388_608.0]);
    let thirty_two = riff(&[format(1, 1, 1000, 4, 32), data(&[0, 0, 0, 0x80, 0, 0, 0, 0x40])]);
    assert_eq!(scratch.samples(&thirty_two), [-1.0, 0.5]);
    let floats: Vec<u8> = [2.5_f32, -0.25, f32::NAN].iter().flat_map(|x| x.to_le_bytes()).collect();
    let float = riff(&[format(3, 1, 1000, 4, 32), data(&floats)]);
    let read = scratch.samples(&float);
    assert_eq!(read[..2], [2.5, -0.25]);
    assert!(read[2].is_nan());
    assert_eq!(scratch.open(&float).unwrap().bits_per_sample, None);
}

#[test]
fn the_extensible_header_is_read_through_to_its_true_kind() {
    let scratch = Scratch::new();
    let float = riff(&[extensible(32, 32, 3, 4), data(&1.5_f32.to_le_bytes())]);
    assert_eq!(scratch.samples(&float), [1.5]);
    let integer = riff(&[extensible(32, 0, 1, 4), data(&(1_i32 << 30).to_le_bytes())]);
    assert_eq!(scratch.samples(&integer), [0.5]);
}

#[test]
fn chunks_of_odd_length_with_and_without_their_padding_do_not_shift_the_samples() {
    let scratch = Scratch::new();
    let (format, samples) = (format(1, 1, 1000, 2, 16), data(&[0, 0x40]));
    let padded = chunk(b"note", b"odd");
    let bare = padded[..padded.len() - 1].to_vec();
    for odd in [padded, bare] {
        assert_eq!(scratch.samples(&riff(&[odd.clone(), format.clone(), samples.clone()])), [0.5]);
        assert_eq!(scratch.samples(&riff(&[format.clone(), odd, samples.clone()])), [0.5]);
    }
    assert_eq!(scratch.samples(&riff(&[samples, format])), [0.5], "format after the data");
}

#[test]
fn what_cannot_be_read_rightly_is_refused_by_name() {
    let scratch = Scratch::new();
    let four = data(&[0; 4]);
    let cases = [
        (extensible(32, 24, 1, 4), "24 bits in places of 32"),
        (extensible(24, 20, 1, 3), "20 bits in places of 24"),
        (format(3, 1, 1000, 8, 64), "64-bit floating-point"),
        (format(1, 1, 1000, 8, 64), "64-bit integer"),
        (format(7, 1, 1000, 1, 8), "law samples"),
        (format(2, 1, 1000, 1, 4), "ADPCM"),
        (format(0x1234, 1, 1000, 1, 8), "format tag 4660"),
        (format(1, 1, 1000, 4, 24), "4 bytes a frame (block align), but 1 x 24 bits take 3"),
        (format(1, 1, 1000, 1, 0), "0 bits a sample"),
        (format(1, 0, 1000, 0, 16), "0 channels"),
        (format(1, 1, 0, 2, 16), "sample rate of 0 Hz"),
        (chunk(b"fmt ", &[1, 0, 1]), "cut short at 3 bytes"),
        (chunk(b"none", &[]), "no format chunk"),
    ];
    for (header, expected) in cases {
        let message = scratch.refusal(&riff(&[header, four.clone()]));
        assert!(message.contains(expected), "{message}");
    }
    let good = format(1, 1, 1000, 2, 16);
    assert!(scratch.refusal(&riff(&[good.clone(), data(&[])])).contains("holds no samples"));
    assert!(scratch.refusal(&riff(&[good.clone(), data(&[1])])).contains("holds no samples"));
    assert!(scratch.refusal(&riff(std::slice::from_ref(&good))).contains("no data chunk"));
    let mut overlong = chunk(b"LIST", &[0; 4]);
    overlong[4] = 200;
    assert!(scratch.refusal(&riff(&[good, overlong])).contains("claims 200 bytes where 4 are left"));
}

#[test]
fn files_that_are_no_recordings_are_refused_by_what_they_are() {
    let scratch = Scratch::new();
    assert!(scratch.refusal(b"").contains("is empty"));
    assert!(scratch.refusal(b"fLaC\0\0\0\x22").contains("a FLAC file: this version opens WAV recordings"));
    assert!(scratch.refusal(b"time;strain\r\n").contains("a text file"));
    assert!(scratch.refusal(b"\x7fELF").contains("is not a WAV file: "));
    assert!(scratch.refusal(b"RIFF\0\0\0\0AVI ").contains("a RIFF file of another kind"));
    assert!(scratch.refusal(b"RIFF\0\0\0\0WAVE").contains("no format chunk"));
    let folder = capture::open(scratch.0.path()).unwrap_err();
    assert!(matches!(folder, CaptureError::NotAFile { .. }), "{folder}");
    assert!(matches!(capture::open(Path::new("/nowhere/x.wav")), Err(CaptureError::Io { .. })));
}

#[test]
fn a_header_that_claims_too_much_gives_the_whole_frames_there_are_and_a_doubt() {
    let scratch = Scratch::new();
    for claim in [4000_u32, u32::MAX] {
        let mut bytes = riff(&[format(1, 2, 1000, 4, 16), data(&[0, 0x40, 0, 0x20, 0, 0x10, 0, 0, 7, 7])]);
        bytes[40..44].copy_from_slice(&claim.to_le_bytes());
        let capture = scratch.open(&bytes).unwrap();
        assert!(capture.truncated);
        assert!(capture.doubts[0].contains(&format!("claims {claim} bytes of samples and 10 are there: the 2 whole")));
        assert_eq!(all(&capture), [0.5, 0.125, 0.25, 0.0]);
    }
}

#[test]
fn a_rate_that_the_header_contradicts_is_doubted() {
    let scratch = Scratch::new();
    let mut bytes = riff(&[format(1, 1, 1000, 2, 16), data(&[0; 4])]);
    bytes[28] ^= 1;
    let capture = scratch.open(&bytes).unwrap();
    assert!(capture.doubts[0].contains("bytes a second"), "{:?}", capture.doubts);
}

#[test]
fn cut_or_spoiled_at_any_byte_of_its_header_a_file_never_panics() {
    let scratch = Scratch::new();
    let whole = riff(&[chunk(b"note", b"odd"), extensible(24, 24, 1, 3), data(&[9; 30])]);
    for cut in 0..whole.len() {
        if let Ok(capture) = scratch.open(&whole[..cut]) {
            assert!(all(&capture).len() <= 10);
        }
    }
    for at in 0..whole.len() - 30 {
        for flip in [0x01, 0x80, 0xFF] {
            let mut bytes = whole.clone();
            bytes[at] ^= flip;
            if let Ok(capture) = scratch.open(&bytes) {
                all(&capture);
            }
        }
    }
}

#[test]
fn a_file_cut_while_it_is_open_says_so_and_reads_on_rightly_where_it_is_whole() {
    let scratch = Scratch::new();
    let body: Vec<u8> = (0..200_000_u32).flat_map(|i| ((i % 1000) as i16).to_le_bytes()).collect();
    let path = scratch.file(&riff(&[format(1, 1, 1000, 2, 16), data(&body)]));
    let capture = capture::open(&path).unwrap();
    let file = std::fs::OpenOptions::new().write(true).open(&path).unwrap();
    file.set_len(44 + 100_000).unwrap();
    let mut out = [0.0; 4];
    let error = capture.source.read_frames(60_000, &mut out).unwrap_err();
    assert!(matches!(error, SignalError::Unreadable { frame: 60_000, .. }), "{error}");
    capture.source.read_frames(1001, &mut out).unwrap();
    assert_eq!(out.map(|x| x * 32_768.0), [1.0, 2.0, 3.0, 4.0]);
}

#[test]
fn reads_past_the_end_are_refused_and_any_order_of_reads_gives_the_same_samples() {
    let capture = capture::open(&folder().join("saltmarsh-pump2-bearing.wav")).unwrap();
    let frames = capture.n_frames();
    let mut two = [0.0; 4];
    let past = capture.source.read_frames(frames - 1, &mut two).unwrap_err();
    assert_eq!(past, SignalError::OutOfRange { start: frames - 1, end: frames + 1, frames });
    assert!(capture.source.read_frames(u64::MAX, &mut two).is_err());
    let whole = read_channel(&*capture.source, 1, Span { start: 0, samples: frames }, &Watch::new()).unwrap();
    for start in [300_000, 5, 65_536, 65_535, 0, frames - 2] {
        capture.source.read_frames(start, &mut two).unwrap();
        let at = start as usize;
        assert_eq!([two[1], two[3]], whole[at..at + 2], "from {start}");
    }
}
