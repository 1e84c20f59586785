//! Tables of every kind, as columns with a meaning. All values are invented.

use bandrule::parse::Kind;
use rand::Rng;
use rand::seq::{IndexedRandom, SliceRandom};
use rand_chacha::ChaCha8Rng;

/// What a column measures, which decides its units.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Quantity {
    Energy,
    Intensity,
    Density,
    Momentum,
    Kelvin,
    None,
}

/// The cells of a column.
#[derive(Debug, Clone)]
pub enum Cells {
    Numbers(Vec<f64>),
    Whole(Vec<i64>),
    Texts(Vec<String>),
}

/// One column.
#[derive(Debug, Clone)]
pub struct Column {
    /// Where the document has it: a key, or `projections=NAME`.
    pub key: String,
    pub name: String,
    pub quantity: Quantity,
    pub cells: Cells,
    /// Whether a value may be missing.
    pub gaps: bool,
}

/// A table and how its rows stand to its document.
#[derive(Debug, Clone)]
pub struct Table {
    pub kind: Kind,
    pub columns: Vec<Column>,
    /// Statements that comments make: key, value, the document's key, its value.
    pub statements: Vec<(String, String, &'static str, f64)>,
    /// Columns of one band, of one method or of one sweep, which the document joins under a key.
    pub joined: Option<(&'static str, Join)>,
    /// Rows of a block between blank lines, and the key of what the blocks count.
    pub blocks: Option<(usize, &'static str, &'static str)>,
    /// A sentence that says what bands hold.
    pub sentence: Option<&'static str>,
}

/// How neighbouring columns become one.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Join {
    /// Row by row, one after the other.
    Melt,
    /// Added.
    Sum,
}

type Random = ChaCha8Rng;

fn pick<'a>(random: &mut Random, list: &[&'a str]) -> &'a str {
    list.choose(random).unwrap()
}

fn column(key: &str, name: &str, quantity: Quantity, cells: Cells) -> Column {
    Column {
        key: key.to_owned(),
        name: name.to_owned(),
        quantity,
        cells,
        gaps: false,
    }
}

fn numbers(random: &mut Random, rows: usize, from: f64, to: f64) -> Cells {
    Cells::Numbers((0..rows).map(|_| random.random_range(from..to)).collect())
}

fn rising(rows: usize, from: f64, step: f64) -> Cells {
    Cells::Numbers((0..rows).map(|row| from + step * row as f64).collect())
}

/// A table of a kind.
pub fn table(kind: Kind, random: &mut Random) -> Table {
    let mut table = Table {
        kind,
        columns: Vec::new(),
        statements: Vec::new(),
        joined: None,
        blocks: None,
        sentence: None,
    };
    match kind {
        Kind::Levels if random.random_bool(0.2) => path(&mut table, random),
        Kind::Levels => levels(&mut table, random),
        Kind::Spectrum => spectrum(&mut table, random),
        Kind::Density => density(&mut table, random),
        Kind::Dispersion => dispersion(&mut table, random),
        Kind::Gaps => gaps(&mut table, random),
        _ => series(&mut table, random),
    }
    table
}

