//! The report: one page that stands alone, with the answer first and the evidence under it.
//!
//! No script, no address, nothing fetched; a content security policy says so to the browser. Every
//! text of the study is escaped by `maud`.

mod evidence;
mod headline;
mod origin;
mod style;
mod table;

use maud::{DOCTYPE, Markup, PreEscaped, html};

use super::figure::{describe, inline};
use super::words::{agreement, plain, unbroken};
use crate::schema::ResultDocument;

const POLICY: &str = "default-src 'none'; style-src 'unsafe-inline'; img-src data:";

/// What no comparison of numbers replaces.
const CAUTION: &str = "This comparison does not replace calibration of the instrument, measurements \
    on reference samples, or the licensed safety practice at the instrument.";

/// The result as one page of HTML around `figure`, which is the document that
/// [`figure_svg`](super::figure_svg) draws.
#[must_use]
pub fn report_html(result: &ResultDocument, figure: &str) -> String {
    let title = plain(&result.title);
    let page = html! {
        (DOCTYPE)
        html lang="en" {
            head {
                meta charset="utf-8";
                meta http-equiv="Content-Security-Policy" content=(POLICY);
                meta name="viewport" content="width=device-width, initial-scale=1";
                meta name="description" content=(plain(&result.verdict.statement));
                title { (title) " – computed and measured gap" }
                style { (PreEscaped(style::STYLE)) }
            }
            body { main { (body(result, &title, figure)) } }
        }
    };
    let mut text = page.into_string();
    text.push('\n');
    text
}

fn body(result: &ResultDocument, title: &str, figure: &str) -> Markup {
    let mark = match result.verdict.agrees {
        Some(true) => ("yes", "="),
        Some(false) => ("no", "≠"),
        None => ("open", "?"),
    };
    html! {
        header {
            p.kind { "Computed against measured band gap" }
            h1 { (title) }
        }
        section.verdict.(mark.0) aria-label="Verdict" {
            span.mark aria-hidden="true" { (mark.1) }
            div {
                p.answer { (agreement(result.verdict.agrees)) "." }
                p { (unbroken(&result.verdict.statement)) }
            }
        }
        (headline::numbers(result))
        figure {
            div.card { (PreEscaped(inline(figure))) }
            figcaption { (describe(result)) " Points: measured, with standard uncertainties. "
                "Solid line: model in the fitted window, dashed beyond it. Dotted: background. "
                "Residuals: measured minus model over the uncertainty of the data; arrows point to those "
                "beyond the scale. Grey band: ±2 σ." }
        }
        (headline::cautions(result))
        (headline::budget(result))
        (evidence::protocols(result))
        (evidence::fits(result))
        (evidence::findings(result))
        (origin::provenance(result))
        footer { p { (CAUTION) } }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::export::{figure_svg, sample};

    fn page(result: &ResultDocument, curves: &crate::schema::Curves) -> String {
        report_html(result, &figure_svg(result, curves).unwrap())
    }

    #[test]
    fn the_page_stands_alone() {
        for (name, (result, curves)) in sample::all() {
            let page = page(&result, &curves).replace("http-equiv", "");
            for never in [
                "http",
                "<script",
                "src=",
                "href",
                "url(",
                "@import",
                "javascript:",
            ] {
                assert!(!page.contains(never), "{name}: {never}");
            }
            assert!(page.contains("default-src 'none'") && page.contains("lang=\"en\""));
            assert!(page.ends_with("</html>\n"), "{name}");
        }
    }

    #[test]
    fn every_text_of_the_study_is_escaped() {
        let (mut result, curves) = sample::two_sides();
        let evil = "</td><script>x</script>\"'&".to_owned();
        result.title.clone_from(&evil);
        result.verdict.statement.clone_from(&evil);
        result.cautions[0].message.clone_from(&evil);
        result.cautions[0].name.clone_from(&evil);
        result.budget[0].name.clone_from(&evil);
        result.budget[0].basis.clone_from(&evil);
        result.findings[0].message.clone_from(&evil);
        result.fits[0].statistics.clone_from(&evil);
        result.protocols[0].protocol.clone_from(&evil);
        result.provenance.sources[0].file.clone_from(&evil);
        result.provenance.steps[0].detail.clone_from(&evil);
        result.computed.valence_edge.k = evil;
        let page = page(&result, &curves);
        assert!(!page.contains("<script") && !page.contains("</td><s"));
    }

    #[test]
    fn the_answer_comes_first_and_nothing_is_left_out() {
        let (result, curves) = sample::two_sides();
        let page = page(&result, &curves);
        let place = |text: &str| page.find(text).unwrap_or_else(|| panic!("{text}"));
        let order = [
            "Computed and measured gap agree.",
            "<caption>Numbers",
            "<svg",
            "model-inadequate",
            "<caption>Uncertainty budget",
            "<caption>Protocols",
            "<caption>Fits",
            "<caption>Findings",
            "<caption>Files read",
            "does not replace calibration",
        ];
        let places = order.map(place);
        assert!(places.is_sorted(), "{places:?}");
        assert_eq!(
            page.matches(">not stated<").count(),
            2,
            "share and value of one row"
        );
    }

    #[test]
    fn a_null_verdict_says_so() {
        let (result, curves) = sample::one_side();
        assert!(page(&result, &curves).contains("The data cannot tell."));
    }
}
