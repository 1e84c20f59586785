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
    Distance,
    Band,
    Spin,
    Direction,
    Correction,
    Z,
    Sigma,
    SigmaX,
    SigmaC,
    X,
    C,
    Xc,
    Vxc,
    Exchange,
    Correlation,
    Potential,
    Orbital,
    Element,
    Projected,
    Total,
    Density,
    Kinetic,
    Binding,
    FinalState,
    Photon,
    Intensity,
    Counts,
    Rate,
    Sweep,
    Peak,
    Uncertainty,
    Material,
    Polymorph,
    Gap,
    Ionisation,
    Affinity,
    Optical,
    Direct,
    Minimum,
    Transport,
    Excitation,
    Method,
    StartingPoint,
    Temperature,
    Experiment,
    Origin,
    Value,
    Unit,
    Parameter,
    /// A whole number, as in `band 3`.
    Number,
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
        "k e" => "ke",
        "b e" => "be",
        "starting point" => "startingpoint",
        "band gap" | "energy gap" | "e g" | "e gap" => "gap",
        "electron affinity" => "affinity",
        "k path" | "k distance" | "path length" => "kdistance",
        "wave vector" => "wavevector",
        "v xc" => "vxc",
        "sigma x" | "σ x" => "sigmax",
        "sigma c" | "σ c" => "sigmac",
        "plane waves" => "planewaves",
        "this work" => "value",
        _ => return None,
    })
}

/// What one word says in a table of `kind`; `None` where it is no word of the trade. A number may end
/// a word, as in `band3`.
pub(super) fn tags_of(word: &str, kind: Kind) -> Option<Vec<Tag>> {
    if let Some(tag) = tag(word, kind) {
        return Some(vec![tag]);
    }
    let name = word.trim_end_matches(|c: char| c.is_ascii_digit());
    if name.len() == word.len() || word.len() - name.len() > 6 {
        return None;
    }
    match name {
        "" => Some(vec![Tag::Number]),
        name => Some(vec![tag(name, kind)?, Tag::Number]),
    }
}

