//! Paths that are no plain files.

use std::path::PathBuf;

use super::Input;
use super::Want::{Read, Refused};

const TABLE: &str = "E - E_F (eV),counts\n-1.00,74\n-0.95,75\n-0.90,56\n";

pub fn inputs() -> Vec<Input> {
    let mut inputs = vec![
        Input::new("a directory", Refused, Box::new(|folder| folder.into())),
        Input::new(
            "a missing file",
            Refused,
            Box::new(|folder| folder.join("absent.csv")),
        ),
        Input::new(
            "a missing folder",
            Refused,
            Box::new(|folder| folder.join("absent").join("absent.csv")),
        ),
        Input::new(
            "a path through a file",
            Refused,
            Box::new(|folder| {
                std::fs::write(folder.join("file"), TABLE).unwrap();
                folder.join("file").join("more.csv")
            }),
        ),
        named("a long name, read", 240, TABLE),
        named("a long name in a message", 240, "x,y\nz,w\n"),
        Input::new(
            "a name too long for the system",
            Refused,
            Box::new(|folder| folder.join("n".repeat(300))),
        ),
    ];
    if cfg!(unix) {
        inputs.extend(unix());
    }
    inputs
}

fn named(what: &str, length: usize, text: &'static str) -> Input {
    let want = if text == TABLE { Read } else { Refused };
    Input::new(
        what,
        want,
        Box::new(move |folder| {
            let path = folder.join(format!("{}.csv", "n".repeat(length)));
            std::fs::write(&path, text).unwrap();
            path
        }),
    )
}

#[cfg(not(unix))]
fn unix() -> Vec<Input> {
    Vec::new()
}

#[cfg(unix)]
fn unix() -> Vec<Input> {
    use std::os::unix::fs::symlink;
    let device =
        |path: &'static str| Input::new(path, Refused, Box::new(move |_| PathBuf::from(path)));
    vec![
        Input::new(
            "a pipe",
            Refused,
            Box::new(|folder| {
                let path = folder.join("pipe");
                let made = std::process::Command::new("mkfifo").arg(&path).status();
                assert!(made.unwrap().success());
                path
            }),
        ),
        device("/dev/zero"),
        device("/dev/null"),
        device("/dev/urandom"),
        Input::new(
            "a link to itself",
            Refused,
            Box::new(|folder| {
                let path = folder.join("circle");
                symlink(&path, &path).unwrap();
                path
            }),
        ),
        Input::new(
            "a link to nothing",
            Refused,
            Box::new(|folder| {
                let path = folder.join("dangling");
                symlink(folder.join("absent"), &path).unwrap();
                path
            }),
        ),
        Input::new(
            "a link to /dev/zero",
            Refused,
            Box::new(|folder| {
                let path = folder.join("endless");
                symlink("/dev/zero", &path).unwrap();
                path
            }),
        ),
        Input::new(
            "a link to a table",
            Read,
            Box::new(|folder| {
                std::fs::write(folder.join("table"), TABLE).unwrap();
                let path = folder.join("link");
                symlink(folder.join("table"), &path).unwrap();
                path
            }),
        ),
    ]
}
