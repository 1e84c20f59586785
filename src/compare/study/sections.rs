//! The sections of a study file, key by key.

use toml::de::DeTable;

use super::section::{Dimension, Reader, Section};
use super::{
    ComparisonSection, ComputedEnergies, ComputedSection, Correction, Protocol, SideSection,
    Stated, Study,
};
use crate::parse::{Decimal, Delimiter, Hints, Problem, Settle};
use crate::quantity::{AxisKind, Reference};

/// The tolerance where a study names none, eV.
const TOLERANCE: f64 = 0.2;

/// The corrections: key, and what one unit does to the computed gap.
const CORRECTIONS: [(&str, f64); 5] = [
    ("zero_point", 1.0),
    ("thermal", 1.0),
    ("spin_orbit_valence", -1.0),
    ("spin_orbit_conduction", 1.0),
    ("environment", 1.0),
];

/// The causes of uncertainty of a computed gap.
const COMPUTED_UNCERTAINTY: [&str; 5] = [
    "k_grid",
    "empty_states",
    "basis",
    "pseudopotential",
    "starting_point",
];

/// Reads everything; `None` where something needed is missing, which is then among the problems.
pub(super) fn study(reader: &mut Reader<'_>, table: &DeTable<'_>) -> Option<Study> {
    let mut root = Reader::root(table);
    let title = reader.text(&mut root, "title").map(|(text, _)| text);
    let section = reader.section(&mut root, "computed");
    let computed = computed(reader, section);
    let section = reader.section(&mut root, "photoemission");
    let photoemission = side(reader, section, true);
    let section = reader.section(&mut root, "inverse_photoemission");
    let inverse_photoemission = side(reader, section, false);
    let section = reader.section(&mut root, "comparison");
    let comparison = comparison(reader, section);
    let section = reader.section(&mut root, "corrections");
    let corrections = corrections(reader, section);
    reader.finish(&root);
    if photoemission.is_none()
        && inverse_photoemission.is_none()
        && !table.contains_key("photoemission")
        && !table.contains_key("inverse_photoemission")
    {
        let place = reader.place(0..0);
        reader.problem(
            Problem::new("the study names no measurement")
                .at(place)
                .with_help(
                    "add [photoemission] or [inverse_photoemission] with spectrum = \"FILE\"",
                ),
        );
    }
    Some(Study {
        source: reader.source.clone(),
        title: title.unwrap_or_else(|| reader.source.name().to_owned()),
        computed: computed?,
        photoemission,
        inverse_photoemission,
        comparison,
        corrections,
    })
}

const REFERENCES: [(&str, Reference); 4] = [
    ("fermi", Reference::Fermi),
    ("valence-edge", Reference::ValenceEdge),
    ("vacuum", Reference::Vacuum),
    ("unknown", Reference::Unknown),
];

const AXES: [(&str, AxisKind); 3] = [
    ("kinetic", AxisKind::Kinetic),
    ("binding", AxisKind::Binding),
    ("final-state", AxisKind::FinalState),
];

fn needed<T>(
    reader: &mut Reader<'_>,
    section: &Section<'_>,
    key: &str,
    value: Option<T>,
    had: bool,
) -> Option<T> {
    if value.is_none() && !had {
        let place = reader.place(0..0);
        reader.problem(
            Problem::new(format!("the study has no {}", section.path(key)))
                .at(place)
                .with_help(format!(
                    "add {key} = \"FILE\" under [{}]",
                    section.path("").trim_end_matches('.')
                )),
        );
    }
    value
}

fn decimal(reader: &mut Reader<'_>, section: &mut Section<'_>) -> Option<Decimal> {
    let words = [Decimal::Point, Decimal::Comma].map(|decimal| (decimal.name(), decimal));
    reader
        .word(section, "decimal", &words)
        .map(|(decimal, _)| decimal)
}

/// Which curve of a file that has several.
// The number comes from a whole one.
#[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)]
fn block(reader: &mut Reader<'_>, section: &mut Section<'_>) -> Option<usize> {
    reader
        .whole(section, "block")
        .map(|stated| stated.value as usize)
}

fn delimiter(reader: &mut Reader<'_>, section: &mut Section<'_>) -> Option<Delimiter> {
    let words = Delimiter::ALL.map(|delimiter| (delimiter.name(), delimiter));
    reader
        .word(section, "delimiter", &words)
        .map(|(delimiter, _)| delimiter)
}

fn computed(reader: &mut Reader<'_>, mut section: Section<'_>) -> Option<ComputedSection> {
    let before = section.has("levels");
    let levels = reader.file(&mut section, "levels");
    let levels = needed(reader, &section, "levels", levels, before);
    let reference = reader.word(&mut section, "reference", &REFERENCES);
    let energies = reader.word(
        &mut section,
        "energies",
        &[
            ("quasiparticle", ComputedEnergies::Quasiparticle),
            ("mean-field", ComputedEnergies::MeanField),
        ],
    );
    let occupied_bands = reader.whole(&mut section, "occupied_bands");
    let hints = Hints {
        columns: reader.columns(&mut section),
        units: reader.units(&mut section),
        axis: None,
        decimal: decimal(reader, &mut section),
        delimiter: delimiter(reader, &mut section),
        block: None,
        reference: reference.as_ref().map(|(reference, _)| *reference),
        settle: Settle::Keys(format!("under [computed] in {}", reader.source.name())),
    };
    let mut inner = reader.section(&mut section, "uncertainty");
    let mut uncertainty = Vec::new();
    for key in COMPUTED_UNCERTAINTY {
        if let Some(stated) = not_negative(reader, &mut inner, key, Dimension::Energy) {
            uncertainty.push((key.to_owned(), stated));
        }
    }
    reader.finish(&inner);
    reader.finish(&section);
    Some(ComputedSection {
        levels: levels?,
        reference: reference.as_ref().map(|(reference, _)| *reference),
        reference_place: reference.map(|(_, place)| place),
        energies: energies.map(|(energies, _)| energies).unwrap_or_default(),
        occupied_bands,
        hints,
        uncertainty,
    })
}

