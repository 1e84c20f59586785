//! Seeded studies with known truth, made event by event and independently of the program: its only
//! shared ground is the meaning of the files. All energies in eV.
//!
//! What is true, and what the program is told:
//!
//! - The sample's bands are invented cosines. `valence_edge` and `conduction_edge` are their extrema,
//!   counted from the sample's Fermi level, and `gap` is conduction minus valence edge. No broadening
//!   moves them: they are what a perfect instrument would show.
//! - `difference` = computed gap, converged and truly corrected, minus `gap`, drawn from N(0, 0.1). It is the
//!   quantity that the program reports with an uncertainty.
//! - `computed_gap_converged` = `gap` + `difference` - `zero_point`, where the true `zero_point`, added to a
//!   computed gap, is drawn from N(-0.05, 0.01); the study states -0.05 with 0.01.
//! - `computed_gap` is the table's: `computed_gap_converged` + `k_grid_error` + `empty_states_error`, drawn
//!   from N(0, 0.03) and N(0, 0.05), which the study states. The table's conduction bands are the true
//!   ones, displaced rigidly; its valence edge is zero.
//! - `shift_valence` = `valence_edge` - 0 and `shift_conduction` = `conduction_edge` - `computed_gap`: measured
//!   minus computed, against the table as it stands.
//! - The data are made from levels at 20,000 random k-points of the full zone with the two extremal
//!   points among them. The table holds 2,000 of these, again with the two extremal points, all of equal
//!   weight, so the sampling of the zone is a real error of the table.
//! - The recorded kinetic energy of an electron is `E - E_F` + (true photon energy) - (true work function) +
//!   (displacement of the channels). The work function is 0.02 off what the study states (normal), the
//!   photon energy 0.01 where the study states an uncertainty and exact where it does not, the channels uniformly
//!   up to half a channel. Half of the studies give the Fermi edge of a metal on the same axis, with all three errors,
//!   in place of the work function: `metal_edge` is its true place there.
//! - The recorded axis of inverse photoemission is `E - E_F` - (true offset) + (displacement of the channels),
//!   the offset drawn from N(0, 0.03), which the study states as an offset of 0 to be added.
//! - True resolutions are drawn about the stated ones with their stated uncertainties.

use std::fmt::Write as _;
use std::fs;
use std::path::Path;

use rand::seq::index;
use rand::{Rng, SeedableRng};
use rand_chacha::ChaCha8Rng;

use super::bands::{Bands, KPoint};
use super::events::{Background, Channels, MetalEdge, Secondaries, Widths, normal, spectrum};

const DATA_K_POINTS: usize = 20_000;
const TABLE_K_POINTS: usize = 2_000;
const PHOTON_ENERGY: f64 = 21.218;
const WORK_FUNCTION: f64 = 4.37;
/// The Boltzmann constant times 300 K, typed here on purpose: the generator borrows no constant.
const THERMAL_ENERGY: f64 = 0.025_852;
const PES_FWHM: f64 = 0.10;
const IPES_FWHM: f64 = 0.42;
const PES_STEP: f64 = 0.025;
const IPES_STEP: f64 = 0.05;
const METAL_STEP: f64 = 0.01;

/// What is true of a study. The opening of this file defines each quantity.
#[derive(Debug, Clone)]
pub struct Truth {
    pub valence_edge: f64,
    pub conduction_edge: f64,
    pub gap: f64,
    pub difference: f64,
    pub zero_point: f64,
    pub computed_gap_converged: f64,
    pub k_grid_error: f64,
    pub empty_states_error: f64,
    pub computed_gap: f64,
    pub shift_valence: f64,
    pub shift_conduction: f64,
    /// True minus stated.
    pub work_function_error: f64,
    /// True minus stated.
    pub photon_energy_error: f64,
    pub states_photon_uncertainty: bool,
    /// Recorded minus true energy of the photoemission channels.
    pub pes_displacement: f64,
    /// Recorded minus true energy of the inverse photoemission channels.
    pub ipes_displacement: f64,
    /// True offset, to be added to the recorded axis of inverse photoemission.
    pub ipes_offset: f64,
    pub pes_widths: Widths,
    pub ipes_widths: Widths,
    /// Where the metal's Fermi level stands on the recorded kinetic axis, in studies that give one.
    pub metal_edge: Option<f64>,
}

