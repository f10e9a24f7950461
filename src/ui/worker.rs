//! The one thread that computes: curves first, then the Reading; the newest request wins.

use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::mpsc::{Receiver, Sender, channel};
use std::sync::{Arc, Mutex, MutexGuard, PoisonError};
use std::time::{Duration, Instant};

use crate::reading::{Analysis, Reading, ReadingError, Request, Segment, analyse, analyse_curves, with_windows};
use crate::signal::{SignalError, Source, Watch};

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

/// What runs now, as the thread says.
#[derive(Debug)]
struct Running {
    generation: u64,
    since: Instant,
    curves_watch: Watch,
    reading_watch: Watch,
}

/// What the thread and those who ask it both look at.
#[derive(Debug, Default)]
struct State {
    running: Option<Running>,
    /// The newest generation asked for.
    newest: u64,
    /// Nothing up to this generation is wanted any more.
    called_off: u64,
}

impl State {
    /// Calls off what runs, where something newer waits: its Reading at once, its curves when patience is over.
    fn hurry(&self) {
        let Some(running) = self.running.as_ref().filter(|r| r.generation < self.newest) else { return };
        running.reading_watch.cancel();
        if running.since.elapsed() > PATIENCE {
            running.curves_watch.cancel();
        }
    }
}

/// The computing thread.
#[derive(Debug)]
pub(super) struct Worker {
    jobs: Sender<Job>,
    answers: Receiver<Answer>,
    state: Arc<Mutex<State>>,
}

fn locked(state: &Mutex<State>) -> MutexGuard<'_, State> {
    state.lock().unwrap_or_else(PoisonError::into_inner)
}

impl Worker {
    /// Starts the thread; `wake` is called after every answer.
    ///
    /// # Errors
    /// Where the system gives no thread.
    pub(super) fn start(wake: impl Fn() + Send + 'static) -> std::io::Result<Self> {
        let (jobs, inbox) = channel::<Job>();
        let (outbox, answers) = channel();
        let state = Arc::new(Mutex::new(State::default()));
        let shared = Arc::clone(&state);
        std::thread::Builder::new().name("computing".to_owned()).spawn(move || {
            let say = |answer| {
                let heard = outbox.send(answer).is_ok();
                wake();
                heard
            };
            while let Ok(first) = inbox.recv() {
                if let Some(job) = take(first, &inbox, &shared) {
                    run(job, &say);
                    locked(&shared).running = None;
                }
            }
        })?;
        Ok(Self { jobs, answers, state })
    }

    /// Asks for a request; an older one is called off. Gives its generation.
    pub(super) fn submit(&self, source: Arc<dyn Source>, request: Request, curves: Option<Segment>) -> u64 {
        let mut state = locked(&self.state);
        state.newest += 1;
        let generation = state.newest;
        let (curves_watch, reading_watch) = (Watch::new(), Watch::new());
        // Where the thread is gone there is nobody to compute; the screen shows the old figures as old.
        let _ = self.jobs.send(Job { generation, source, request, curves, curves_watch, reading_watch });
        state.hurry();
        generation
    }

    /// Calls off whatever runs or waits.
    pub(super) fn cancel(&self) {
        let mut state = locked(&self.state);
        state.called_off = state.newest;
        if let Some(running) = &state.running {
            running.curves_watch.cancel();
            running.reading_watch.cancel();
        }
    }

    /// The generation of the newest request.
    pub(super) fn newest(&self) -> u64 {
        locked(&self.state).newest
    }

    /// How much of the newest request is done, 0 to 1: half of it is the curves, half the Reading.
    pub(super) fn progress(&self) -> f64 {
        let state = locked(&self.state);
        let running = state.running.as_ref().filter(|r| r.generation == state.newest);
        running.map_or(0.0, |r| 0.5 * (r.curves_watch.progress() + r.reading_watch.progress()))
    }

