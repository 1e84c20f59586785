//! What goes around the drawing: the root element with its size, the text alternative, and `E_F`
//! set as an italic letter with an index.

use super::canvas::{HEIGHT, SCALE, WIDTH};
use crate::export::words::{agreement, counted_from, plain, value_with_interval};
use crate::schema::ResultDocument;

/// The name of the SVG vocabulary, which a page of HTML implies.
const NAMESPACE: &str = " xmlns=\"http://www.w3.org/2000/svg\"";

/// The drawing as a document of 180 mm width.
pub(super) fn dress(body: &str, result: &ResultDocument) -> String {
    let inner = body.split_once('\n').map_or(body, |(_root, rest)| rest);
    let lines: Vec<String> = inner.lines().map(set_fermi).collect();
    let title = escape(&plain(&result.title));
    let text = escape(&describe(result));
    format!(
        "<svg{NAMESPACE} width=\"180mm\" height=\"{:.1}mm\" viewBox=\"0 0 {} {}\" role=\"img\" \
         aria-label=\"{text}\">\n<title>{title}</title>\n<desc>{text}</desc>\n{}\n",
        180.0 * HEIGHT / WIDTH,
        WIDTH * SCALE,
        HEIGHT * SCALE,
        lines.join("\n")
    )
}

/// The document as an element of an HTML page, without the name of its vocabulary.
pub(in crate::export) fn inline(figure: &str) -> String {
    figure.replacen(NAMESPACE, "", 1)
}

/// The figure in words.
pub(in crate::export) fn describe(result: &ResultDocument) -> String {
    let gap = |name: &str, gap: &Option<crate::schema::Quantity>| match gap {
        Some(gap) => format!("{name} gap {}", value_with_interval(gap)),
        None => format!("{name} gap not determined"),
    };
    format!(
        "Spectra, residuals and a ruler on one energy axis counted from {}. On the ruler: {}; {}. \
         {}.",
        counted_from(result.measured.reference),
        gap("measured", &result.measured.gap),
        gap("computed", &result.computed.corrected_gap),
        agreement(result.verdict.agrees)
    )
}

fn escape(text: &str) -> String {
    maud::html! { (text) }.into_string()
}

/// In a line of text, `E` becomes italic and `_F` an index.
fn set_fermi(line: &str) -> String {
    if line.starts_with('<') || !line.contains('E') {
        return line.to_owned();
    }
    let italic = "<tspan font-style=\"italic\">E</tspan>";
    let index = "<tspan dy=\"0.3em\" font-size=\"70%\">F</tspan>";
    let mut text = line.to_owned();
    if let Some((before, after)) = line.split_once("E_F") {
        let before = before.replace('E', italic);
        // A shift, for not every renderer keeps a space at the head of a span.
        let after = match after.trim_start() {
            "" => String::new(),
            after => format!("<tspan dx=\"0.3em\" dy=\"-0.21em\">{after}</tspan>"),
        };
        text = format!("{before}{italic}{index}{after}");
    } else if let Some(after) = line.strip_prefix("E ") {
        text = format!("{italic} {after}");
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn only_lines_of_text_are_set() {
        assert_eq!(set_fermi("<text E_F>"), "<text E_F>");
        assert_eq!(set_fermi("valence edge"), "valence edge");
        assert!(
            set_fermi("E \u{2212} E_F (eV)")
                .starts_with("<tspan font-style=\"italic\">E</tspan> \u{2212} <tspan")
        );
    }
}
