//! The figure of a result: spectra, residuals and a ruler on one energy axis, as SVG for a paper.
//!
//! Drawn 180 mm wide, the width of two columns, in units of which 1040 make that width. The ruler at
//! the foot is the axis: the measured gap lies on it and the computed one under it, both from the
//! measured valence edge, so that two lengths are compared by eye as on a bench.

mod canvas;
mod curve;
mod dress;
mod frame;
mod labels;
mod palette;
mod panel_residuals;
mod panel_spectra;
mod ruler;

use super::Error;
use crate::schema::{Curves, ResultDocument};
use canvas::Canvas;
use frame::Frame;

pub(super) use dress::{describe, inline};

/// The figure as an SVG document.
///
/// What is missing is not drawn: one side, an edge, every curve.
///
/// # Errors
/// Where the drawing library fails.
pub fn figure_svg(result: &ResultDocument, curves: &Curves) -> Result<String, Error> {
    let frame = Frame::new(result, curves);
    let mut body = String::new();
    let mut canvas = Canvas::new(&mut body);
    canvas.block((0.0, 0.0), (canvas::WIDTH, canvas::HEIGHT), palette::PAPER)?;
    panel_spectra::draw(&mut canvas, &frame, curves)?;
    panel_residuals::draw(&mut canvas, &frame, curves)?;
    ruler::draw(&mut canvas, &frame, result)?;
    canvas.finish()?;
    Ok(dress::dress(&body, result))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::export::sample;
    use crate::schema::Quantity;

    fn texts(svg: &str) -> Vec<String> {
        let document = roxmltree::Document::parse(svg).unwrap();
        let is_text = |node: &roxmltree::Node| node.has_tag_name("text");
        let words = |node: roxmltree::Node| {
            let parts = node.descendants().filter(roxmltree::Node::is_text);
            parts
                .filter_map(|part| part.text())
                .collect::<String>()
                .trim()
                .to_owned()
        };
        document.descendants().filter(is_text).map(words).collect()
    }

    #[test]
    fn every_case_is_well_formed_and_finite() {
        for (name, (result, curves)) in sample::all() {
            let svg = figure_svg(&result, &curves).unwrap();
            assert!(!svg.contains("NaN") && !svg.contains("inf"), "{name}");
            assert!(
                texts(&svg).iter().any(|text| text.contains("(eV)")),
                "{name}"
            );
        }
    }

    #[test]
    fn a_hostile_title_stays_text() {
        let (mut result, curves) = sample::two_sides();
        result.title = "<&\"'></title><script/>\u{1b}".to_owned();
        let svg = figure_svg(&result, &curves).unwrap();
        let document = roxmltree::Document::parse(&svg).unwrap();
        assert!(
            document
                .descendants()
                .all(|node| !node.has_tag_name("script"))
        );
        let title = document
            .descendants()
            .find(|node| node.has_tag_name("title"))
            .unwrap();
        assert!(title.text().unwrap().contains("<&\"'></title><script/> "));
    }

    #[test]
    fn both_gaps_are_written_on_the_ruler() {
        let (result, curves) = sample::two_sides();
        let texts = texts(&figure_svg(&result, &curves).unwrap());
        for wanted in [
            "measured gap 3.68 ± 0.15 eV",
            "computed gap 3.59 ± 0.19 eV",
            "photoemission",
            "inverse photoemission",
            "computed density,",
            "fitted model",
            "background",
            "residual (σ)",
        ] {
            assert!(
                texts.iter().any(|text| text == wanted),
                "{wanted}: {texts:?}"
            );
        }
    }

    #[test]
    fn one_side_names_no_gap() {
        let (result, curves) = sample::one_side();
        let texts = texts(&figure_svg(&result, &curves).unwrap());
        assert!(
            texts
                .iter()
                .all(|text| !text.contains("measured gap") && !text.contains("inverse"))
        );
        assert!(texts.iter().any(|text| text.contains("computed gap")));
    }

    #[test]
    fn absurd_numbers_do_not_panic() {
        let (mut result, mut curves) = sample::two_sides();
        result.measured.gap = Some(Quantity::new(f64::NAN, f64::INFINITY));
        result.measured.valence_edge = Some(Quantity::new(1e300, f64::NAN));
        result.computed.corrected_gap = Some(Quantity::new(-3.0, 0.0));
        for side in &mut curves.sides {
            side.measured
                .iter_mut()
                .step_by(3)
                .for_each(|value| *value = f64::NAN);
            side.model.truncate(2);
        }
        curves.densities[0].density.fill(0.0);
        let svg = figure_svg(&result, &curves).unwrap();
        assert!(roxmltree::Document::parse(&svg).is_ok());
        let (_words, drawing) = svg.split_once("</desc>").unwrap();
        assert!(!drawing.contains("NaN") && !drawing.contains("inf\""));
    }
}