/// Reads one measured side. Keys of the other technique are unknown here.
fn side(
    reader: &mut Reader<'_>,
    mut section: Section<'_>,
    photoemission: bool,
) -> Option<SideSection> {
    if !section.is_there() {
        return None;
    }
    let s = &mut section;
    let before = s.has("spectrum");
    let spectrum = reader.file(s, "spectrum");
    let spectrum = needed(reader, s, "spectrum", spectrum, before);
    let hints = Hints {
        columns: reader.columns(s),
        units: reader.units(s),
        axis: reader.word(s, "axis", &AXES).map(|(axis, _)| axis),
        reference: reader.word(s, "reference", &REFERENCES).map(|(r, _)| r),
        decimal: decimal(reader, s),
        delimiter: delimiter(reader, s),
        block: block(reader, s),
        settle: Settle::Keys(format!(
            "under [{}] in {}",
            s.path("").trim_end_matches('.'),
            reader.source.name()
        )),
    };
    let photon_energy = positive(reader, s, "photon_energy", Dimension::Energy);
    let (analyser_work_function, sample_work_function, sample_bias) = if photoemission {
        (
            positive(reader, s, "analyser_work_function", Dimension::Energy),
            positive(reader, s, "sample_work_function", Dimension::Energy),
            reader.quantity(s, "sample_bias", Dimension::Potential),
        )
    } else {
        (None, None, None)
    };
    let (cathode_work_function, cathode_temperature) = if photoemission {
        (None, None)
    } else {
        (
            positive(reader, s, "cathode_work_function", Dimension::Energy),
            positive(reader, s, "cathode_temperature", Dimension::Temperature),
        )
    };
    let fermi_edge = reader.file(s, "fermi_edge");
    let energy_offset = reader.quantity(s, "energy_offset", Dimension::Energy);
    let resolution_fwhm = not_negative(reader, s, "resolution_fwhm", Dimension::Energy);
    let temperature = not_negative(reader, s, "temperature", Dimension::Temperature);
    let dwell = positive(reader, s, "dwell", Dimension::Time);
    let sweeps = reader.whole(s, "sweeps");
    reader.finish(&section);
    Some(SideSection {
        spectrum: spectrum?,
        hints,
        photon_energy,
        analyser_work_function,
        sample_work_function,
        cathode_work_function,
        cathode_temperature,
        fermi_edge,
        sample_bias,
        energy_offset,
        resolution_fwhm,
        temperature,
        dwell,
        sweeps,
    })
}

fn positive(
    reader: &mut Reader<'_>,
    section: &mut Section<'_>,
    key: &'static str,
    dimension: Dimension,
) -> Option<Stated> {
    bounded(reader, section, key, dimension, "positive", |value| {
        value > 0.0
    })
}

fn not_negative(
    reader: &mut Reader<'_>,
    section: &mut Section<'_>,
    key: &'static str,
    dimension: Dimension,
) -> Option<Stated> {
    bounded(reader, section, key, dimension, "zero or more", |value| {
        value >= 0.0
    })
}

fn bounded(
    reader: &mut Reader<'_>,
    section: &mut Section<'_>,
    key: &'static str,
    dimension: Dimension,
    want: &str,
    holds: impl Fn(f64) -> bool,
) -> Option<Stated> {
    let stated = reader.quantity(section, key, dimension)?;
    if holds(stated.value) {
        return Some(stated);
    }
    reader.problem(Problem::new(format!("{} must be {want}", section.path(key))).at(stated.place));
    None
}

fn comparison(reader: &mut Reader<'_>, mut section: Section<'_>) -> ComparisonSection {
    let words = Protocol::ALL.map(|protocol| (protocol.name(), protocol));
    let protocols = reader.words(&mut section, "protocols", &words);
    let tolerance = positive(reader, &mut section, "tolerance", Dimension::Energy);
    let window = positive(reader, &mut section, "edge_window", Dimension::Energy);
    reader.finish(&section);
    let named: Vec<Protocol> = protocols
        .into_iter()
        .flatten()
        .map(|(protocol, _)| protocol)
        .collect();
    ComparisonSection {
        protocols: if named.is_empty() {
            Protocol::ALL.to_vec()
        } else {
            named
        },
        tolerance: tolerance.map_or(TOLERANCE, |stated| stated.value),
        window: window.map(|stated| stated.value),
    }
}

fn corrections(reader: &mut Reader<'_>, mut section: Section<'_>) -> Vec<Correction> {
    let names = CORRECTIONS.map(|(name, _)| (name, name));
    let included = reader
        .words(&mut section, "already_included", &names)
        .unwrap_or_default();
    let mut list = Vec::new();
    for (name, sign) in CORRECTIONS {
        let Some(stated) = reader.quantity(&mut section, name, Dimension::Energy) else {
            continue;
        };
        if let Some((_, place)) = included.iter().find(|(other, _)| *other == name) {
            reader.problem(
                Problem::new(format!(
                    "corrections.{name} is given and also said to be in the levels already"
                ))
                .at(stated.place.clone())
                .with_related(place.clone(), "said to be included here")
                .with_help("remove one of the two"),
            );
        }
        list.push(Correction { name, stated, sign });
    }
    reader.finish(&section);
    list
}
