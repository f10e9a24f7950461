//! Named threads for work that waits for disks or dialogs, so that neither the frame nor the curves ever do.

use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::mpsc::{Sender, channel};

type Job<E> = Box<dyn FnOnce(&dyn Fn(E)) + Send>;

/// One thread that does its jobs one after the other and tells what came of them.
pub(super) struct Lane<E> {
    jobs: Sender<Job<E>>,
}

impl<E> std::fmt::Debug for Lane<E> {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("Lane").finish_non_exhaustive()
    }
}

impl<E: Send + 'static> Lane<E> {
    /// Starts the thread. `on_panic` makes an event of a job that failed in a way that was not foreseen.
    ///
    /// # Errors
    /// Where the system gives no thread.
    pub(super) fn start(
        name: &str,
        events: Sender<E>,
        wake: impl Fn() + Send + 'static,
        on_panic: impl Fn() -> E + Send + 'static,
    ) -> std::io::Result<Self> {
        let (jobs, inbox) = channel::<Job<E>>();
        std::thread::Builder::new().name(name.to_owned()).spawn(move || {
            let tell = |event| {
                // A screen that is gone hears nothing, which is as it should be.
                let _ = events.send(event);
                wake();
            };
            while let Ok(job) = inbox.recv() {
                if catch_unwind(AssertUnwindSafe(|| job(&tell))).is_err() {
                    tell(on_panic());
                }
            }
        })?;
        Ok(Self { jobs })
    }

    /// Puts a job at the end of the lane.
    pub(super) fn run(&self, job: impl FnOnce(&dyn Fn(E)) + Send + 'static) {
        // The thread lives as long as the lane does: a job is lost only when the program ends.
        let _ = self.jobs.send(Box::new(job));
    }
}

/// What `job` gives; `None` where it failed in a way that was not foreseen. For jobs somebody waits for by name.
pub(super) fn guarded<T>(job: impl FnOnce() -> T) -> Option<T> {
    catch_unwind(AssertUnwindSafe(job)).ok()
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::time::Duration;

    #[test]
    fn a_job_that_panics_is_told_and_the_next_one_runs() {
        let (events, heard) = channel();
        let lane = Lane::start("test lane", events, || {}, || "panicked").unwrap();
        lane.run(|_| panic!("on purpose"));
        lane.run(|tell| tell("done"));
        let next = || heard.recv_timeout(Duration::from_secs(5)).unwrap();
        assert_eq!([next(), next()], ["panicked", "done"]);
    }
}