impl Truth {
    /// Recorded kinetic energy of the sample's Fermi level.
    pub fn recorded_fermi_level(&self) -> f64 {
        PHOTON_ENERGY + self.photon_energy_error - WORK_FUNCTION - self.work_function_error
            + self.pes_displacement
    }

    /// Draws everything but the bands and the counts.
    fn draw(rng: &mut ChaCha8Rng) -> Self {
        let gap: f64 = rng.random_range(1.0..6.0);
        let valence_edge = -(0.5 + rng.random_range(0.0..1.0) * (gap - 1.0));
        let conduction_edge = valence_edge + gap;
        let difference = normal(rng, 0.0, 0.1);
        let zero_point = normal(rng, -0.05, 0.01);
        let computed_gap_converged = gap + difference - zero_point;
        let k_grid_error = normal(rng, 0.0, 0.03);
        let empty_states_error = normal(rng, 0.0, 0.05);
        let computed_gap = computed_gap_converged + k_grid_error + empty_states_error;
        let states_photon_uncertainty = rng.random_bool(0.5);
        let photon_spread = if states_photon_uncertainty { 0.01 } else { 0.0 };
        let mut truth = Self {
            valence_edge,
            conduction_edge,
            gap,
            difference,
            zero_point,
            computed_gap_converged,
            k_grid_error,
            empty_states_error,
            computed_gap,
            shift_valence: valence_edge,
            shift_conduction: conduction_edge - computed_gap,
            work_function_error: normal(rng, 0.0, 0.02),
            photon_energy_error: normal(rng, 0.0, photon_spread),
            states_photon_uncertainty,
            pes_displacement: rng.random_range(-0.5..0.5) * PES_STEP,
            ipes_displacement: rng.random_range(-0.5..0.5) * IPES_STEP,
            ipes_offset: normal(rng, 0.0, 0.03),
            pes_widths: draw_widths(rng, PES_FWHM, 0.005),
            ipes_widths: draw_widths(rng, IPES_FWHM, 0.02),
            metal_edge: None,
        };
        if rng.random_bool(0.5) {
            truth.metal_edge = Some(truth.recorded_fermi_level());
        }
        truth
    }
}

fn draw_widths(rng: &mut ChaCha8Rng, stated: f64, uncertainty: f64) -> Widths {
    Widths {
        instrument_fwhm: normal(rng, stated, uncertainty),
        sample_gaussian_fwhm: rng.random_range(0.05..0.15),
        sample_lorentzian_fwhm: rng.random_range(0.02..0.15),
    }
}

/// What is true of the study of a seed, without making its files.
pub fn truth_of(seed: u64) -> Truth {
    Truth::draw(&mut ChaCha8Rng::seed_from_u64(seed))
}

/// Writes `study.toml`, `levels.csv`, `pes.csv`, `ipes.csv` and, in half of the studies, `metal.csv` into a
/// folder that exists. The same seed writes the same bytes.
pub fn write_study(seed: u64, folder: &Path) -> Truth {
    let mut rng = ChaCha8Rng::seed_from_u64(seed);
    let truth = Truth::draw(&mut rng);
    let bands = Bands::random(&mut rng, truth.valence_edge, truth.conduction_edge);
    let k_points = draw_k_points(&mut rng, &bands);
    let write = |name: &str, text: String| fs::write(folder.join(name), text).unwrap();

    write("study.toml", study_text(seed, &truth));
    let table = draw_table(&mut rng, &k_points);
    write("levels.csv", levels_text(&table, &bands, &truth));
    write("pes.csv", pes_text(&mut rng, &k_points, &bands, &truth));
    write("ipes.csv", ipes_text(&mut rng, &k_points, &bands, &truth));
    if let Some(edge) = truth.metal_edge {
        write("metal.csv", metal_text(&mut rng, edge, &truth));
    }
    truth
}