/// What one word says without a number at its end.
pub(super) fn tag(word: &str, kind: Kind) -> Option<Tag> {
    let lower = word.to_lowercase();
    let by_kind = match kind {
        Kind::Levels => levels_tag(&lower).or_else(|| share_tag(word)),
        Kind::Spectrum if word == "N" => Some(Tag::Intensity),
        Kind::Spectrum => spectrum_tag(&lower),
        Kind::Density => density_tag(&lower).or_else(|| share_tag(word)),
        Kind::Dispersion => dispersion_tag(&lower),
        Kind::Gaps => gaps_tag(&lower),
        Kind::Series => series_tag(&lower),
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

/// Words for a mean field and for a quasiparticle method.
fn theory_tag(word: &str) -> Option<Tag> {
    Some(match word {
        "ks" | "dft" | "hf" | "mf" | "lda" | "gga" | "pbe" | "pbe0" | "pbesol" | "hse"
        | "hse06" | "scan" | "hybrid" | "meanfield" => Tag::MeanField,
        "qp" | "gw" | "g0w0" | "gw0" | "evgw" | "evgw0" | "qsgw" | "scgw" | "quasiparticle" => {
            Tag::Quasiparticle
        }
        _ => return None,
    })
}

fn levels_tag(word: &str) -> Option<Tag> {
    Some(match word {
        "eig" | "eigs" | "eigval" | "eigenvalue" | "eigenvalues" | "eigenenergy" => Tag::Energy,
        "f" | "occ" | "occs" | "occupation" | "occupations" | "occupancy" => Tag::Occupation,
        "w" | "wk" | "wt" | "wtk" | "weight" | "weights" => Tag::Weight,
        "k" | "ik" | "kpt" | "kpts" | "ikpt" | "kpoint" | "kindex" => Tag::K,
        "kx" | "k1" => Tag::KX,
        "ky" | "k2" => Tag::KY,
        "kz" | "k3" => Tag::KZ,
        "kdistance" | "kdist" | "kpath" | "distance" | "path" => Tag::Distance,
        "n" | "ib" | "nb" | "bnd" | "band" | "bands" | "nband" | "iband" => Tag::Band,
        "spin" | "is" | "ispin" => Tag::Spin,
        "correction" => Tag::Correction,
        "z" | "znk" | "renorm" | "renormalization" | "renormalisation" => Tag::Z,
        "sigma" | "σ" => Tag::Sigma,
        "sigmax" | "sigx" | "σx" => Tag::SigmaX,
        "sigmac" | "sigc" | "σc" => Tag::SigmaC,
        "x" => Tag::X,
        "c" => Tag::C,
        "xc" => Tag::Xc,
        "vxc" => Tag::Vxc,
        "exchange" => Tag::Exchange,
        "correlation" => Tag::Correlation,
        "potential" => Tag::Potential,
        "proj" | "projection" | "projected" | "character" => Tag::Projected,
        "unit" | "units" => Tag::Unit,
        "i" | "point" | "factor" | "part" | "self" | "re" | "real" => Tag::Plain,
        _ => return theory_tag(word),
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
        "sweep" | "scan" => Tag::Sweep,
        "electron" | "photoelectron" => Tag::Plain,
        _ => return uncertainty_tag(word),
    })
}

fn uncertainty_tag(word: &str) -> Option<Tag> {
    Some(match word {
        "sigma" | "σ" | "std" | "stdev" | "sd" | "uncertainty" | "error" | "err" | "u"
        | "deviation" => Tag::Uncertainty,
        _ => return None,
    })
}

fn density_tag(word: &str) -> Option<Tag> {
    Some(match word {
        "dos" | "density" | "states" => Tag::Density,
        "total" | "tot" | "tdos" => Tag::Total,
        "pdos" | "ldos" | "projected" | "proj" | "partial" | "local" => Tag::Projected,
        "up" | "down" | "dn" => Tag::Direction,
        "spin" => Tag::Spin,
        "atom" | "orbital" => Tag::Plain,
        _ => return spectrum_tag(word).filter(|tag| matches!(tag, Tag::Kinetic | Tag::Binding)),
    })
}

/// An orbital, or the symbol of an element in its own spelling.
fn share_tag(word: &str) -> Option<Tag> {
    const ORBITALS: [&str; 14] = [
        "s", "p", "d", "px", "py", "pz", "dxy", "dxz", "dyz", "dz2", "dx2", "t2g", "eg", "f",
    ];
    let shell = word.trim_start_matches(|c: char| c.is_ascii_digit());
    if ORBITALS.contains(&shell) {
        return Some(Tag::Orbital);
    }
    ELEMENTS
        .split(' ')
        .any(|symbol| symbol == word)
        .then_some(Tag::Element)
}

/// The symbols of the elements (IUPAC), up to 103.
const ELEMENTS: &str = "H He Li Be B C N O F Ne Na Mg Al Si P S Cl Ar K Ca Sc Ti V Cr Mn Fe Co Ni Cu \
    Zn Ga Ge As Se Br Kr Rb Sr Y Zr Nb Mo Tc Ru Rh Pd Ag Cd In Sn Sb Te I Xe Cs Ba La Ce Pr Nd Pm Sm \
    Eu Gd Tb Dy Ho Er Tm Yb Lu Hf Ta W Re Os Ir Pt Au Hg Tl Pb Bi Po At Rn Fr Ra Ac Th Pa U Np Pu Am \
    Cm Bk Cf Es Fm Md No Lr";

fn dispersion_tag(word: &str) -> Option<Tag> {
    Some(match word {
        "k" | "kpar" | "kparallel" | "parallel" | "momentum" | "wavevector" => Tag::K,
        "kx" | "ky" => Tag::KX,
        "peak" | "position" | "maximum" => Tag::Peak,
        _ => {
            let tag = spectrum_tag(word)?;
            let energy = matches!(
                tag,
                Tag::Kinetic | Tag::Binding | Tag::FinalState | Tag::Uncertainty
            );
            return energy.then_some(tag);
        }
    })
}

/// Words for a gap, an ionisation energy or an affinity.
fn value_tag(word: &str) -> Option<Tag> {
    Some(match word {
        "gap" | "gaps" | "eg" | "egap" | "bandgap" => Tag::Gap,
        "ip" | "ie" | "ionisation" | "ionization" => Tag::Ionisation,
        "ea" | "affinity" => Tag::Affinity,
        "potential" => Tag::Potential,
        "optical" | "exciton" | "excitonic" => Tag::Optical,
        "direct" => Tag::Direct,
        "minimum" | "min" | "indirect" | "fundamental" | "smallest" => Tag::Minimum,
        "transport" | "photoemission" => Tag::Transport,
        "value" => Tag::Value,
        "unit" | "units" => Tag::Unit,
        "exp" | "expt" | "experiment" | "experimental" | "measured" | "measurement" => {
            Tag::Experiment
        }
        _ => return uncertainty_tag(word).or_else(|| theory_tag(word)),
    })
}

fn gaps_tag(word: &str) -> Option<Tag> {
    Some(match word {
        "material" | "compound" | "formula" | "solid" | "crystal" | "substance" => Tag::Material,
        "polymorph" | "phase" | "structure" | "prototype" => Tag::Polymorph,
        "method" | "functional" | "approach" | "theory" | "technique" => Tag::Method,
        "start" | "startingpoint" => Tag::StartingPoint,
        "temperature" | "t" => Tag::Temperature,
        "source" | "reference" | "ref" | "citation" | "doi" => Tag::Origin,
        "excitation" | "kind" | "type" => Tag::Excitation,
        "momentum" | "transition" | "k" | "kpoint" => Tag::K,
        "point" | "energy" | "chemical" => Tag::Plain,
        _ => return value_tag(word),
    })
}

fn series_tag(word: &str) -> Option<Tag> {
    Some(match word {
        "cutoff" | "ecut" | "planewaves" | "npw" | "frequencies" | "nfreq" | "nω" | "points"
        | "nodes" | "basis" | "size" | "empty" | "states" | "grid" | "mesh" | "screening" | "g" => {
            Tag::Parameter
        }
        "bands" | "band" | "nband" | "nbands" | "n" | "nb" => Tag::Band,
        "k" | "kpoints" | "kpoint" | "nk" | "kgrid" => Tag::K,
        "correction" => Tag::Correction,
        "point" | "functions" => Tag::Plain,
        _ => return value_tag(word).filter(|tag| *tag != Tag::MeanField),
    })
}

/// A word such as `eqp` or `ekin`: an energy and what it is the energy of.
fn energy_of(word: &str, kind: Kind) -> Option<Tag> {
    let rest = word.strip_prefix('e')?;
    let tag = match kind {
        Kind::Levels => levels_tag(rest),
        Kind::Spectrum | Kind::Density | Kind::Dispersion => spectrum_tag(rest),
        Kind::Gaps | Kind::Series | Kind::Any => None,
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