fn levels(table: &mut Table, random: &mut Random) {
    let (points, bands) = (
        random.random_range(2..6usize),
        random.random_range(2..7usize),
    );
    let rows = points * bands;
    let by_band = random.random_bool(0.2);
    let (mut k, mut band) = (Vec::new(), Vec::new());
    for row in 0..rows {
        let (slow, fast) = (
            row / if by_band { points } else { bands },
            row % if by_band { points } else { bands },
        );
        let (point, level) = if by_band { (fast, slow) } else { (slow, fast) };
        k.push(point as i64 + 1);
        band.push(level as i64 + 1);
    }
    let (block, name, inner) = if by_band {
        (
            points,
            "band",
            column(
                "k_index",
                pick(random, &["k", "ik", "kpt", "k-point"]),
                Quantity::None,
                Cells::Whole(k.clone()),
            ),
        )
    } else {
        (
            bands,
            "k_index",
            column(
                "band",
                pick(random, &["band", "n", "ib", "bnd"]),
                Quantity::None,
                Cells::Whole(band.clone()),
            ),
        )
    };
    let mut columns = vec![inner];
    if random.random_bool(0.3) {
        let word = if by_band {
            "band"
        } else {
            pick(random, &["k-point", "k", "kpt"])
        };
        table.blocks = Some((block, name, word));
    } else {
        let outer = match by_band {
            true => column("band", "band", Quantity::None, Cells::Whole(band)),
            false => column("k_index", "k", Quantity::None, Cells::Whole(k)),
        };
        columns.insert(0, outer);
    }
    if random.random_bool(0.4) {
        for (key, name) in [("k_x", "kx"), ("k_y", "ky"), ("k_z", "kz")] {
            let of_points: Vec<f64> = (0..points)
                .map(|_| random.random_range(-0.5..0.5))
                .collect();
            let point = |row: usize| if by_band { row % points } else { row / bands };
            let cells = (0..rows).map(|row| of_points[point(row)]).collect();
            columns.push(column(key, name, Quantity::None, Cells::Numbers(cells)));
        }
    }
    if random.random_bool(0.4) {
        let name = pick(random, &["w", "weight", "wtk"]);
        columns.push(column(
            "weight",
            name,
            Quantity::None,
            numbers(random, rows, 0.0, 1.0),
        ));
    }
    values_of_levels(&mut columns, random, rows);
    if table.blocks.is_none() {
        columns.shuffle(random);
    }
    table.columns = columns;
}

/// Energies, and what may stand beside them.
fn values_of_levels(columns: &mut Vec<Column>, random: &mut Random, rows: usize) {
    let mut energies = vec![
        (
            "energy_mean_field_ev",
            pick(
                random,
                &["E_KS", "DFT", "E_HF", "eKS", "mean-field", "E_MF"],
            ),
        ),
        (
            "energy_quasiparticle_ev",
            pick(
                random,
                &["E_QP", "GW", "Eqp", "G0W0", "quasiparticle", "ε_QP"],
            ),
        ),
        (
            "exchange_ev",
            pick(random, &["sigma_x", "Sigma_x", "exchange"]),
        ),
        ("correlation_ev", pick(random, &["sigma_c", "correlation"])),
        ("xc_potential_ev", pick(random, &["V_xc", "vxc"])),
    ];
    energies.truncate(random.random_range(2..6));
    for (key, name) in energies {
        let mut energy = column(
            key,
            name,
            Quantity::Energy,
            numbers(random, rows, -30.0, 30.0),
        );
        energy.gaps = true;
        columns.push(energy);
    }
    if random.random_bool(0.3) {
        columns.push(column(
            "renormalization",
            "Z",
            Quantity::None,
            numbers(random, rows, 0.5, 1.0),
        ));
    }
    if random.random_bool(0.5) {
        let occupied = (0..rows)
            .map(|row| f64::from(u8::from(row % 2 == 0)))
            .collect();
        columns.push(column(
            "occupation",
            pick(random, &["occ", "f", "occupation"]),
            Quantity::None,
            Cells::Numbers(occupied),
        ));
    }
    if random.random_bool(0.3) {
        for name in ["Zn d", "O p"] {
            columns.push(column(
                &format!("projections={name}"),
                name,
                Quantity::None,
                numbers(random, rows, 0.0, 1.0),
            ));
        }
    }
}

fn path(table: &mut Table, random: &mut Random) {
    let (rows, bands) = (random.random_range(3..12), random.random_range(2..8));
    let quasiparticle = random.random_bool(0.5);
    let key = match quasiparticle {
        true => "energy_quasiparticle_ev",
        false => "energy_mean_field_ev",
    };
    table.sentence = Some(match quasiparticle {
        true => "quasiparticle energies",
        false => "Kohn-Sham energies",
    });
    table.columns.push(column(
        "-",
        pick(random, &["kpath", "distance", "kdist"]),
        Quantity::None,
        rising(rows, 0.0, 0.1),
    ));
    for band in 1..=bands {
        let name = format!("{}{band}", pick(random, &["band", "band_", "E"]));
        table.columns.push(column(
            key,
            &name,
            Quantity::Energy,
            numbers(random, rows, -10.0, 10.0),
        ));
    }
    table.joined = Some((key, Join::Melt));
}