/// The k-points of the data; the first two are the extremal ones.
fn draw_k_points(rng: &mut ChaCha8Rng, bands: &Bands) -> Vec<KPoint> {
    let mut k_points = vec![bands.valence_k, bands.conduction_k];
    k_points.extend(
        std::iter::repeat_with(|| std::array::from_fn(|_| rng.random_range(0.0..1.0)))
            .take(DATA_K_POINTS - 2),
    );
    k_points
}

/// The k-points of the table: the extremal ones at places of their own among the drawn ones.
fn draw_table(rng: &mut ChaCha8Rng, k_points: &[KPoint]) -> Vec<KPoint> {
    let (extremal, others) = k_points.split_at(2);
    let mut table: Vec<KPoint> = index::sample(rng, others.len(), TABLE_K_POINTS - 2)
        .into_iter()
        .map(|chosen| others[chosen])
        .collect();
    for &k in extremal {
        table.insert(rng.random_range(0..=table.len()), k);
    }
    table
}

fn levels_text(table: &[KPoint], bands: &Bands, truth: &Truth) -> String {
    let mut text = String::from(
        "# Invented levels of an invented crystal, for tests; not computed for any material.\n\
         # Energies from the highest occupied quasiparticle level.\n\
         k,kx,ky,kz,weight,band,E_MF (eV),E_QP (eV),occupation\n",
    );
    let scissor = truth.computed_gap - truth.gap;
    for (number, &k) in table.iter().enumerate() {
        let occupied = bands.occupied(k).into_iter().map(|energy| {
            let energy = energy - truth.valence_edge;
            (energy, 0.98 * energy + 0.15, 2)
        });
        let empty = bands.empty(k).into_iter().map(|energy| {
            let energy = energy - truth.valence_edge + scissor;
            (energy, energy - 0.25, 0)
        });
        for (band, (quasiparticle, mean_field, occupation)) in occupied.chain(empty).enumerate() {
            // Adding zero turns a negative zero into zero.
            let quasiparticle = (quasiparticle * 1e6).round() / 1e6 + 0.0;
            writeln!(
                text,
                "{},{:.6},{:.6},{:.6},1,{},{mean_field:.6},{quasiparticle:.6},{occupation}",
                number + 1,
                k[0],
                k[1],
                k[2],
                band + 1,
            )
            .unwrap();
        }
    }
    text
}

fn pes_text(rng: &mut ChaCha8Rng, k_points: &[KPoint], bands: &Bands, truth: &Truth) -> String {
    let fermi_level = truth.recorded_fermi_level();
    let levels = pool(k_points, |k| bands.occupied(k), fermi_level);
    let nominal_edge = truth.valence_edge + PHOTON_ENERGY - WORK_FUNCTION;
    let channels = Channels::over(nominal_edge - 8.0, nominal_edge + 2.0, PES_STEP);
    let background = Background {
        constant: rng.random_range(5.0..60.0),
        step: rng.random_range(0.01..0.08),
        side: Secondaries::Below,
    };
    let peak = rng.random_range(0.8e4..1.2e4);
    let counts = spectrum(rng, &levels, channels, truth.pes_widths, background, peak);
    let head =
        "# Invented counts, for tests.\n# technique: photoemission\nKinetic energy / eV,counts\n";
    counts_text(head, channels, &counts)
}

