//! Edges and gaps of the computed levels.

use std::collections::{BTreeMap, BTreeSet};

use super::error::Error;
use super::study::{ComputedEnergies, ComputedSection};
use crate::check::Validated;
use crate::parse::{Problem, Role};
use crate::schema::{Computed, EdgeLocation, Levels, Quantity, Side, SpinGap};

/// The energies, weights and k-points of the levels of one side.
#[derive(Debug, Clone, PartialEq, Default)]
pub(super) struct SideLevels {
    pub energies: Vec<f64>,
    pub weights: Vec<f64>,
    /// The number of the k-point, from 0; empty where the table names none.
    pub points: Vec<usize>,
}

/// The computed bands, split at the gap.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Bands {
    pub occupied: SideLevels,
    pub empty: SideLevels,
    /// Number of k-points; zero where the table names none.
    pub points: usize,
    /// Whether they are a regular grid.
    pub regular: bool,
    pub valence_edge: f64,
    pub conduction_edge: f64,
    pub record: Computed,
}

impl Bands {
    pub(super) fn side(&self, side: Side) -> (&SideLevels, f64) {
        match side {
            Side::Valence => (&self.occupied, self.valence_edge),
            Side::Conduction => (&self.empty, self.conduction_edge),
        }
    }
}

/// Splits levels into occupied and empty and finds the edges.
pub(super) fn bands(levels: &Validated<Levels>, section: &ComputedSection) -> Result<Bands, Error> {
    let document = &levels.document;
    let (energies, role) = energies(levels, section)?;
    let occupied = occupied(levels, section)?;
    let highest = extremum(energies, |row| occupied[row], f64::max);
    let lowest = extremum(energies, |row| !occupied[row], f64::min);
    let (Some(highest), Some(lowest)) = (highest, lowest) else {
        return Err(one_sided(levels, &occupied).into());
    };
    let points = k_points(document);
    let split = |wanted: bool| -> SideLevels {
        let rows: Vec<usize> = (0..document.rows)
            .filter(|&r| occupied[r] == wanted)
            .collect();
        SideLevels {
            energies: rows.iter().map(|&r| energies[r]).collect(),
            weights: rows.iter().map(|&r| document.weight_of(r)).collect(),
            points: points
                .as_ref()
                .map_or_else(Vec::new, |points| rows.iter().map(|&r| points[r]).collect()),
        }
    };
    check_reference(levels, section, energies[highest], &occupied)?;
    let gap = energies[lowest] - energies[highest];
    if gap <= 0.0 {
        return Err(overlap(levels, (highest, lowest), energies, role).into());
    }
    let record = Computed {
        gap: Some(Quantity::unstated(gap)),
        direct_gap: points
            .as_ref()
            .and_then(|points| direct_gap(document, energies, &occupied, points))
            .map(Quantity::unstated),
        corrected_gap: None,
        spin_gaps: spin_gaps(document, energies, &occupied),
        valence_edge: location(levels, highest, energies[highest], role),
        conduction_edge: location(levels, lowest, energies[lowest], role),
        reordered_levels: reordered(document, points.as_deref(), &occupied),
    };
    Ok(Bands {
        regular: is_regular(document, points.as_deref()),
        occupied: split(true),
        empty: split(false),
        points: points.map_or(0, |p| p.iter().max().map_or(0, |m| m + 1)),
        valence_edge: energies[highest],
        conduction_edge: energies[lowest],
        record,
    })
}

fn energies<'a>(
    levels: &'a Validated<Levels>,
    section: &ComputedSection,
) -> Result<(&'a [f64], Role), Problem> {
    let document = &levels.document;
    let (list, role, other, word) = match section.energies {
        ComputedEnergies::Quasiparticle => (
            &document.energy_quasiparticle_ev,
            Role::EnergyQuasiparticle,
            "energies = \"mean-field\"",
            "quasiparticle",
        ),
        ComputedEnergies::MeanField => (
            &document.energy_mean_field_ev,
            Role::EnergyMeanField,
            "energies = \"quasiparticle\"",
            "mean-field",
        ),
    };
    match list {
        Some(list) => Ok((list, role)),
        None => Err(Problem::new(format!(
            "{} has no {word} energies",
            levels.source.name()
        ))
        .at(section.levels.place.clone())
        .with_help(format!(
            "name the column under [computed] (column.{} = \"HEADER\"), or compare the others with {other}",
            role.name()
        ))),
    }
}

