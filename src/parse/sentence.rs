//! Comments that speak in sentences: `All energies are in eV relative to the Fermi level`. A comment is
//! evidence only where it is understood to its end: a rest may say the opposite.

use std::ops::Range;

use super::dialect::span_in;
use super::header;
use super::role::Role;
use super::words::{self, Relation};
use crate::quantity::{EnergyUnit, IntensityUnit, Reference};

/// What is spoken about.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum About {
    Energy,
    Intensity,
}

/// A unit that is given.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Unit {
    Energy(EnergyUnit),
    Intensity(IntensityUnit),
}

/// One sentence that was understood.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Sentence {
    pub about: About,
    /// Mean-field or quasiparticle energies.
    pub of: Option<Role>,
    pub unit: Option<Unit>,
    pub zero: Option<(Relation, Reference)>,
}

/// What a comment says.
#[derive(Debug, PartialEq)]
pub(super) enum Heard {
    /// Nothing of energies or intensities.
    Nothing,
    /// Something, and more that may change it.
    InPart,
    /// These, with their bytes in the comment.
    Whole(Vec<(Range<usize>, Sentence)>),
}

/// Pieces of a comment beyond which it is no sentence.
const MOST_PIECES: usize = 50;

/// Listens to a comment.
pub(super) fn hear(text: &str) -> Heard {
    let mut heard: Vec<(Range<usize>, Sentence)> = Vec::new();
    let mut doubt = false;
    for piece in text.split([',', ';']).map(str::trim).take(MOST_PIECES) {
        let before = heard.last().map(|(_, sentence)| *sentence);
        let sentence = sentence(piece).or_else(|| {
            // `energies in Ha, relative to E_F`: the second piece goes on about the first.
            let subject = subject_words(before?);
            self::sentence(&format!("{subject} {piece}"))
        });
        match sentence {
            Some(sentence) => heard.push((span_in(text, piece, 0), sentence)),
            // What stands before may be a title; what has a unit, or comes after, may be a condition.
            None => doubt |= !heard.is_empty() || has_unit(piece),
        }
    }
    match (heard.is_empty(), doubt) {
        (true, _) => Heard::Nothing,
        (false, true) => Heard::InPart,
        (false, false) => Heard::Whole(heard),
    }
}

fn has_unit(text: &str) -> bool {
    text.split([' ', '(', ')', '[', ']'])
        .any(|word| header::is_any_unit(word) && word != "s")
}

fn subject_words(sentence: Sentence) -> &'static str {
    match (sentence.about, sentence.of) {
        (About::Intensity, _) => "intensities",
        (_, Some(Role::EnergyMeanField)) => "mean-field energies",
        (_, Some(_)) => "quasiparticle energies",
        (_, None) => "energies",
    }
}

fn sentence(text: &str) -> Option<Sentence> {
    let (about, of, rest) = subject(text)?;
    let relation = words::relation(rest);
    let rest = relation.map_or(rest, |(before, ..)| before).trim();
    let unit = match rest.strip_prefix("in ") {
        Some(unit) => Some(unit_of(unit, about)?),
        None if rest.trim_end_matches('.').is_empty() => None,
        None => return None,
    };
    let zero = relation.map(|(_, direction, zero)| (direction, zero));
    let says = unit.is_some() || of.is_some() || zero.is_some();
    // An intensity has no zero.
    (says && (about == About::Energy || zero.is_none())).then_some(Sentence {
        about,
        of,
        unit,
        zero,
    })
}

fn unit_of(text: &str, about: About) -> Option<Unit> {
    let text = text.trim_start_matches("units of ").trim();
    // The sentence may end with a point, and so may `a.u.`
    let texts = [text, text.trim_end_matches('.')];
    texts.into_iter().find_map(|text| match about {
        About::Energy => EnergyUnit::from_spelling(text).map(Unit::Energy),
        About::Intensity => IntensityUnit::from_spelling(text).map(Unit::Intensity),
    })
}

/// The subject of a sentence, and what follows it with the blank before it, so that a relation may
/// stand first.
fn subject(text: &str) -> Option<(About, Option<Role>, &str)> {
    let (mut about, mut of) = (None, None);
    let mut at = 0;
    for word in text.split_inclusive(' ') {
        match word.trim().to_lowercase().as_str() {
            "" | "all" | "the" | "band" | "given" | "are" | "is" | "measured" => {}
            "energies" | "energy" | "eigenvalues" | "gaps" | "gap" if about.is_none() => {
                about = Some(About::Energy);
            }
            "intensities" | "intensity" if about.is_none() => about = Some(About::Intensity),
            "quasiparticle" | "qp" | "gw" | "g0w0" if about.is_none() => {
                of = Some(Role::EnergyQuasiparticle);
            }
            "mean-field" | "kohn-sham" | "ks" | "dft" | "hartree-fock" if about.is_none() => {
                of = Some(Role::EnergyMeanField);
            }
            _ => break,
        }
        at += word.len();
    }
    let start = at.saturating_sub(usize::from(text[..at].ends_with(' ')));
    let rest = &text[start..];
    // `mean-field in Ha` leaves the word "energies" out.
    let about = about.or((of.is_some() && rest.starts_with(" in ")).then_some(About::Energy));
    about.map(|about| (about, of, rest))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn comments_are_evidence_only_as_a_whole() {
        for text in [
            "energies in eV, sign reversed",
            "energies in eV, not relative to E_F",
            "energies relative to E_F, shifted by 1 eV",
            "energies in eV; E_KS in Ha",
            "intensities in counts, divided by 10",
            "Σ in Ha, energies in eV",
        ] {
            assert_eq!(hear(text), Heard::InPart, "{text}");
        }
        for text in [
            "invented",
            "energies vary",
            "energies, as the reader knows, vary",
            "energies in eV relative to the valence band maximum (5.12 eV)",
            "energies in eV (shifted)",
            "energy is conserved",
            "the gap",
        ] {
            assert_eq!(hear(text), Heard::Nothing, "{text}");
        }
    }

    #[test]
    fn pieces_go_on_about_the_same() {
        let Heard::Whole(heard) = hear("quasiparticle energies are in eV, mean-field in Ha") else {
            panic!("not understood");
        };
        let of = |role, unit| Sentence {
            about: About::Energy,
            of: Some(role),
            unit: Some(Unit::Energy(unit)),
            zero: None,
        };
        let quasiparticle = of(Role::EnergyQuasiparticle, EnergyUnit::Electronvolt);
        let mean_field = of(Role::EnergyMeanField, EnergyUnit::Hartree);
        assert_eq!(heard, [(0..32, quasiparticle), (34..50, mean_field)]);
        let Heard::Whole(heard) =
            hear("invented crystal, energies in units of a.u., relative to E_F.")
        else {
            panic!("not understood");
        };
        assert_eq!(heard.len(), 2);
    }
}
