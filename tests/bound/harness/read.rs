//! Reading an invented capture through the public interface.

use panewise::reading::{Reading, Request, analyse};
use panewise::session::{CaptureRef, Session};
use panewise::signal::{Stored, Watch};
use panewise::window::Window;

use super::made::Made;

/// A Reading of the whole capture with the search's defaults, at a rate that makes one line one hertz.
pub fn read(made: &Made, windows: &[&str]) -> Reading {
    let n = made.n();
    let capture = CaptureRef {
        path: "invented".to_owned(),
        blake3: String::new(),
        sample_rate_hz: n as f64,
        channels: 1,
        frames: n as u64,
        format: "invented".to_owned(),
    };
    let mut request = Request::from_session(&Session::new(capture));
    request.removal = made.removal;
    request.windows = windows.iter().map(|name| Window::parse(name).unwrap()).collect();
    let source = Stored::new(n as f64, 1, made.samples.clone());
    let analysis = analyse(&source, &request, None, &Watch::new()).unwrap();
    Reading::clone(&analysis.reading)
}
