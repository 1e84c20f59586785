//! The trade's words: how a name splits into words and what each of them says.

use super::role::Kind;
use crate::quantity::Reference;

/// What a word of a name says.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Tag {
    Energy,
    MeanField,
    Quasiparticle,
    Occupation,
    Weight,
    K,
    KX,
    KY,
    KZ,
    Band,
    Spin,
    Kinetic,
    Binding,
    FinalState,
    Photon,
    Intensity,
    Counts,
    Rate,
    Uncertainty,
    /// Says nothing of its own, as in "index" or "of".
    Plain,
}

/// The words of a name: split at everything that is no letter or digit, and where a small letter
/// meets a capital (`EKin`, `nBand`, `KSEnergy`). Words that belong together are joined (`mean field`).
pub(super) fn words(name: &str) -> Vec<String> {
    let mut words: Vec<String> = Vec::new();
    for run in name.split(|c: char| !c.is_alphanumeric()) {
        camel(run, &mut words);
    }
    join(words)
}

fn camel(run: &str, words: &mut Vec<String>) {
    let letters: Vec<char> = run.chars().collect();
    let mut word = String::new();
    for (at, &letter) in letters.iter().enumerate() {
        let before = at.checked_sub(1).map(|before| letters[before]);
        let small_next = letters.get(at + 1).is_some_and(|next| next.is_lowercase());
        let starts = letter.is_uppercase()
            && before.is_some_and(|b| b.is_lowercase() || (b.is_uppercase() && small_next));
        if starts && !word.is_empty() {
            words.push(std::mem::take(&mut word));
        }
        word.push(letter);
    }
    if !word.is_empty() {
        words.push(word);
    }
}

fn join(words: Vec<String>) -> Vec<String> {
    let mut joined: Vec<String> = Vec::new();
    for word in words {
        let pair = joined
            .last()
            .map(|last| format!("{last} {word}").to_lowercase());
        match pair.as_deref().and_then(joined_word) {
            Some(one) => {
                joined.pop();
                joined.push(one.to_owned());
            }
            None => joined.push(word),
        }
    }
    joined
}

fn joined_word(pair: &str) -> Option<&'static str> {
    Some(match pair {
        "mean field" | "kohn sham" | "hartree fock" => "meanfield",
        "quasi particle" => "quasiparticle",
        "final state" => "finalstate",
        "photon energy" | "h nu" | "h ν" | "h v" => "photon",
        "band energy" | "band energies" => "energy",
        "e b" => "eb",
        "k x" | "k 1" => "kx",
        "k y" | "k 2" => "ky",
        "k z" | "k 3" => "kz",
        "g0 w0" => "gw",
        _ => return None,
    })
}

/// What one word says in a table of `kind`; `None` where it is no word of the trade.
pub(super) fn tag(word: &str, kind: Kind) -> Option<Tag> {
    let lower = word.to_lowercase();
    let by_kind = match kind {
        Kind::Levels => levels_tag(&lower),
        Kind::Spectrum if word == "N" => Some(Tag::Intensity),
        Kind::Spectrum => spectrum_tag(&lower),
        Kind::Any => None,
    };
    by_kind
        .or_else(|| common_tag(&lower))
        .or_else(|| energy_of(&lower, kind))
}

fn common_tag(word: &str) -> Option<Tag> {
    Some(match word {
        "e" | "en" | "eps" | "epsilon" | "ε" | "energy" | "energies" => Tag::Energy,
        "index" | "idx" | "number" | "no" | "num" | "of" | "the" | "at" | "level" | "levels"
        | "value" | "values" | "channel" | "standard" | "state" => Tag::Plain,
        _ => return None,
    })
}

fn levels_tag(word: &str) -> Option<Tag> {
    Some(match word {
        "eig" | "eigs" | "eigval" | "eigenvalue" | "eigenvalues" | "eigenenergy" => Tag::Energy,
        "ks" | "dft" | "hf" | "mf" | "lda" | "gga" | "pbe" | "pbe0" | "hse" | "hse06"
        | "hybrid" | "meanfield" => Tag::MeanField,
        "qp" | "gw" | "g0w0" | "gw0" | "evgw" | "evgw0" | "qsgw" | "scgw" | "quasiparticle" => {
            Tag::Quasiparticle
        }
        "f" | "occ" | "occs" | "occupation" | "occupations" | "occupancy" => Tag::Occupation,
        "w" | "wk" | "wt" | "wtk" | "weight" | "weights" => Tag::Weight,
        "k" | "ik" | "kpt" | "kpts" | "ikpt" | "kpoint" | "kindex" => Tag::K,
        "kx" | "k1" => Tag::KX,
        "ky" | "k2" => Tag::KY,
        "kz" | "k3" => Tag::KZ,
        "n" | "ib" | "nb" | "bnd" | "band" | "bands" | "nband" | "iband" => Tag::Band,
        "spin" | "is" | "ispin" => Tag::Spin,
        "i" | "point" => Tag::Plain,
        _ => return None,
    })
}