/// Which rows are occupied.
fn occupied(levels: &Validated<Levels>, section: &ComputedSection) -> Result<Vec<bool>, Problem> {
    let document = &levels.document;
    match (&document.occupation, &section.occupied_bands) {
        (Some(_), Some(stated)) => Err(Problem::new(format!(
            "{} has occupations and the study states occupied_bands",
            levels.source.name()
        ))
        .at(stated.place.clone())
        .with_help("remove one of the two")),
        // The rules have refused what is neither empty nor full, and half of the least maximum, 1,
        // tells full from empty for both maxima.
        (Some(occupations), None) => Ok(occupations.iter().map(|f| *f > 0.5).collect()),
        (None, Some(stated)) => match &document.band {
            Some(bands) => {
                let first = bands.iter().copied().min().unwrap_or(1);
                #[allow(clippy::cast_possible_truncation)] // A whole number below 2^32.
                let count = stated.value as i64;
                Ok(bands.iter().map(|band| band - first < count).collect())
            }
            None => Err(Problem::new(
                "occupied_bands counts bands, and the table has no column of band numbers",
            )
            .at(stated.place.clone())
            .with_help("add a column \"band\" or \"occupation\" to the table")),
        },
        (None, None) => Err(Problem::new(format!(
            "{} does not say which levels are occupied",
            levels.source.name()
        ))
        .at(section.levels.place.clone())
        .with_help(
            "add a column \"occupation\", or state under [computed] how many bands are occupied: \
             occupied_bands = 4",
        )),
    }
}

fn one_sided(levels: &Validated<Levels>, occupied: &[bool]) -> Problem {
    let all = if occupied.iter().any(|&f| f) {
        "occupied"
    } else {
        "empty"
    };
    let problem = Problem::new(format!(
        "every level of {} is {all}: there is no gap",
        levels.source.name()
    ));
    let place = levels
        .header_place(Role::Occupation)
        .or_else(|| levels.header_place(Role::Band));
    let problem = problem.with_help("the table must hold bands on both sides of the gap");
    match place {
        Some(place) => problem.at(place),
        None => problem,
    }
}

/// Levels whose lowest empty one lies below the highest occupied one.
fn overlap(
    levels: &Validated<Levels>,
    (highest, lowest): (usize, usize),
    energies: &[f64],
    role: Role,
) -> Problem {
    let problem = Problem::new(format!(
        "the computed levels have no gap: the lowest empty one ({:.4} eV) is not above the highest \
         occupied one ({:.4} eV)",
        energies[lowest], energies[highest]
    ))
    .with_help(
        "a comparison of gaps needs one; check the occupations, or the two levels named here",
    );
    match (
        levels.place_of(lowest, role),
        levels.place_of(highest, role),
    ) {
        (Some(low), Some(high)) => problem
            .at(low)
            .with_related(high, "the highest occupied level"),
        _ => problem,
    }
}

/// `reference = "valence-edge"` must be true of the quasiparticle or of the mean-field energies.
fn check_reference(
    levels: &Validated<Levels>,
    section: &ComputedSection,
    edge: f64,
    occupied: &[bool],
) -> Result<(), Problem> {
    let Some(place) = &section.reference_place else {
        return Ok(());
    };
    if section.reference != Some(crate::quantity::Reference::ValenceEdge) {
        return Ok(());
    }
    let mean_field = levels
        .document
        .energy_mean_field_ev
        .as_ref()
        .and_then(|list| extremum(list, |row| occupied[row], f64::max).map(|row| list[row]));
    let near = |energy: f64| energy.abs() < 0.05;
    if near(edge) || mean_field.is_some_and(near) {
        return Ok(());
    }
    Err(Problem::new(format!(
        "the levels are said to count from the valence edge, but the highest occupied one stands \
         at {edge:.3} eV"
    ))
    .at(place.clone())
    .with_help("correct the reference (\"unknown\" will do: only differences are used), or the occupations"))
}

/// The row of the extreme energy among those wanted.
fn extremum(
    energies: &[f64],
    wanted: impl Fn(usize) -> bool,
    better: fn(f64, f64) -> f64,
) -> Option<usize> {
    let mut best: Option<usize> = None;
    for (row, &energy) in energies.iter().enumerate() {
        // The first of equal energies stays.
        let wins = best.is_none_or(|held| {
            better(energies[held], energy).to_bits() != energies[held].to_bits()
        });
        if wanted(row) && wins {
            best = Some(row);
        }
    }
    best
}

/// Numbers the k-points from 0 in order of appearance; `None` where the table names none.
fn k_points(levels: &Levels) -> Option<Vec<usize>> {
    let mut known = BTreeMap::new();
    let key = |row: usize| -> Option<[u64; 3]> {
        if let Some(index) = &levels.k_index {
            return Some([u64::from_ne_bytes(index[row].to_ne_bytes()), 0, 0]);
        }
        let bits = |list: &Option<Vec<f64>>| list.as_ref().map_or(0, |list| list[row].to_bits());
        levels
            .k_x
            .as_ref()
            .map(|_| [bits(&levels.k_x), bits(&levels.k_y), bits(&levels.k_z)])
    };
    (0..levels.rows)
        .map(|row| {
            let next = known.len();
            key(row).map(|key| *known.entry(key).or_insert(next))
        })
        .collect()
}

