//! The same physics through different files gives the same numbers: axes, units, signs of the bias,
//! orders, rates. The curves are noise-free sums of Voigt profiles, rounded to whole counts.

use std::fmt::Write as _;
use std::fs;
use std::path::Path;

use bandrule::align::{FWHM_PER_SIGMA, direct_sum};
use bandrule::compare::{Error, Study, compare};
use bandrule::schema::ResultDocument;

const PHOTON: f64 = 21.218;
const WORK_FUNCTION: f64 = 4.37;
const VALENCE: f64 = -1.2;
const CONDUCTION: f64 = 1.5;
/// Tables state four decimals of an eV or better, counts are whole: a fit feels less than this.
const SAME: f64 = 1e-3;

/// One band on either side: energies below the valence edge and above the conduction edge.
fn band(k: u32) -> (f64, f64) {
    let x = f64::from(k) / 199.0;
    (-2.5 * x * x, 2.5 * x * x)
}

fn levels_table(unit: &str, per_ev: f64) -> String {
    let mut text = format!("# Invented.\nk,band,E_QP ({unit}),occupation\n");
    for k in 0..200 {
        let (v, c) = band(k);
        let c = c + 2.8;
        let _ = writeln!(
            text,
            "{k},1,{:.12},2\n{k},2,{:.12},0",
            v * per_ev,
            c * per_ev
        );
    }
    text
}

/// Energy against the Fermi level and counts of the two curves.
fn curve(valence: bool) -> (Vec<f64>, Vec<f64>) {
    let (fwhm, step, start, edge) = if valence {
        (0.1, 0.02, -4.0, VALENCE)
    } else {
        (0.4, 0.04, -0.5, CONDUCTION)
    };
    let grid: Vec<f64> = (0..220u16).map(|i| start + step * f64::from(i)).collect();
    let levels: Vec<f64> = (0..200)
        .map(|k| edge + if valence { band(k).0 } else { band(k).1 })
        .collect();
    let sigma = fwhm / FWHM_PER_SIGMA;
    let density = direct_sum(&levels, &vec![1.0; 200], &grid, sigma, 0.03);
    let top = density.iter().copied().fold(0.0, f64::max);
    let counts = density.iter().map(|d| (20_000.0 * d / top + 40.0).round());
    (grid, counts.collect())
}

fn table(header: &str, rows: impl Iterator<Item = (f64, f64)>) -> String {
    let mut text = format!("# Invented.\n{header}\n");
    for (x, y) in rows {
        let _ = writeln!(text, "{x:.9},{y}");
    }
    text
}

/// How a variant writes its files.
#[derive(Clone)]
struct Variant {
    levels: String,
    pes: String,
    pes_keys: String,
    ipes: String,
    ipes_keys: String,
}

impl Variant {
    fn plain() -> Self {
        let (pes_energy, pes_counts) = curve(true);
        let kinetic = PHOTON - WORK_FUNCTION;
        let (ipes_energy, ipes_counts) = curve(false);
        Self {
            levels: levels_table("eV", 1.0),
            pes: table(
                "Kinetic energy / eV,counts",
                pes_energy.iter().map(|e| e + kinetic).zip(pes_counts),
            ),
            pes_keys: kinetic_keys(),
            ipes: table(
                "E - E_F (eV),counts",
                ipes_energy.into_iter().zip(ipes_counts),
            ),
            ipes_keys: String::new(),
        }
    }

    fn write(&self, folder: &Path) -> Study {
        let study = format!(
            "[computed]\nlevels = \"levels.csv\"\n[computed.uncertainty]\nk_grid = \"0.02 eV\"\n\
             [photoemission]\nspectrum = \"pes.csv\"\nresolution_fwhm = \"0.1 eV\"\n{}\
             [inverse_photoemission]\nspectrum = \"ipes.csv\"\nresolution_fwhm = \"0.4 eV\"\n{}\
             [comparison]\nprotocols = [\"density-fit\"]\n",
            self.pes_keys, self.ipes_keys
        );
        fs::write(folder.join("levels.csv"), &self.levels).unwrap();
        fs::write(folder.join("pes.csv"), &self.pes).unwrap();
        fs::write(folder.join("ipes.csv"), &self.ipes).unwrap();
        fs::write(folder.join("study.toml"), study).unwrap();
        Study::read(&folder.join("study.toml"), "study.toml").unwrap()
    }

    fn try_result(&self) -> Result<ResultDocument, Error> {
        let folder = tempfile::tempdir().unwrap();
        compare(&self.write(folder.path())).map(|outcome| outcome.result)
    }

