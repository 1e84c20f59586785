//! Runs the program on one input and holds what it promises.
//!
//! Memory is held twice, both without unsafe code: `ulimit -v` makes an allocation beyond 1.5 GB of
//! address space fail, which aborts the program by a signal; and on Linux the high-water mark of the
//! resident memory is polled from `/proc/PID/status`, which misses at most what is touched within the
//! last pause between two polls.

use std::fs::{self, File};
use std::path::Path;
use std::process::{Command, ExitStatus, Stdio};
use std::time::{Duration, Instant};

use serde_json::Value;

use super::{Input, Want};

/// The program promises five seconds, optimised. Other builds are many times slower, and the few
/// biggest inputs take them longer.
const SECONDS: u64 = 5;
const SECONDS_OF_BIG: u64 = if cfg!(debug_assertions) { 60 } else { SECONDS };
/// Address space, in KiB.
const ADDRESSES: u32 = 1_500_000;
/// Resident memory, in MiB.
const MEMORY: u64 = 1_024;
/// Bytes of a message.
const MESSAGE: usize = 20_000;
const PAUSE: Duration = Duration::from_millis(2);

/// What became of the inputs.
#[derive(Default)]
pub struct Tally {
    pub readings: usize,
    pub errors: usize,
    pub broken: Vec<String>,
    pub runs: Vec<Measured>,
}

/// What one run took.
#[derive(Debug, Clone)]
pub struct Measured {
    pub name: String,
    pub time: Duration,
    pub peak_mib: u64,
}

impl Tally {
    pub fn add(&mut self, other: Self) {
        self.readings += other.readings;
        self.errors += other.errors;
        self.broken.extend(other.broken);
        self.runs.extend(other.runs);
    }
}

/// One run that ended or was ended.
struct Ran {
    /// `None` where it took too long.
    status: Option<ExitStatus>,
    stdout: Vec<u8>,
    stderr: Vec<u8>,
    time: Duration,
    peak_mib: u64,
}

/// Gives an input to `look`, and to `convert` as well, and notes each broken promise.
pub fn held(input: &Input, convert: bool) -> Tally {
    let folder = tempfile::tempdir().unwrap();
    let (from, to) = (folder.path().join("in"), folder.path().join("out"));
    fs::create_dir(&from).unwrap();
    fs::create_dir(&to).unwrap();
    let file = (input.make)(&from);
    let mut tally = one(input, "look", folder.path(), &["--json"], &file, |_| None);
    if convert {
        let out = to.join("x.json");
        let arguments = ["--json", "--to", out.to_str().unwrap()];
        tally.add(one(
            input,
            "convert",
            folder.path(),
            &arguments,
            &file,
            |read| written(&to, read),
        ));
    }
    tally
}

fn one(
    input: &Input,
    command: &str,
    folder: &Path,
    arguments: &[&str],
    file: &Path,
    more: impl FnOnce(bool) -> Option<String>,
) -> Tally {
    let most = Duration::from_secs(if input.big { SECONDS_OF_BIG } else { SECONDS });
    let ran = run(command, folder, arguments, file, most);
    // A file of several curves is read by `look` and refused by `convert`.
    let want = match (command, input.want) {
        ("convert", Want::Read) => Want::Any,
        (_, want) => want,
    };
    let code = ran.status.and_then(|status| status.code());
    let broken = fault(&ran, want, file).or_else(|| more(code == Some(0)));
    let name = format!("{command}: {}", input.name);
    let errors = String::from_utf8_lossy(&ran.stderr);
    let shown: String = errors.chars().take(800).collect();
    Tally {
        readings: usize::from(code == Some(0)),
        errors: usize::from(code == Some(2)),
        broken: broken
            .map(|what| format!("{name}: {what}\n{shown}"))
            .into_iter()
            .collect(),
        runs: vec![Measured {
            name,
            time: ran.time,
            peak_mib: ran.peak_mib,
        }],
    }
}

