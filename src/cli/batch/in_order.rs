//! Many jobs at a time, their results one by one in order, with a bounded number waiting.
//!
//! Not here: what a job is. Each worker has a pool of its own for what is parallel inside one job, so that no worker,
//! waiting for a part of its own file, begins another one: memory stays that of as many files as there are workers.

use super::super::CliError;
use std::collections::BTreeMap;
use std::sync::{Condvar, Mutex, MutexGuard, PoisonError};

/// Results that may wait for an earlier one, per worker.
const WAITING: usize = 8;
/// That of the main thread on common systems: a job may need as much.
const STACK: usize = 8 << 20;

/// How the threads are shared out.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Threads {
    /// Jobs at a time.
    pub workers: usize,
    /// Threads of each job.
    pub each: usize,
}

impl Threads {
    /// One thread a job, more only when there are fewer jobs than threads; `asked` 0 means one a core.
    pub fn share(asked: usize, jobs: usize) -> Self {
        let cores = || std::thread::available_parallelism().map_or(1, std::num::NonZero::get);
        let threads = if asked == 0 { cores() } else { asked };
        let workers = threads.min(jobs).max(1);
        Self { workers, each: threads / workers }
    }
}

struct State<T> {
    /// The next job to begin.
    next: usize,
    /// Results taken so far.
    taken: usize,
    /// Finished, but not yet taken.
    waiting: BTreeMap<usize, T>,
    /// Somebody gave up.
    stopped: bool,
}

struct Shared<T> {
    state: Mutex<State<T>>,
    room: Condvar,
    arrived: Condvar,
}

impl<T> Shared<T> {
    fn lock(&self) -> MutexGuard<'_, State<T>> {
        self.state.lock().unwrap_or_else(PoisonError::into_inner)
    }

    /// Wakes everybody up to leave.
    fn stop(&self) {
        self.lock().stopped = true;
        self.room.notify_all();
        self.arrived.notify_all();
    }
}

/// Ends the run when a worker leaves by a panic, which would else be waited for.
struct Leaving<'a, T>(&'a Shared<T>);

impl<T> Drop for Leaving<'_, T> {
    fn drop(&mut self) {
        if std::thread::panicking() {
            self.0.stop();
        }
    }
}

/// Runs `job` for 0..`count` and hands each result to `take` on this thread, in order.
///
/// # Errors
/// The first error of `take`, after which no further job begins; [`CliError::Usage`] when threads cannot be started.
pub fn run<T: Send>(
    count: usize,
    threads: Threads,
    job: impl Fn(usize) -> T + Sync,
    mut take: impl FnMut(usize, T) -> Result<(), CliError>,
) -> Result<(), CliError> {
    let shared = Shared {
        state: Mutex::new(State { next: 0, taken: 0, waiting: BTreeMap::new(), stopped: false }),
        room: Condvar::new(),
        arrived: Condvar::new(),
    };
    let window = WAITING * threads.workers;
    let refused =
        |error: &dyn std::fmt::Display| CliError::Usage(format!("cannot start {} threads: {error}", threads.workers));
    std::thread::scope(|scope| {
        let started = (0..threads.workers).try_for_each(|_| {
            let worker = || {
                let _leaving = Leaving(&shared);
                // Failing here means one thread fewer for the parts of a job; the results are the same.
                let _pool = rayon::ThreadPoolBuilder::new()
                    .num_threads(threads.each)
                    .stack_size(STACK)
                    .use_current_thread()
                    .build();
                work(&shared, count, window, &job);
            };
            std::thread::Builder::new().stack_size(STACK).spawn_scoped(scope, worker).map(drop)
        });
        let result = match started {
            Ok(()) => take_all(&shared, count, &mut take),
            Err(error) => Err(refused(&error)),
        };
        if result.is_err() {
            shared.stop();
        }
        result
    })
}

fn work<T>(shared: &Shared<T>, count: usize, window: usize, job: &impl Fn(usize) -> T) {
    loop {
        let mut state = shared.lock();
        while !state.stopped && state.next < count && state.next >= state.taken + window {
            state = shared.room.wait(state).unwrap_or_else(PoisonError::into_inner);
        }
        if state.stopped || state.next == count {
            return;
        }
        let i = state.next;
        state.next += 1;
        drop(state);
        let result = job(i);
        shared.lock().waiting.insert(i, result);
        shared.arrived.notify_one();
    }
}

fn take_all<T>(
    shared: &Shared<T>,
    count: usize,
    take: &mut impl FnMut(usize, T) -> Result<(), CliError>,
) -> Result<(), CliError> {
    for i in 0..count {
        let mut state = shared.lock();
        let result = loop {
            if let Some(result) = state.waiting.remove(&i) {
                break result;
            }
            if state.stopped {
                return Ok(());
            }
            state = shared.arrived.wait(state).unwrap_or_else(PoisonError::into_inner);
        };
        state.taken = i + 1;
        drop(state);
        shared.room.notify_all();
        take(i, result)?;
    }
    Ok(())
}

#[cfg(test)]
#[allow(clippy::unwrap_used, reason = "a test may stop at once")]
mod tests {
    use super::*;
    use std::sync::atomic::{AtomicUsize, Ordering};

    #[test]
    fn results_come_in_order_and_few_wait() {
        for workers in [1, 2, 5] {
            let begun = AtomicUsize::new(0);
            let mut met = Vec::new();
            let job = |i: usize| {
                begun.fetch_add(1, Ordering::SeqCst);
                if i.is_multiple_of(7) {
                    std::thread::sleep(std::time::Duration::from_millis(2));
                }
                i * i
            };
            run(100, Threads { workers, each: 1 }, job, |i, square| {
                assert_eq!(square, i * i);
                assert!(begun.load(Ordering::SeqCst) <= i + 1 + WAITING * workers);
                met.push(i);
                Ok(())
            })
            .unwrap();
            assert_eq!(met, (0..100).collect::<Vec<_>>());
        }
    }

    #[test]
    fn an_error_ends_the_run() {
        let begun = AtomicUsize::new(0);
        let result = run(
            1000,
            Threads { workers: 2, each: 1 },
            |_| begun.fetch_add(1, Ordering::SeqCst),
            |i, _| if i < 5 { Ok(()) } else { Err(CliError::Usage("enough".to_owned())) },
        );
        assert!(result.is_err());
        assert!(begun.load(Ordering::SeqCst) < 50);
    }

    #[test]
    fn threads_are_shared_out_and_never_exceeded() {
        for (asked, jobs, workers, each) in
            [(2, 100, 2, 1), (8, 3, 3, 2), (8, 1, 1, 8), (1, 5, 1, 1), (4, 0, 1, 4), (3, 2, 2, 1)]
        {
            assert_eq!(Threads::share(asked, jobs), Threads { workers, each }, "{asked} for {jobs}");
        }
    }
}
