//! Whole files of every format, cut short or changed at random places, and files of no text at all.

use std::io::Write as _;
use std::sync::LazyLock;

use flate2::Compression;
use flate2::write::GzEncoder;
use rand::{Rng, RngCore, SeedableRng};
use rand_chacha::ChaCha8Rng;

use super::Want::{Any, Read, Refused};
use super::{Input, tables};

/// Bytes compressed.
pub fn gzip(bytes: &[u8]) -> Vec<u8> {
    let mut writer = GzEncoder::new(Vec::new(), Compression::fast());
    writer.write_all(bytes).unwrap();
    writer.finish().unwrap()
}

/// The neutral documents of the whole tables, as the library writes them.
pub static DOCUMENTS: LazyLock<Vec<(String, String)>> = LazyLock::new(|| {
    let read = |text: String| {
        let source = bandrule::parse::Source::from_text("table", &text);
        let read = bandrule::parse::read_any(source, None, &bandrule::parse::Hints::default());
        read.unwrap()[0].to_json().unwrap()
    };
    let whole = tables::whole().into_iter();
    whole
        .map(|(kind, text)| (format!("{kind} document"), read(text)))
        .collect()
});

/// Every format, whole.
fn wholes() -> Vec<(String, Vec<u8>)> {
    let mut wholes: Vec<(String, Vec<u8>)> = tables::whole()
        .into_iter()
        .map(|(kind, text)| (format!("{kind} table"), text.into_bytes()))
        .collect();
    let documents = DOCUMENTS.iter().cloned();
    wholes.extend(documents.map(|(kind, text)| (kind, text.into_bytes())));
    wholes.push(("gzip".into(), gzip(tables::whole()[1].1.as_bytes())));
    for format in ["iso14976", "jcamp_dx"] {
        let folder = format!("{}/fixtures/{format}", env!("CARGO_MANIFEST_DIR"));
        let entries = std::fs::read_dir(folder).unwrap();
        let mut paths: Vec<_> = entries.map(|entry| entry.unwrap().path()).collect();
        paths.retain(|path| path.extension().is_some_and(|end| end != "md"));
        paths.sort();
        for path in paths {
            let name = path.file_name().unwrap().to_string_lossy().into_owned();
            wholes.push((name, std::fs::read(&path).unwrap()));
        }
    }
    wholes
}

pub fn inputs() -> Vec<Input> {
    let mut random = ChaCha8Rng::seed_from_u64(1);
    let mut inputs = Vec::new();
    for (name, bytes) in wholes() {
        let table = name.ends_with("table");
        for _ in 0..3 {
            let cut = random.random_range(1..bytes.len() - 40);
            // A table that ends early is a table; everything else says how it ends.
            let want = if table { Any } else { Refused };
            let what = format!("{name} cut at {cut}");
            inputs.push(Input::bytes(what, want, &bytes[..cut]));
        }
        for seed in 0..2 {
            let mut changed = bytes.clone();
            for _ in 0..=random.random_range(0..4) {
                let at = random.random_range(0..changed.len());
                changed[at] = b"0179.,-+eE;\t \n\"#=({\xb5\xff"[random.random_range(0..21)];
            }
            inputs.push(Input::bytes(format!("{name} changed {seed}"), Any, changed));
        }
        let mut spliced = bytes.clone();
        let from = random.random_range(0..bytes.len());
        let to = random.random_range(0..bytes.len());
        spliced.splice(from..from, bytes[to..].iter().copied());
        inputs.push(Input::bytes(format!("{name} spliced"), Any, spliced));
    }
    inputs.extend(binary(&mut random));
    inputs.extend(compressed());
    inputs.extend(documents());
    inputs
}