fn run(command: &str, folder: &Path, arguments: &[&str], file: &Path, most: Duration) -> Ran {
    let other = std::env::var_os("BANDRULE").map(std::path::PathBuf::from);
    let program = other.unwrap_or_else(|| assert_cmd::cargo::cargo_bin("bandrule"));
    let [stdout, stderr] = ["stdout", "stderr"].map(|name| folder.join(name));
    let begun = Instant::now();
    let mut child = limited(&program)
        .arg(command)
        .args(arguments)
        .arg(file)
        // The stacks and heaps of many threads would fill the address space.
        .env("RAYON_NUM_THREADS", "2")
        .stdin(Stdio::null())
        .stdout(File::create(&stdout).unwrap())
        .stderr(File::create(&stderr).unwrap())
        .spawn()
        .unwrap();
    let mut peak_mib = 0;
    let status = loop {
        peak_mib = peak_mib.max(resident_mib(child.id()));
        if let Some(status) = child.try_wait().unwrap() {
            break Some(status);
        }
        if begun.elapsed() > most {
            child.kill().unwrap();
            child.wait().unwrap();
            break None;
        }
        std::thread::sleep(PAUSE);
    };
    Ran {
        status,
        stdout: fs::read(stdout).unwrap(),
        stderr: fs::read(stderr).unwrap(),
        time: begun.elapsed(),
        peak_mib,
    }
}

/// The program with little address space; where there is no such limit, the program.
fn limited(program: &Path) -> Command {
    if !cfg!(target_os = "linux") {
        return Command::new(program);
    }
    let mut shell = Command::new("sh");
    let script = format!("ulimit -v {ADDRESSES}; exec \"$0\" \"$@\"");
    shell.arg("-c").arg(script).arg(program);
    shell
}

/// The most memory that a process had so far; 0 where nothing says so.
fn resident_mib(process: u32) -> u64 {
    let status = fs::read_to_string(format!("/proc/{process}/status")).unwrap_or_default();
    let line = status.lines().find_map(|line| line.strip_prefix("VmHWM:"));
    let kib = line.and_then(|line| line.trim().split(' ').next()?.parse::<u64>().ok());
    kib.unwrap_or(0) / 1_024
}

/// The first promise that a run broke.
fn fault(ran: &Ran, want: Want, file: &Path) -> Option<String> {
    let message = String::from_utf8_lossy(&ran.stderr);
    let Some(status) = ran.status else {
        return Some(format!(
            "still running after {:.1} s",
            ran.time.as_secs_f64()
        ));
    };
    if message.contains("panicked") {
        return Some("panicked".into());
    }
    if ran.peak_mib > MEMORY {
        return Some(format!("{} MiB of memory", ran.peak_mib));
    }
    match (status.code(), want) {
        (Some(0), Want::Refused) => Some("read".into()),
        (Some(2), Want::Read) => Some("refused".into()),
        (Some(0), _) => match serde_json::from_slice::<Value>(&ran.stdout) {
            Ok(_) => None,
            Err(error) => Some(format!("standard output is no JSON: {error}")),
        },
        (Some(2), _) if !ran.stdout.is_empty() => Some("standard output and status 2".into()),
        (Some(2), _) => silent(&message, file),
        _ => Some(format!("ended by {status}")),
    }
}

/// What a message lacks.
fn silent(message: &str, file: &Path) -> Option<String> {
    let name = file.file_name().unwrap().to_string_lossy();
    let tells = ["help: ", "expected", "there is no file", "cannot read"];
    let raw = |c: char| c.is_control() && c != '\n' || matches!(c, '\u{202a}'..='\u{202e}');
    if message.len() > MESSAGE {
        Some(format!("a message of {} bytes", message.len()))
    } else if !message.contains(name.as_ref()) {
        Some("the message does not name the file".into())
    } else if !tells.iter().any(|tell| message.contains(tell)) {
        Some("the message does not say what to do".into())
    } else if message.contains(raw) {
        Some("the message holds control characters".into())
    } else {
        None
    }
}

/// What is wrong with the folder of output: one whole document where the file was read, else nothing.
fn written(folder: &Path, read: bool) -> Option<String> {
    let names: Vec<String> = fs::read_dir(folder)
        .unwrap()
        .map(|entry| entry.unwrap().file_name().to_string_lossy().into_owned())
        .collect();
    match (read, names.as_slice()) {
        (false, []) => None,
        (true, [name]) if name == "x.json" => {
            let text = fs::read(folder.join(name)).unwrap();
            let whole = serde_json::from_slice::<Value>(&text).is_ok();
            (!whole).then(|| "the output is no JSON".into())
        }
        _ => Some(format!("left behind: {names:?}")),
    }
}
