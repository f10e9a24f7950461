//! Naming a file that no reader accepts, so that the refusal says what was chosen.

/// First bytes, an offset and what they stand for.
const MARKS: [(usize, &[u8], &str); 15] = [
    (0, b"RF64", "an RF64 file (WAV over 4 GiB)"),
    (0, b"BW64", "a BW64 file (WAV over 4 GiB)"),
    (0, b"RIFX", "a big-endian RIFF file (RIFX)"),
    (0, b"riff\x2e\x91\xcf\x11", "a 64-bit RIFF file"),
    (0, b"RIFF", "a RIFF file of another kind"),
    (0, b"fLaC", "a FLAC file"),
    (8, b"AIFF", "an AIFF file"),
    (8, b"AIFC", "an AIFF-C file"),
    (0, b"OggS", "an Ogg file"),
    (0, b"caff", "a Core Audio file"),
    (0, b".snd", "an AU file"),
    (0, b"\x93NUMPY", "a NumPy array"),
    (0, b"\x89HDF\r\n\x1a\n", "an HDF5 file"),
    (0, b"ID3", "an MPEG audio file"),
    (0, b"PK\x03\x04", "a ZIP archive"),
];

/// What a file that begins with `head` seems to be.
pub(super) fn seems(head: &[u8]) -> Option<&'static str> {
    let marked = |&&(at, mark, _): &&(usize, &[u8], &str)| head.get(at..).is_some_and(|rest| rest.starts_with(mark));
    if let Some((_, _, name)) = MARKS.iter().find(marked) {
        return Some(name);
    }
    let is_text = |&b: &u8| b >= 0x80 || matches!(b, b' '..=b'~' | b'\t' | b'\r' | b'\n');
    (!head.is_empty() && head.iter().all(is_text)).then_some("a text file")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn kinds_are_named_by_their_first_bytes() {
        assert_eq!(seems(b"fLaC\0\0\0\x22"), Some("a FLAC file"));
        assert_eq!(seems(b"FORM\0\0\0\0AIFFCOMM"), Some("an AIFF file"));
        assert_eq!(seems(b"time;strain\r\n0,0;1,25\r\n"), Some("a text file"));
        assert_eq!(seems(b"\x7fELF\x02\x01"), None);
        assert_eq!(seems(b""), None);
    }
}