fn ipes_text(rng: &mut ChaCha8Rng, k_points: &[KPoint], bands: &Bands, truth: &Truth) -> String {
    let origin = truth.ipes_displacement - truth.ipes_offset;
    let levels = pool(k_points, |k| bands.empty(k), origin);
    let edge = truth.conduction_edge;
    let channels = Channels::over(edge - 2.5, edge + 7.0, IPES_STEP);
    let background = Background {
        constant: rng.random_range(10.0..100.0),
        step: rng.random_range(0.01..0.06),
        side: Secondaries::Above,
    };
    let peak = rng.random_range(2e3..4e3);
    let counts = spectrum(rng, &levels, channels, truth.ipes_widths, background, peak);
    let head =
        "# Invented counts, for tests.\n# technique: inverse photoemission\nE - E_F (eV),counts\n";
    counts_text(head, channels, &counts)
}

fn metal_text(rng: &mut ChaCha8Rng, edge: f64, truth: &Truth) -> String {
    let nominal = PHOTON_ENERGY - WORK_FUNCTION;
    let channels = Channels::over(nominal - 0.8, nominal + 0.5, METAL_STEP);
    let metal = MetalEdge {
        edge,
        thermal_energy: THERMAL_ENERGY,
        slope: rng.random_range(-0.1..0.2),
        depth: 1.1,
        instrument_fwhm: truth.pes_widths.instrument_fwhm,
        height: rng.random_range(1.5e3..3e3),
        constant: rng.random_range(5.0..40.0),
    };
    let head = "# Invented counts of an invented metal, for tests.\n# technique: photoemission\n\
                Kinetic energy / eV,counts\n";
    let counts = metal.counts(rng, channels);
    counts_text(head, channels, &counts)
}

/// All levels of the data, moved by `origin`.
fn pool(k_points: &[KPoint], levels: impl Fn(KPoint) -> Vec<f64>, origin: f64) -> Vec<f64> {
    k_points
        .iter()
        .flat_map(|&k| levels(k))
        .map(|energy| energy + origin)
        .collect()
}

fn counts_text(head: &str, channels: Channels, counts: &[u64]) -> String {
    let mut text = head.to_owned();
    for (index, count) in counts.iter().enumerate() {
        writeln!(text, "{:.3},{count}", channels.centre(index)).unwrap();
    }
    text
}

fn study_text(seed: u64, truth: &Truth) -> String {
    let photon_energy = if truth.states_photon_uncertainty {
        format!(r#"{{ value = "{PHOTON_ENERGY} eV", standard_uncertainty = "0.01 eV" }}"#)
    } else {
        format!(r#""{PHOTON_ENERGY} eV""#)
    };
    let calibration = if truth.metal_edge.is_some() {
        r#"fermi_edge = "metal.csv""#.to_owned()
    } else {
        format!(
            r#"analyser_work_function = {{ value = "{WORK_FUNCTION} eV", standard_uncertainty = "0.02 eV" }}"#
        )
    };
    format!(
        r#"# Invented, for tests.
title = "Invented study {seed}"

[computed]
levels = "levels.csv"
reference = "valence-edge"

[computed.uncertainty]
k_grid = "0.03 eV"
empty_states = "0.05 eV"

[photoemission]
spectrum = "pes.csv"
photon_energy = {photon_energy}
{calibration}
sample_bias = "0 V"
resolution_fwhm = {{ value = "{PES_FWHM} eV", standard_uncertainty = "0.005 eV" }}
temperature = "300 K"

[inverse_photoemission]
spectrum = "ipes.csv"
resolution_fwhm = {{ value = "{IPES_FWHM} eV", standard_uncertainty = "0.02 eV" }}
energy_offset = {{ value = "0 eV", standard_uncertainty = "0.03 eV" }}
temperature = "300 K"

[corrections]
zero_point = {{ value = "-0.05 eV", standard_uncertainty = "0.01 eV" }}

[comparison]
protocols = ["density-fit", "tangent"]
tolerance = "0.2 eV"
"#
    )
}
