//! Bytes that are wrong in, or odd for, the encoding that they begin with.

use super::Input;
use super::Want::{Any, Read, Refused};

const TABLE: &str =
    "# µ-metal shield\nE - E_F (eV),counts\n-1.00,74\n-0.95,75\n-0.90,56\n-0.85,66\n";

fn wide(text: &str, big: bool) -> Vec<u8> {
    let unit = |unit: u16| {
        if big {
            unit.to_be_bytes()
        } else {
            unit.to_le_bytes()
        }
    };
    text.encode_utf16().flat_map(unit).collect()
}

fn with(text: &str, bytes: &[u8]) -> Vec<u8> {
    let at = TABLE.find(text).unwrap() + text.len();
    [&TABLE.as_bytes()[..at], bytes, &TABLE.as_bytes()[at..]].concat()
}

pub fn inputs() -> Vec<Input> {
    let marked = format!("\u{feff}{TABLE}");
    let mut inputs = Vec::new();
    for big in [false, true] {
        let (end, whole) = (if big { "big" } else { "little" }, wide(&marked, big));
        let half = |cut: usize| whole[..cut].to_vec();
        let lone = wide("\u{feff}E - E_F (eV),counts\n-1.0,", big);
        let (high, low) = if big {
            ([0xd8, 0], [0xdc, 0])
        } else {
            ([0, 0xd8], [0, 0xdc])
        };
        let rest = wide("74\n-0.9,75\n", big);
        let name = |what: &str| format!("UTF-16 {end}: {what}");
        inputs.extend([
            Input::bytes(name("whole"), Read, whole.clone()),
            Input::bytes(
                name("cut in half a unit"),
                Refused,
                half(whole.len() / 2 * 2 - 1),
            ),
            Input::bytes(name("without a mark"), Read, &whole[2..]),
            Input::bytes(
                name("a lone high surrogate"),
                Refused,
                [&lone[..], &high, &rest].concat(),
            ),
            Input::bytes(
                name("a lone low surrogate"),
                Refused,
                [&lone[..], &low, &rest].concat(),
            ),
            Input::bytes(name("only a mark"), Refused, half(2)),
            Input::bytes(name("a mark and a byte"), Refused, half(3)),
            Input::bytes(
                name("a mark before UTF-8"),
                Refused,
                [&whole[..2], TABLE.as_bytes()].concat(),
            ),
        ]);
    }
    let mark = b"\xef\xbb\xbf";
    inputs.extend([
        Input::bytes("only a byte order mark", Refused, mark.as_slice()),
        Input::bytes("half a byte order mark", Any, &mark[..2]),
        Input::bytes(
            "three byte order marks",
            Any,
            [&mark.repeat(3), TABLE.as_bytes()].concat(),
        ),
        Input::bytes("a mark in a cell", Any, with("-0.95", mark)),
        Input::bytes(
            "Latin-1",
            Read,
            with("µ", b"\xb5")
                .iter()
                .copied()
                .filter(|&b| b != 0xc2)
                .collect::<Vec<_>>(),
        ),
        Input::bytes(
            "UTF-8 and Latin-1",
            Any,
            with("shield", b" \xb5m \xc2\xb5m"),
        ),
        Input::bytes("Latin-1 in a number", Refused, with("-0.95", b"\xe9")),
        Input::bytes("an overlong zero", Refused, with("-0.95", b"\xc0\x80")),
        Input::bytes("an overlong digit", Refused, with("-0.9", b"\xc0\xb5")),
        Input::bytes(
            "a surrogate in UTF-8",
            Refused,
            with("-0.95", b"\xed\xa0\x80"),
        ),
        Input::bytes(
            "beyond Unicode",
            Refused,
            with("-0.95", b"\xf4\x90\x80\x80"),
        ),
        Input::bytes(
            "half a character at the end",
            Any,
            [TABLE.as_bytes(), b"\xe2\x88"].concat(),
        ),
        Input::bytes("a zero in a cell", Refused, with("-0.95", b"\0")),
        Input::bytes(
            "zeros at the end",
            Refused,
            [TABLE.as_bytes(), &[0; 512]].concat(),
        ),
        Input::bytes(
            "zeros between all",
            Any,
            TABLE.bytes().flat_map(|b| [b, 0, 0, 0]).collect::<Vec<_>>(),
        ),
        Input::bytes(
            "escapes of UTF-7",
            Refused,
            "E - E_F (eV),counts\n+AC0-1.0,74\n-0.9,75\n",
        ),
    ]);
    inputs
}