fn binary(random: &mut ChaCha8Rng) -> Vec<Input> {
    let mut noise = |length: usize| {
        let mut bytes = vec![0; length];
        random.fill_bytes(&mut bytes);
        bytes
    };
    let heads: [(&str, &[u8]); 9] = [
        ("a program", b"\x7fELF\x02\x01\x01\0\0\0\0\0\0\0\0\0"),
        ("a picture", b"\x89PNG\r\n\x1a\n\0\0\0\rIHDR"),
        ("a photograph", b"\xff\xd8\xff\xe0\0\x10JFIF\0"),
        (
            "a workbook",
            b"PK\x03\x04\x14\0\x06\0\x08\0[Content_Types].xml",
        ),
        ("an old workbook", b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1"),
        ("a page", b"%PDF-1.7\n%\xe2\xe3\xcf\xd3\n"),
        ("a container", b"\x89HDF\r\n\x1a\n"),
        ("an archive", b"BZh91AY&SY"),
        ("another archive", b"\xfd7zXZ\0"),
    ];
    let mut inputs: Vec<Input> = heads
        .into_iter()
        .map(|(name, head)| Input::bytes(name, Refused, [head, &noise(5_000)].concat()))
        .collect();
    for length in [1, 2, 3, 16, 1_000, 100_000] {
        // A few bytes may be letters.
        let want = if length < 16 { Any } else { Refused };
        inputs.push(Input::bytes(
            format!("{length} bytes of noise"),
            want,
            noise(length),
        ));
    }
    inputs.push(Input::bytes("zeros", Refused, vec![0; 10_000]));
    inputs.push(Input::bytes("noise in gzip", Refused, gzip(&noise(10_000))));
    inputs
}

fn compressed() -> Vec<Input> {
    let table = tables::whole()[1].1.clone();
    let one = gzip(table.as_bytes());
    let bomb = |sign: u8, size: usize| {
        let name = format!("gzip bomb of {size} times {sign:#x}");
        Input::made(name, Refused, move || gzip(&vec![sign; size]))
    };
    let mut bad_sum = one.clone();
    let sum = bad_sum.len() - 6;
    bad_sum[sum] ^= 0x55;
    vec![
        Input::bytes("a gzip", Read, one.clone()),
        Input::bytes("gzip within gzip", Refused, gzip(&one)),
        Input::bytes("gzip of nothing", Refused, gzip(b"")),
        Input::bytes("only the mark of gzip", Refused, b"\x1f\x8b".as_slice()),
        Input::bytes("a wrong check sum", Refused, bad_sum),
        Input::bytes(
            "gzip and rubbish",
            Refused,
            [one.as_slice(), b"rubbish"].concat(),
        ),
        Input::bytes("20,000 members of gzip", Any, gzip(b"1 2\n").repeat(20_000)),
        bomb(0, 20_000_000),
        bomb(b' ', 100_000_000),
        bomb(b'1', 20_000_000),
        bomb(b'\n', 15_000_000).big(),
    ]
}

fn documents() -> Vec<Input> {
    let document = DOCUMENTS[1].1.clone();
    let edit = |name: &str, from: &str, to: &str| {
        let text = document.replacen(from, to, 1);
        assert_ne!(text, document, "{name}");
        Input::bytes(name, Refused, text)
    };
    let nested = |name: &str, part: &str, times: usize| {
        let text = format!("{{\"schema\":{}", part.repeat(times));
        Input::bytes(name, Refused, text)
    };
    let mut inputs = vec![
        edit(
            "arrays of different lengths",
            "\"energy_ev\":[",
            "\"energy_ev\":[1.0,",
        ),
        edit("a wrong schema", "bandrule/spectrum/1", "bandrule/levels/1"),
        edit(
            "an unknown schema",
            "bandrule/spectrum/1",
            "bandrule/nothing/1",
        ),
        edit(
            "a later schema",
            "bandrule/spectrum/1",
            "bandrule/spectrum/99999999999999999999",
        ),
        edit(
            "another's schema",
            "bandrule/spectrum/1",
            "https://example.org/x",
        ),
        edit(
            "a text for a number",
            "\"energy_ev\":[",
            "\"energy_ev\":[\"x\",",
        ),
        edit(
            "a list for a number",
            "\"energy_ev\":[",
            "\"energy_ev\":[[[]],",
        ),
        edit(
            "a number beyond doubles",
            "\"energy_ev\":[",
            "\"energy_ev\":[1e999,",
        ),
        edit(
            "a key twice",
            "\"energy_ev\":[",
            "\"energy_ev\":[],\"energy_ev\":[",
        ),
        Input::bytes(
            "an unknown key",
            Any,
            document.replacen("\"energy_ev\":[", "\"energie\":1,\"energy_ev\":[", 1),
        ),
        edit("a lone surrogate", "bandrule/spectrum/1", "\\ud800"),
        edit(
            "a control character",
            "bandrule/spectrum/1",
            "bandrule/\u{1}",
        ),
        Input::bytes("two documents", Refused, document.repeat(2)),
        Input::bytes("an empty object", Refused, "{}"),
        Input::bytes("an empty list", Refused, "[]"),
        Input::bytes("a bare null", Refused, "null"),
        Input::bytes("a brace", Refused, "{"),
        nested("100,000 objects in one another", "{\"schema\":", 100_000),
        nested("100,000 lists in one another", "[", 100_000),
        nested("a deep closed list", "[[[[]]]]", 100_000),
        Input::bytes("lists without an object", Refused, "[".repeat(100_000)),
    ];
    for key in ["schema", "provenance", "energy_ev", "reference"] {
        let name = format!("a document without {key}");
        inputs.push(edit(&name, &format!("\"{key}\""), "\"absent\""));
    }
    inputs
}
