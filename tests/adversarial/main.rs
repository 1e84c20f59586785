//! Hostile and damaged input, given to the real program: it reads or refuses, soon and in little
//! memory, with a message to act on, and leaves nothing behind. Every input follows from its seed.

mod damaged;
mod encodings;
mod huge;
mod places;
mod run;
mod standards;
mod tables;

use std::fmt::Write as _;
use std::path::{Path, PathBuf};
use std::sync::Mutex;
use std::sync::atomic::{AtomicUsize, Ordering};
use std::time::Duration;

use run::Tally;

/// Threads that run the program; each process has its own threads besides.
const THREADS: usize = 2;
/// One in so many inputs is converted as well.
const CONVERTED: usize = 3;

/// What must become of an input.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Want {
    Read,
    Refused,
    /// Either is defensible.
    Any,
}

/// Puts an input into an empty folder and says where it is.
type Make = Box<dyn Fn(&Path) -> PathBuf + Send + Sync>;

/// One input.
struct Input {
    name: String,
    want: Want,
    /// One of the few that an unoptimised build may take long for.
    big: bool,
    make: Make,
}

impl Input {
    fn new(name: impl Into<String>, want: Want, make: Make) -> Self {
        Self {
            name: name.into(),
            want,
            big: false,
            make,
        }
    }

    /// A file `input.txt` of these bytes.
    fn bytes(name: impl Into<String>, want: Want, bytes: impl Into<Vec<u8>>) -> Self {
        let bytes = bytes.into();
        Self::made(name, want, move || bytes.clone())
    }

    /// A file `input.txt` of bytes that are made when they are needed.
    fn made(
        name: impl Into<String>,
        want: Want,
        bytes: impl Fn() -> Vec<u8> + Send + Sync + 'static,
    ) -> Self {
        Self::new(
            name,
            want,
            Box::new(move |folder| {
                let path = folder.join("input.txt");
                std::fs::write(&path, bytes()).unwrap();
                path
            }),
        )
    }

    fn big(mut self) -> Self {
        self.big = true;
        self
    }
}

#[test]
fn nothing_breaks_the_readers() {
    let mut inputs = huge::inputs();
    inputs.extend(tables::inputs());
    inputs.extend(damaged::inputs());
    inputs.extend(standards::inputs());
    inputs.extend(encodings::inputs());
    inputs.extend(places::inputs());
    let only = std::env::var("ONLY").unwrap_or_default();
    inputs.retain(|input| input.name.contains(&only));
    let (next, tally) = (AtomicUsize::new(0), Mutex::new(Tally::default()));
    std::thread::scope(|scope| {
        for _ in 0..THREADS {
            scope.spawn(|| {
                loop {
                    let index = next.fetch_add(1, Ordering::Relaxed);
                    let Some(input) = inputs.get(index) else {
                        break;
                    };
                    let found = run::held(input, index % CONVERTED == 0);
                    tally.lock().unwrap().add(found);
                }
            });
        }
    });
    let tally = tally.into_inner().unwrap();
    println!("{}", report(inputs.len(), &tally));
    assert!(tally.broken.is_empty(), "{}", tally.broken.join("\n"));
    assert!(!only.is_empty() || inputs.len() >= 200, "too few inputs");
}

fn report(inputs: usize, tally: &Tally) -> String {
    let mut text = format!(
        "{inputs} inputs, {} runs: {} readings, {} errors, {} broken promises",
        tally.readings + tally.errors,
        tally.readings,
        tally.errors,
        tally.broken.len()
    );
    let mut slowest = tally.runs.clone();
    slowest.sort_by_key(|run| std::cmp::Reverse(run.time));
    for run in slowest.iter().take(15) {
        let seconds = Duration::as_secs_f64(&run.time);
        let _ = write!(
            text,
            "\n  {seconds:6.2} s {:5} MiB  {}",
            run.peak_mib, run.name
        );
    }
    let most = tally.runs.iter().max_by_key(|run| run.peak_mib);
    if let Some(run) = most {
        let _ = write!(text, "\n  most memory: {} MiB, {}", run.peak_mib, run.name);
    }
    text
}