    fn result(&self) -> ResultDocument {
        self.try_result().unwrap()
    }
}

fn kinetic_keys() -> String {
    format!("photon_energy = \"{PHOTON} eV\"\nanalyser_work_function = \"{WORK_FUNCTION} eV\"\n")
}

fn edges(result: &ResultDocument) -> (f64, f64) {
    let measured = &result.measured;
    (
        measured.valence_edge.unwrap().value,
        measured.conduction_edge.unwrap().value,
    )
}

fn assert_same(variant: &Variant, what: &str) {
    let (valence, conduction) = edges(&variant.result());
    let (v, c) = edges(&Variant::plain().result());
    assert!(
        (valence - v).abs() < SAME,
        "{what}: valence {valence} for {v}"
    );
    assert!(
        (conduction - c).abs() < SAME,
        "{what}: conduction {conduction} for {c}"
    );
}

#[test]
fn edges_are_where_they_were_put() {
    let result = Variant::plain().result();
    let (valence, conduction) = edges(&result);
    assert!((valence - VALENCE).abs() < 0.005, "{valence}");
    assert!((conduction - CONDUCTION).abs() < 0.01, "{conduction}");
    assert!((result.computed.gap.unwrap().value - 2.8).abs() < 1e-9);
    assert!((result.computed.direct_gap.unwrap().value - 2.8).abs() < 1e-9);
    let difference = result.difference.unwrap().value;
    assert!((difference - 0.1).abs() < 0.012, "{difference}");
}

#[test]
fn units_of_the_levels_do_not_matter() {
    for (unit, per_ev) in [
        ("Ha", 1.0 / 27.211_386_245_981),
        ("Ry", 1.0 / 13.605_693_122_990),
        ("meV", 1000.0),
        ("kJ/mol", 96.485_332_123_310_02),
        ("cm^-1", 8_065.543_937_349_212),
    ] {
        let variant = Variant {
            levels: levels_table(unit, per_ev),
            ..Variant::plain()
        };
        assert_same(&variant, unit);
    }
}

/// A sample at -5 V against the spectrometer sends out electrons with 5 eV more.
#[test]
fn a_negative_bias_raises_kinetic_energies() {
    let (energy, counts) = curve(true);
    let kinetic = PHOTON - WORK_FUNCTION + 5.0;
    let variant = Variant {
        pes: table(
            "E_kin (eV),counts",
            energy.iter().map(|e| e + kinetic).zip(counts),
        ),
        pes_keys: kinetic_keys() + "sample_bias = \"-5 V\"\n",
        ..Variant::plain()
    };
    assert_same(&variant, "bias");
}

#[test]
fn binding_axis_and_descending_order_give_the_same() {
    let (energy, counts) = curve(true);
    let variant = Variant {
        pes: table(
            "Binding energy (eV),counts",
            energy.iter().map(|e| -e).zip(counts),
        ),
        pes_keys: "reference = \"fermi\"\n".to_owned(),
        ..Variant::plain()
    };
    assert_same(&variant, "binding");
    let plain = Variant::plain();
    let mut lines: Vec<&str> = plain.ipes.lines().collect();
    lines[2..].reverse();
    let variant = Variant {
        ipes: lines.join("\n"),
        ..plain.clone()
    };
    assert_same(&variant, "descending");
}

#[test]
fn isochromat_axis_gives_the_same() {
    let (energy, counts) = curve(false);
    let thermal = 2.0 * 8.617_333_262_145_177e-5 * 1100.0;
    let start = 9.8 - 2.7 - thermal;
    let variant = Variant {
        ipes: table(
            "kinetic energy (eV),counts",
            energy.iter().map(|e| e + start).zip(counts),
        ),
        ipes_keys: "photon_energy = \"9.8 eV\"\ncathode_work_function = \"2.7 eV\"\n\
                    cathode_temperature = \"1100 K\"\n"
            .to_owned(),
        ..Variant::plain()
    };
    assert_same(&variant, "isochromat");
}

#[test]
fn rates_become_counts_where_that_is_stated() {
    let (energy, counts) = curve(false);
    let variant = Variant {
        ipes: table(
            "E - E_F (eV),intensity (counts/s)",
            energy.into_iter().zip(counts.iter().map(|n| n / 2.5)),
        ),
        ipes_keys: "dwell = \"0.5 s\"\nsweeps = 5\n".to_owned(),
        ..Variant::plain()
    };
    assert_same(&variant, "rate");
    let fits = variant.result().fits;
    assert_eq!(fits[1].statistics, "poisson");
    let unstated = Variant {
        ipes_keys: String::new(),
        ..variant
    };
    assert_eq!(unstated.result().fits[1].statistics, "estimated-variance");
}