fn spectrum_tag(word: &str) -> Option<Tag> {
    Some(match word {
        "ke" | "kin" | "kinetic" => Tag::Kinetic,
        "be" | "eb" | "binding" => Tag::Binding,
        "finalstate" => Tag::FinalState,
        "photon" | "hv" | "hν" | "wavelength" => Tag::Photon,
        "i" | "intensity" | "signal" => Tag::Intensity,
        "counts" | "count" => Tag::Counts,
        "rate" => Tag::Rate,
        "sigma" | "σ" | "std" | "stdev" | "sd" | "uncertainty" | "error" | "err" | "u"
        | "deviation" => Tag::Uncertainty,
        "electron" | "photoelectron" => Tag::Plain,
        _ => return None,
    })
}

/// A word such as `eqp` or `ekin`: an energy and what it is the energy of.
fn energy_of(word: &str, kind: Kind) -> Option<Tag> {
    let rest = word.strip_prefix('e')?;
    let tag = match kind {
        Kind::Levels => levels_tag(rest),
        Kind::Spectrum => spectrum_tag(rest),
        Kind::Any => None,
    };
    tag.filter(|tag| matches!(tag, Tag::MeanField | Tag::Quasiparticle | Tag::Kinetic))
}

/// The reference that a phrase names, as in `E_F` or `the vacuum level`.
pub(super) fn reference(phrase: &str) -> Option<Reference> {
    let lower: Vec<String> = words(phrase)
        .iter()
        .map(|word| word.to_lowercase())
        .filter(|word| word != "the")
        .collect();
    Some(match lower.join(" ").as_str() {
        "e f" | "ef" | "fermi" | "e fermi" | "efermi" | "fermi level" | "fermi energy"
        | "fermi edge" => Reference::Fermi,
        "vbm"
        | "e vbm"
        | "evbm"
        | "homo"
        | "valence edge"
        | "valence band edge"
        | "valence band maximum"
        | "valence band top" => Reference::ValenceEdge,
        "vac" | "vacuum" | "e vac" | "evac" | "vacuum level" => Reference::Vacuum,
        _ => return None,
    })
}

/// A phrase that counts an energy from somewhere: what stands before it, the relation, the zero.
pub(super) fn relation(phrase: &str) -> Option<(&str, Relation, Reference)> {
    const FORMS: [(&str, Relation); 8] = [
        (" relative to ", Relation::From),
        (" with respect to ", Relation::From),
        (" referenced to ", Relation::From),
        (" rel. to ", Relation::From),
        (" wrt ", Relation::From),
        (" vs ", Relation::From),
        (" above ", Relation::Above),
        (" below ", Relation::Below),
    ];
    // Lower-casing ASCII keeps every offset.
    let padded = format!(" {}", phrase.to_ascii_lowercase());
    FORMS.into_iter().find_map(|(form, relation)| {
        let at = padded.find(form)?;
        let before = phrase.get(..at.saturating_sub(1))?;
        let zero = reference(phrase.get(at + form.len() - 1..)?)?;
        Some((before.trim(), relation, zero))
    })
}

/// How a phrase counts from its zero.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Relation {
    /// Says the zero and no direction.
    From,
    /// Counts upwards.
    Above,
    /// Counts downwards.
    Below,
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_split_into_words() {
        for (name, expected) in [
            ("E_QP", vec!["E", "QP"]),
            ("KSEnergy", vec!["KS", "Energy"]),
            ("nBand", vec!["n", "Band"]),
            ("mean-field energy", vec!["meanfield", "energy"]),
            ("k_x", vec!["kx"]),
            ("G0W0", vec!["G0W0"]),
            ("final state energy", vec!["finalstate", "energy"]),
            ("", vec![]),
        ] {
            assert_eq!(words(name), expected, "{name}");
        }
    }

    #[test]
    fn references() {
        for (phrase, expected) in [
            ("E_F", Some(Reference::Fermi)),
            ("EFermi", Some(Reference::Fermi)),
            ("the Fermi level", Some(Reference::Fermi)),
            ("E_VBM", Some(Reference::ValenceEdge)),
            ("vacuum", Some(Reference::Vacuum)),
            // Valence or vacuum: not said.
            ("E_v", None),
        ] {
            assert_eq!(reference(phrase), expected, "{phrase}");
        }
        assert_eq!(
            relation("Energy above Fermi level"),
            Some(("Energy", Relation::Above, Reference::Fermi))
        );
        assert_eq!(
            relation("wrt vacuum"),
            Some(("", Relation::From, Reference::Vacuum))
        );
        assert_eq!(relation("above the floor"), None);
    }
}