fn spectrum(table: &mut Table, random: &mut Random) {
    let rows = random.random_range(4..40);
    let name = pick(
        random,
        &[
            "Kinetic energy",
            "KE",
            "E_kin",
            "Binding energy",
            "BE",
            "E - E_F",
            "E−E_F",
            "K.E.",
        ],
    );
    table.columns.push(column(
        "energy_ev",
        name,
        Quantity::Energy,
        rising(rows, 3.0, 0.025),
    ));
    let counts = |random: &mut Random| {
        Cells::Whole((0..rows).map(|_| random.random_range(0..90_000)).collect())
    };
    match random.random_range(0..4) {
        0 => {
            for sweep in 1..=random.random_range(2..5) {
                let cells = counts(random);
                let name = format!("{} {sweep}", pick(random, &["sweep", "scan"]));
                let mut sweep = column("intensity", &name, Quantity::Intensity, cells);
                sweep.quantity = if name.starts_with("counts") {
                    Quantity::None
                } else {
                    Quantity::Intensity
                };
                table.columns.push(sweep);
            }
            table.joined = Some(("intensity", Join::Sum));
        }
        1 => {
            let name = pick(random, &["Intensity", "signal", "I"]);
            let cells = numbers(random, rows, 0.0, 9_000.0);
            table
                .columns
                .push(column("intensity", name, Quantity::Intensity, cells));
            if random.random_bool(0.5) {
                let cells = numbers(random, rows, 1.0, 9.0);
                table.columns.push(column(
                    "standard_uncertainty",
                    pick(random, &["sigma", "error"]),
                    Quantity::None,
                    cells,
                ));
            }
        }
        _ => {
            let cells = counts(random);
            table.columns.push(column(
                "intensity",
                pick(random, &["counts", "Counts"]),
                Quantity::None,
                cells,
            ));
        }
    }
    let all = [
        (
            "Photon energy",
            "21.218 eV",
            "conditions/photon_energy_ev",
            21.218,
        ),
        (
            "analyser work function",
            "4.41 eV",
            "conditions/analyser_work_function_ev",
            4.41,
        ),
        ("pass energy (eV)", "5", "conditions/pass_energy_ev", 5.0),
        ("Dwell time", "250 ms", "conditions/dwell_s", 0.25),
        ("temperature", "80 K", "conditions/temperature_k", 80.0),
        ("sample bias", "-5 V", "conditions/sample_bias_v", -5.0),
        ("number of sweeps", "12", "conditions/sweeps", 12.0),
    ];
    for (key, value, path, number) in all {
        if random.random_bool(0.3) {
            table
                .statements
                .push((key.to_owned(), value.to_owned(), path, number));
        }
    }
}

fn density(table: &mut Table, random: &mut Random) {
    let rows = random.random_range(4..40);
    let name = pick(random, &["E", "energy", "E - E_F", "Energy"]);
    table.columns.push(column(
        "energy_ev",
        name,
        Quantity::Energy,
        rising(rows, -5.0, 0.05),
    ));
    table.columns.push(column(
        "total",
        pick(random, &["DOS", "total", "TDOS", "density of states"]),
        Quantity::Density,
        numbers(random, rows, 0.0, 9.0),
    ));
    let names = ["s", "p", "d", "Ga s", "N p", "O 2p"];
    for name in &names[..random.random_range(0..names.len())] {
        table.columns.push(column(
            &format!("projections={name}"),
            name,
            Quantity::Density,
            numbers(random, rows, 0.0, 4.0),
        ));
    }
}