#[test]
fn two_sides_without_a_common_reference_have_no_gap() {
    let (energy, counts) = curve(true);
    let variant = Variant {
        pes: table(
            "Binding energy (eV),counts",
            energy.iter().map(|e| -e).zip(counts),
        ),
        pes_keys: String::new(),
        ..Variant::plain()
    };
    let result = variant.result();
    assert!(result.measured.gap.is_none() && result.difference.is_none());
    assert_eq!(result.verdict.agrees, None);
    assert!(
        result.verdict.statement.contains("fermi_edge"),
        "{}",
        result.verdict.statement
    );
    // The shift of each side is that offset and needs no reference.
    assert_eq!(result.fits.len(), 2);
}

#[test]
fn levels_without_a_gap_are_refused() {
    let mut levels = levels_table("eV", 1.0);
    levels += "900,1,-1.0,2\n900,2,-0.5,0\n";
    let variant = Variant {
        levels,
        ..Variant::plain()
    };
    let message = variant.try_result().unwrap_err().to_string();
    assert!(
        message.contains("no gap") && message.contains("levels.csv:404:"),
        "{message}"
    );
}

#[test]
fn contradicting_zeros_are_refused() {
    let variant = Variant {
        pes_keys: kinetic_keys() + "sample_work_function = \"4.8 eV\"\n",
        ..Variant::plain()
    };
    let message = variant.try_result().unwrap_err().to_string();
    assert!(
        message.contains("two zeros of the kinetic axis"),
        "{message}"
    );
}

#[test]
fn a_table_without_k_points_is_compared_without_their_sampling() {
    let mut levels = "# Invented.\nband,E_QP (eV),occupation\n".to_owned();
    for k in 0..200 {
        let (v, c) = band(k);
        let _ = writeln!(levels, "1,{v:.12},2\n2,{:.12},0", c + 2.8);
    }
    let variant = Variant {
        levels,
        ..Variant::plain()
    };
    let result = variant.result();
    let (valence, conduction) = edges(&result);
    assert!((valence - VALENCE).abs() < 0.005, "{valence}");
    assert!((conduction - CONDUCTION).abs() < 0.01, "{conduction}");
    assert!(result.computed.direct_gap.is_none());
    let row = result
        .budget
        .iter()
        .find(|row| row.name.starts_with("sampling"));
    assert!(!row.unwrap().stated);
}

/// Two equal bands in the curve and one in the table: it may be either.
#[test]
fn competing_alignments_leave_the_verdict_open() {
    let (energy, counts) = curve(true);
    let spacing = 6.0;
    let low = energy.iter().map(|e| e - spacing).zip(&counts);
    let high = energy.iter().copied().zip(&counts);
    let gap_side = *counts.last().unwrap();
    let between = (1..100).map(|i| energy[219] - spacing + 0.02 * f64::from(i));
    let between = between.filter(|e| *e < energy[0] - 1e-9);
    let kinetic = PHOTON - WORK_FUNCTION;
    let rows: Vec<(f64, f64)> = low
        .map(|(e, n)| (e, *n))
        .chain(between.map(|e| (e, gap_side)))
        .chain(high.map(|(e, n)| (e, *n)))
        .map(|(e, n)| (e + kinetic, n))
        .collect();
    let variant = Variant {
        pes: table("Kinetic energy / eV,counts", rows.into_iter()),
        ..Variant::plain()
    };
    let result = variant.result();
    let names: Vec<&str> = result.cautions.iter().map(|c| c.name.as_str()).collect();
    assert!(names.contains(&"alignment-ambiguous"), "{names:?}");
    assert_eq!(result.verdict.agrees, None);
    let other = &result.fits[0].alternatives[0];
    let apart = (other.shift_ev - result.fits[0].shift.value).abs();
    assert!((apart - spacing).abs() < 0.1, "{apart}");
}

#[test]
fn an_angle_resolved_curve_gets_its_caution() {
    let plain = Variant::plain();
    let variant = Variant {
        pes: plain
            .pes
            .replace("# Invented.", "# technique: angle-resolved photoemission"),
        ..plain
    };
    let result = variant.result();
    assert!(result.cautions.iter().any(|c| c.name == "matrix-elements"));
}
