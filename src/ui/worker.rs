//! The one thread that computes: curves first, then the Reading; the newest request wins.

use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::atomic::{AtomicU64, Ordering};
use std::sync::mpsc::{Receiver, Sender, channel};
use std::sync::{Arc, Mutex, PoisonError};
use std::time::{Duration, Instant};

use crate::reading::{Analysis, Reading, ReadingError, Request, Segment, analyse, analyse_curves, with_windows};
use crate::signal::{Source, Watch};

/// A transform that has run for so long is called off by a newer request; a shorter one may finish, so that curves
/// keep following while an edge is dragged.
const PATIENCE: Duration = Duration::from_millis(300);

/// What the worker has to say.
#[derive(Debug)]
pub(super) enum Answer {
    /// The curves of a request.
    Curves(u64, Box<Request>, Segment),
    /// All of it.
    Reading(u64, Box<Analysis>),
    /// There is none, and why.
    Failed(u64, String),
}

#[derive(Debug)]
struct Job {
    generation: u64,
    source: Arc<dyn Source>,
    request: Request,
    /// Curves made before for the same samples.
    curves: Option<Segment>,
    curves_watch: Watch,
    reading_watch: Watch,
}

/// What runs now.
#[derive(Debug)]
struct Running {
    since: Instant,
    curves_watch: Watch,
    reading_watch: Watch,
}

/// The computing thread.
#[derive(Debug)]
pub(super) struct Worker {
    newest: Arc<AtomicU64>,
    jobs: Sender<Job>,
    answers: Receiver<Answer>,
    running: Mutex<Option<Running>>,
}

impl Worker {
    /// Starts the thread; `wake` is called after every answer.
    ///
    /// # Errors
    /// Where the system gives no thread.
    pub(super) fn start(wake: impl Fn() + Send + 'static) -> std::io::Result<Self> {
        let (jobs, inbox) = channel::<Job>();
        let (outbox, answers) = channel();
        let newest = Arc::new(AtomicU64::new(0));
        std::thread::Builder::new().name("computing".to_owned()).spawn(move || {
            while let Ok(first) = inbox.recv() {
                let job = inbox.try_iter().last().unwrap_or(first);
                let say = |answer| {
                    let heard = outbox.send(answer).is_ok();
                    wake();
                    heard
                };
                let generation = job.generation;
                if catch_unwind(AssertUnwindSafe(|| work(job, &say))).is_err() {
                    let text = "the computation failed in a way that was not foreseen: please report the capture \
                                and the segment; the document is as it was";
                    say(Answer::Failed(generation, text.to_owned()));
                }
            }
        })?;
        Ok(Self { newest, jobs, answers, running: Mutex::new(None) })
    }

    /// Asks for a request; an older one is called off. Gives its generation.
    pub(super) fn submit(&self, source: Arc<dyn Source>, request: Request, curves: Option<Segment>) -> u64 {
        let generation = self.newest.fetch_add(1, Ordering::Relaxed) + 1;
        let (curves_watch, reading_watch) = (Watch::new(), Watch::new());
        let running =
            Running { since: Instant::now(), curves_watch: curves_watch.clone(), reading_watch: reading_watch.clone() };
        let mut now = self.running.lock().unwrap_or_else(PoisonError::into_inner);
        if let Some(old) = now.replace(running) {
            old.reading_watch.cancel();
            if old.since.elapsed() > PATIENCE {
                old.curves_watch.cancel();
            } else if let Some(now) = now.as_mut() {
                // Patience is counted from the first of a row of requests.
                now.since = old.since.max(Instant::now().checked_sub(PATIENCE / 2).unwrap_or(old.since));
            }
        }
        drop(now);
        // Where the thread is gone there is nobody to compute; the screen shows the old figures as old.
        let _ = self.jobs.send(Job { generation, source, request, curves, curves_watch, reading_watch });
        generation
    }

    /// Calls off whatever runs.
    pub(super) fn cancel(&self) {
        if let Some(running) = self.running.lock().unwrap_or_else(PoisonError::into_inner).as_ref() {
            running.curves_watch.cancel();
            running.reading_watch.cancel();
        }
    }

    /// How much of the newest request is done, 0 to 1.
    pub(super) fn progress(&self) -> f64 {
        let running = self.running.lock().unwrap_or_else(PoisonError::into_inner);
        running.as_ref().map_or(0.0, |r| r.curves_watch.progress().max(r.reading_watch.progress()))
    }

    /// What came since the last time.
    pub(super) fn answers(&self) -> Vec<Answer> {
        self.answers.try_iter().collect()
    }
}

impl Drop for Worker {
    fn drop(&mut self) {
        self.cancel();
    }
}

fn work(job: Job, say: &dyn Fn(Answer) -> bool) {
    let Job { generation, source, request, curves, curves_watch, reading_watch } = job;
    let made = match curves {
        Some(same) if same.spectra.windows() == request.windows => Ok(same),
        Some(same) => with_windows(&same, &request, &curves_watch),
        None => analyse_curves(&*source, &request, &curves_watch),
    };
    let curves = match made {
        Ok(curves) => curves,
        Err(error) => return refuse(generation, &error, say),
    };
    if !say(Answer::Curves(generation, Box::new(request.clone()), curves.clone())) {
        return;
    }
    match analyse(&*source, &request, Some(curves), &reading_watch) {
        Ok(analysis) => drop(say(Answer::Reading(generation, Box::new(analysis)))),
        Err(error) => refuse(generation, &error, say),
    }
}

