use proptest::prelude::*;

use super::test_texts::{FORMS, fixture};
use super::*;

/// Texts near the standard: fixtures with a few bytes changed, left out or repeated.
fn mutated() -> impl Strategy<Value = String> {
    let names = FORMS.iter().chain(&["points", "compound", "wavelength"]);
    let texts: Vec<String> = names.map(|name| fixture(name).text().to_owned()).collect();
    let edit = (any::<prop::sample::Index>(), 0..4_u8, any::<u8>());
    (
        prop::sample::select(texts),
        prop::collection::vec(edit, 1..6),
    )
        .prop_map(|(text, edits)| {
            let mut bytes = text.into_bytes();
            for (index, kind, byte) in edits {
                if bytes.is_empty() {
                    break;
                }
                let at = index.index(bytes.len());
                match kind {
                    0 => bytes[at] = byte,
                    1 => drop(bytes.remove(at)),
                    2 => bytes.insert(at, byte),
                    _ => bytes.truncate(at),
                }
            }
            String::from_utf8_lossy(&bytes).into_owned()
        })
}

proptest! {
    #[test]
    fn changed_bytes_never_panic(text in mutated()) {
        let source = Source::from_text("t", &text);
        let _ = is_like(&text);
        match read(&source) {
            Ok(document) => {
                let count = document.spectra(&source).len();
                for curve in 0..=count {
                    for row in [0, 5, 27, 1_000] {
                        for variable in 0..3 {
                            let span = document.value_span(&source, curve, row, variable);
                            prop_assert!(span.is_none_or(|it| source.text().get(it).is_some()));
                        }
                    }
                }
            }
            Err(problems) => prop_assert!(problems.len() == 1 && problems[0].place.is_some()),
        }
    }

    #[test]
    fn places_in_another_text_never_panic(a in mutated(), b in mutated()) {
        let (a, b) = (Source::from_text("a", &a), Source::from_text("b", &b));
        if let Ok(document) = read(&a) {
            let _ = document.spectra(&b);
            let _ = document.value_span(&b, 0, 20, 0);
        }
    }
}