fn dispersion(table: &mut Table, random: &mut Random) {
    let rows = random.random_range(4..20);
    table.columns.push(column(
        "k",
        pick(random, &["k", "k_x", "k_parallel"]),
        Quantity::Momentum,
        rising(rows, -1.0, 0.1),
    ));
    let name = pick(
        random,
        &["Binding energy", "E_B", "E - E_F", "peak binding energy"],
    );
    table.columns.push(column(
        "energy_ev",
        name,
        Quantity::Energy,
        numbers(random, rows, 0.0, 4.0),
    ));
    if random.random_bool(0.5) {
        table.columns.push(column(
            "standard_uncertainty_ev",
            pick(random, &["sigma", "u(E)", "error"]),
            Quantity::Energy,
            numbers(random, rows, 0.001, 0.1),
        ));
    }
}

fn gaps(table: &mut Table, random: &mut Random) {
    let rows = random.random_range(3..20);
    let text = |random: &mut Random, list: &[&str]| {
        Cells::Texts((0..rows).map(|_| pick(random, list).to_owned()).collect())
    };
    let materials = ["Xa", "Xb2O3", "YcN", "ZdS", "QeTe"];
    table.columns.push(column(
        "material",
        pick(random, &["material", "compound", "Formula"]),
        Quantity::None,
        text(random, &materials),
    ));
    if random.random_bool(0.4) {
        table.columns.push(column(
            "polymorph",
            pick(random, &["phase", "polymorph"]),
            Quantity::None,
            text(random, &["cubic", "wurtzite", "rutile"]),
        ));
    }
    if random.random_bool(0.4) {
        for method in ["PBE", "HSE06", "G0W0@PBE", "Exp."] {
            let mut values = column(
                "value_ev",
                method,
                Quantity::Energy,
                numbers(random, rows, 0.1, 9.0),
            );
            values.gaps = true;
            table.columns.push(values);
        }
        table.joined = Some(("value_ev", Join::Melt));
        return;
    }
    table.columns.push(column(
        "method",
        pick(random, &["method", "approach"]),
        Quantity::None,
        text(random, &["PBE", "G0W0", "HSE06", "QSGW"]),
    ));
    let name = pick(random, &["gap", "E_g", "band_gap", "value", "optical_gap"]);
    table.columns.push(column(
        "value_ev",
        name,
        Quantity::Energy,
        numbers(random, rows, 0.1, 9.0),
    ));
    if random.random_bool(0.4) {
        table.columns.push(column(
            "uncertainty_ev",
            pick(random, &["uncertainty", "error"]),
            Quantity::Energy,
            numbers(random, rows, 0.01, 0.1),
        ));
    }
    if random.random_bool(0.4) {
        table.columns.push(column(
            "temperature_k",
            pick(random, &["T", "temperature"]),
            Quantity::Kelvin,
            numbers(random, rows, 4.0, 300.0),
        ));
    }
    if random.random_bool(0.4) {
        table.columns.push(column(
            "source",
            pick(random, &["source", "ref."]),
            Quantity::None,
            text(random, &["run7", "note-a", "table2"]),
        ));
    }
}

fn series(table: &mut Table, random: &mut Random) {
    let rows = random.random_range(3..12);
    let cells = Cells::Whole((1..=rows as i64).map(|row| 100 * row).collect());
    let name = pick(random, &["bands", "nbands", "plane_waves", "cutoff"]);
    table.columns.push(column(
        &format!("parameters={name}"),
        name,
        Quantity::None,
        cells,
    ));
    table.columns.push(column(
        "value_ev",
        pick(random, &["gap", "E_g", "direct_gap"]),
        Quantity::Energy,
        numbers(random, rows, 1.0, 4.0),
    ));
    if random.random_bool(0.3) {
        table.columns.push(column(
            "standard_uncertainty_ev",
            "uncertainty",
            Quantity::Energy,
            numbers(random, rows, 0.001, 0.01),
        ));
    }
}