fn refuse(generation: u64, error: &ReadingError, say: &dyn Fn(Answer) -> bool) {
    if !matches!(error, ReadingError::Cancelled(_)) {
        say(Answer::Failed(generation, error.to_string()));
    }
}

/// The newest figures there are, and whether they belong to what is asked now.
#[derive(Debug, Default)]
pub(super) struct Latest {
    /// The request last submitted and its generation.
    pub(super) asked: Option<(u64, Request)>,
    /// The newest curves, with their request.
    pub(super) curves: Option<(u64, Request, Segment)>,
    /// The newest Reading, with its request.
    pub(super) reading: Option<(u64, Request, Arc<Reading>)>,
    /// Why there is none for the request last submitted.
    pub(super) failure: Option<String>,
    /// Whether the user called the work off.
    pub(super) called_off: bool,
    /// How much of what is asked for is done, 0 to 1.
    pub(super) progress: f64,
}

impl Latest {
    /// The panes of the newest curves.
    pub(super) fn spectra(&self) -> Option<&Arc<crate::spectrum::Spectra>> {
        self.curves.as_ref().map(|c| &c.2.spectra)
    }

    /// Takes in an answer.
    pub(super) fn take(&mut self, answer: Answer) {
        let newest = self.asked.as_ref().map_or(0, |a| a.0);
        match answer {
            Answer::Curves(generation, request, segment) => {
                if self.curves.as_ref().is_none_or(|c| c.0 < generation) {
                    self.curves = Some((generation, *request, segment));
                }
            }
            Answer::Reading(generation, analysis) if generation == newest => {
                let Analysis { request, segment, reading } = *analysis;
                self.curves = Some((generation, request.clone(), segment));
                self.reading = Some((generation, request, reading));
                self.failure = None;
            }
            Answer::Failed(generation, text) if generation == newest => self.failure = Some(text),
            Answer::Reading(..) | Answer::Failed(..) => {}
        }
    }

    /// Whether the Reading shown is the one asked for.
    pub(super) fn is_current(&self) -> bool {
        match (&self.asked, &self.reading) {
            (Some((_, asked)), Some((_, request, _))) => asked == request,
            _ => false,
        }
    }

    /// Whether the curves shown are of the request asked for.
    pub(super) fn curves_are_current(&self) -> bool {
        match (&self.asked, &self.curves) {
            (Some((_, asked)), Some((_, request, _))) => asked == request,
            _ => false,
        }
    }

    /// Whether something is being computed.
    pub(super) fn is_busy(&self) -> bool {
        self.asked.is_some() && !self.is_current() && self.failure.is_none() && !self.called_off
    }

    /// Curves that a new request can go on using: they are of the same samples.
    pub(super) fn reusable(&self, request: &Request) -> Option<Segment> {
        let (_, made_for, segment) = self.curves.as_ref()?;
        let same = made_for.capture == request.capture
            && made_for.channel == request.channel
            && made_for.span == request.span
            && made_for.removal == request.removal
            && made_for.sample_rate_hz.to_bits() == request.sample_rate_hz.to_bits();
        same.then(|| segment.clone())
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::session::{CaptureRef, Session};
    use crate::signal::Stored;

    fn request(samples: u64) -> Request {
        let capture = CaptureRef {
            path: "a.wav".to_owned(),
            blake3: String::new(),
            sample_rate_hz: 1000.0,
            channels: 1,
            frames: samples,
            format: "test".to_owned(),
        };
        Request::from_session(&Session::new(capture))
    }

    #[test]
    fn answers_to_old_questions_do_not_pass_for_new_ones() {
        let mut latest = Latest { asked: Some((2, request(64))), ..Latest::default() };
        latest.take(Answer::Failed(1, "old".to_owned()));
        assert!(latest.failure.is_none() && latest.is_busy());
        latest.take(Answer::Failed(2, "new".to_owned()));
        assert_eq!(latest.failure.as_deref(), Some("new"));
        assert!(!latest.is_busy() && !latest.is_current());
    }

    #[test]
    fn a_source_that_panics_becomes_a_sentence() {
        #[derive(Debug)]
        struct Broken;
        impl Source for Broken {
            fn sample_rate_hz(&self) -> f64 {
                1000.0
            }
            fn n_channels(&self) -> usize {
                1
            }
            fn n_frames(&self) -> u64 {
                4096
            }
            fn read_frames(&self, _: u64, _: &mut [f64]) -> Result<(), crate::signal::SignalError> {
                panic!("a reader gone wrong");
            }
        }
        let worker = Worker::start(|| {}).unwrap();
        worker.submit(Arc::new(Broken), request(4096), None);
        let text = wait_for_failure(&worker);
        assert!(text.contains("not foreseen"), "{text}");
        // The thread goes on.
        worker.submit(Arc::new(Stored::new(1000.0, 1, vec![0.0; 8])), request(4096), None);
        assert!(wait_for_failure(&worker).contains("4096"));
    }

    fn wait_for_failure(worker: &Worker) -> String {
        for _ in 0..500 {
            for answer in worker.answers() {
                if let Answer::Failed(_, text) = answer {
                    return text;
                }
            }
            std::thread::sleep(Duration::from_millis(10));
        }
        panic!("no answer within five seconds");
    }
}