/// Whether the k-points look like a regular grid: reduced by symmetry, with weights that differ, or
/// with few different values of each coordinate. Random points have neither.
fn is_regular(levels: &Levels, points: Option<&[usize]>) -> bool {
    let Some(points) = points else {
        return false;
    };
    let differ = |list: &[f64]| {
        list.iter()
            .any(|w| (w - list[0]).abs() > 1e-6 * list[0].abs())
    };
    if levels.weight.as_deref().is_some_and(differ) {
        return true;
    }
    let count = points.iter().max().map_or(0, |last| last + 1);
    let coordinates: Vec<&Vec<f64>> = [&levels.k_x, &levels.k_y, &levels.k_z]
        .into_iter()
        .flatten()
        .collect();
    let few = |list: &&Vec<f64>| {
        let values: BTreeSet<i64> = list.iter().map(|k| millionths(*k)).collect();
        4 * values.len() <= count
    };
    !coordinates.is_empty() && coordinates.iter().all(few)
}

/// A coordinate as a whole number of millionths, by which rounded values are told apart.
#[allow(clippy::cast_possible_truncation)] // Coordinates are of the order of one.
fn millionths(coordinate: f64) -> i64 {
    (1e6 * coordinate).round() as i64
}

/// Highest occupied and lowest empty energy for each key.
fn edges_by<K: Ord>(
    rows: usize,
    energies: &[f64],
    occupied: &[bool],
    key: impl Fn(usize) -> K,
) -> BTreeMap<K, (f64, f64)> {
    let mut edges = BTreeMap::new();
    for row in 0..rows {
        let (high, low) = edges
            .entry(key(row))
            .or_insert((f64::NEG_INFINITY, f64::INFINITY));
        if occupied[row] {
            *high = high.max(energies[row]);
        } else {
            *low = low.min(energies[row]);
        }
    }
    edges
}

fn spin_of(levels: &Levels, row: usize) -> i64 {
    levels.spin.as_ref().map_or(0, |spins| spins[row])
}

fn direct_gap(
    levels: &Levels,
    energies: &[f64],
    occupied: &[bool],
    points: &[usize],
) -> Option<f64> {
    let key = |row: usize| (points[row], spin_of(levels, row));
    edges_by(levels.rows, energies, occupied, key)
        .into_values()
        .map(|(high, low)| low - high)
        .filter(|gap| gap.is_finite())
        .min_by(f64::total_cmp)
}

fn spin_gaps(levels: &Levels, energies: &[f64], occupied: &[bool]) -> Vec<SpinGap> {
    let gaps = edges_by(levels.rows, energies, occupied, |row| spin_of(levels, row));
    if gaps.len() < 2 {
        return Vec::new();
    }
    gaps.into_iter()
        .map(|(spin, (high, low))| SpinGap {
            spin,
            gap_ev: low - high,
        })
        .filter(|gap| gap.gap_ev.is_finite())
        .collect()
}

fn location(levels: &Validated<Levels>, row: usize, energy_ev: f64, role: Role) -> EdgeLocation {
    let document = &levels.document;
    let coordinate = |list: &Option<Vec<f64>>| list.as_ref().map(|list| list[row].to_string());
    let coordinates: Vec<String> = [&document.k_x, &document.k_y, &document.k_z]
        .into_iter()
        .filter_map(coordinate)
        .collect();
    let k = match (&document.k_index, coordinates.is_empty()) {
        (Some(index), true) => index[row].to_string(),
        (Some(index), false) => format!("{} ({})", index[row], coordinates.join(", ")),
        (None, false) => format!("({})", coordinates.join(", ")),
        (None, true) => String::new(),
    };
    EdgeLocation {
        energy_ev,
        k,
        band: document.band.as_ref().map(|bands| bands[row]),
        spin: document.spin.as_ref().map(|spins| spins[row]),
        line: levels
            .place_of(row, role)
            .or_else(|| levels.place_of(row, Role::EnergyMeanField))
            .map(|place| place.line),
    }
}

/// Pairs of an occupied and an empty level at equal k and spin that the quasiparticle energies turn
/// around against the mean field.
fn reordered(levels: &Levels, points: Option<&[usize]>, occupied: &[bool]) -> usize {
    let (Some(points), Some(mean_field), Some(quasiparticle)) = (
        points,
        &levels.energy_mean_field_ev,
        &levels.energy_quasiparticle_ev,
    ) else {
        return 0;
    };
    let mut groups: BTreeMap<(usize, i64), Vec<usize>> = BTreeMap::new();
    for (row, point) in points.iter().enumerate() {
        let key = (*point, spin_of(levels, row));
        groups.entry(key).or_default().push(row);
    }
    groups
        .values()
        .flat_map(|rows| {
            let (full, empty): (Vec<usize>, Vec<usize>) =
                rows.iter().partition(|&&row| occupied[row]);
            full.into_iter()
                .flat_map(move |v| empty.clone().into_iter().map(move |c| (v, c)))
        })
        .filter(|&(v, c)| mean_field[v] <= mean_field[c] && quasiparticle[v] > quasiparticle[c])
        .count()
}