    /// What came since the last time. Has to be called now and then while something is computed: what runs is called
    /// off here once a newer request has waited for long.
    pub(super) fn answers(&self) -> Vec<Answer> {
        locked(&self.state).hurry();
        self.answers.try_iter().collect()
    }
}

impl Drop for Worker {
    fn drop(&mut self) {
        self.cancel();
    }
}

/// The newest of the jobs that wait, if it is still wanted; from now on it runs.
fn take(first: Job, inbox: &Receiver<Job>, state: &Mutex<State>) -> Option<Job> {
    let mut state = locked(state);
    let job = inbox.try_iter().last().unwrap_or(first);
    if job.generation <= state.called_off {
        return None;
    }
    let (curves_watch, reading_watch) = (job.curves_watch.clone(), job.reading_watch.clone());
    state.running = Some(Running { generation: job.generation, since: Instant::now(), curves_watch, reading_watch });
    Some(job)
}

fn run(job: Job, say: &dyn Fn(Answer) -> bool) {
    let generation = job.generation;
    if catch_unwind(AssertUnwindSafe(|| work(job, say))).is_err() {
        let text = "the computation failed in a way that was not foreseen: please report the capture and the \
                    segment; the document is as it was";
        say(Answer::Failed(generation, text.to_owned()));
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
    // Curves that were there before were done before anybody watched.
    curves_watch.report(1.0);
    if !say(Answer::Curves(generation, Box::new(request.clone()), curves.clone())) {
        return;
    }
    match analyse(&*source, &request, Some(curves), &reading_watch) {
        Ok(analysis) => drop(say(Answer::Reading(generation, Box::new(analysis)))),
        Err(error) => refuse(generation, &error, say),
    }
}

fn refuse(generation: u64, error: &ReadingError, say: &dyn Fn(Answer) -> bool) {
    // Called off while samples were read it is an error of theirs.
    if !matches!(error, ReadingError::Cancelled(_) | ReadingError::Signal(SignalError::Cancelled(_))) {
        say(Answer::Failed(generation, error.to_string()));
    }
}

/// The newest figures there are, and whether they belong to what is asked now.
#[derive(Debug, Default)]
pub(super) struct Latest {
    /// Answers to this generation or older ones are about another capture.
    since: u64,
    /// The request last submitted and its generation.
    pub(super) asked: Option<(u64, Request)>,
    /// The newest curves, with their request.
    pub(super) curves: Option<(u64, Request, Segment)>,
    /// The newest Reading, with its request.
    pub(super) reading: Option<(u64, Request, Arc<Reading>)>,
    /// The newest Reading with what it was made from.
    pub(super) analysed: Option<(u64, Arc<Analysis>)>,
    /// Why there is none for the request last submitted.
    pub(super) failure: Option<String>,
    /// Whether the user called the work off.
    pub(super) called_off: bool,
    /// How much of what is asked for is done, 0 to 1.
    pub(super) progress: f64,
}

impl Latest {
    /// No figures yet; those of generation `newest` and before were asked for about another capture.
    pub(super) fn after(newest: u64) -> Self {
        Self { since: newest, ..Self::default() }
    }

    /// The panes of the newest curves.
    pub(super) fn spectra(&self) -> Option<&Arc<crate::spectrum::Spectra>> {
        self.curves.as_ref().map(|c| &c.2.spectra)
    }

    /// Takes in an answer.
    pub(super) fn take(&mut self, answer: Answer) {
        let newest = self.asked.as_ref().map_or(0, |a| a.0);
        match answer {
            Answer::Curves(generation, request, segment) if generation > self.since => {
                if self.curves.as_ref().is_none_or(|c| c.0 < generation) {
                    self.curves = Some((generation, *request, segment));
                }
            }
            Answer::Reading(generation, analysis) if generation == newest && generation > self.since => {
                let Analysis { request, segment, reading, .. } = &*analysis;
                self.curves = Some((generation, request.clone(), segment.clone()));
                self.reading = Some((generation, request.clone(), Arc::clone(reading)));
                self.analysed = Some((generation, Arc::from(analysis)));
                self.failure = None;
            }
            Answer::Failed(generation, text) if generation == newest => self.failure = Some(text),
            Answer::Curves(..) | Answer::Reading(..) | Answer::Failed(..) => {}
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
    use std::sync::atomic::{AtomicUsize, Ordering};

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
    fn an_answer_about_another_capture_is_not_taken() {
        let source = Stored::new(1000.0, 1, (0..64).map(|i| f64::from(i % 7)).collect());
        let curves = analyse_curves(&source, &request(64), &Watch::new()).unwrap();
        let mut latest = Latest::after(4);
        latest.take(Answer::Curves(4, Box::new(request(64)), curves.clone()));
        assert!(latest.curves.is_none() && latest.reusable(&request(64)).is_none());
        latest.take(Answer::Curves(5, Box::new(request(64)), curves));
        assert!(latest.reusable(&request(64)).is_some());
    }

    /// A source that can be kept waiting, and counts how often it is read.
    #[derive(Debug, Default)]
    struct Slow {
        reads: AtomicUsize,
    }

    impl Source for Slow {
        fn sample_rate_hz(&self) -> f64 {
            1000.0
        }
        fn n_channels(&self) -> usize {
            1
        }
        fn n_frames(&self) -> u64 {
            1 << 24
        }
        fn read_frames(&self, _: u64, out: &mut [f64]) -> Result<(), crate::signal::SignalError> {
            self.reads.fetch_add(1, Ordering::Relaxed);
            std::thread::sleep(Duration::from_millis(50));
            out.fill(0.5);
            Ok(())
        }
    }

    fn wait_until(what: &str, done: impl Fn() -> bool) {
        for _ in 0..1000 {
            if done() {
                return;
            }
            std::thread::sleep(Duration::from_millis(5));
        }
        panic!("after five seconds: {what}");
    }

    #[test]
    fn a_drag_calls_off_what_has_run_for_long_and_cancel_stops_what_runs() {
        let worker = Worker::start(|| {}).unwrap();
        let slow = Arc::new(Slow::default());
        let first = worker.submit(Arc::<Slow>::clone(&slow), request(1 << 24), None);
        wait_until("it does not start", || slow.reads.load(Ordering::Relaxed) > 0);
        // A request every 16 ms, as in a drag.
        let watch = locked(&worker.state).running.as_ref().map(|r| r.curves_watch.clone()).unwrap();
        for _ in 0..40 {
            worker.submit(Arc::<Slow>::clone(&slow), request(1 << 24), None);
            std::thread::sleep(Duration::from_millis(16));
        }
        assert!(watch.is_cancelled(), "patience is never over");
        wait_until("the newest does not run", || {
            locked(&worker.state).running.as_ref().is_some_and(|r| r.generation > first)
        });
        worker.submit(Arc::<Slow>::clone(&slow), request(1 << 24), None);
        worker.cancel();
        wait_until("it goes on", || locked(&worker.state).running.is_none());
        let reads = slow.reads.load(Ordering::Relaxed);
        std::thread::sleep(Duration::from_millis(200));
        assert_eq!(slow.reads.load(Ordering::Relaxed), reads, "what waited was started");
        // What is asked for afterwards is computed.
        worker.submit(Arc::new(Stored::new(1000.0, 1, vec![0.0; 8])), request(4096), None);
        assert!(wait_for_failure(&worker).contains("4096"));
    }

    #[test]
    fn a_request_that_waits_alone_is_served_when_patience_is_over() {
        let worker = Worker::start(|| {}).unwrap();
        let slow = Arc::new(Slow::default());
        worker.submit(Arc::<Slow>::clone(&slow), request(1 << 24), None);
        wait_until("it does not start", || slow.reads.load(Ordering::Relaxed) > 0);
        worker.submit(Arc::new(Stored::new(1000.0, 1, vec![0.0; 8])), request(4096), None);
        assert!(wait_for_failure(&worker).contains("4096"));
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
