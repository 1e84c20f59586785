//! An invented study for the tests of this room: no sample, instrument or computation stands behind
//! any of its numbers.

use crate::quantity::Reference;
use crate::schema::{
    BudgetRow, Caution, Computed, Curves, DensityCurve, Document, EdgeLocation, Evaluation,
    Expanded, Finding, FitRecord, Measured, ProtocolEdge, ProtocolRecord, Provenance, Quantity,
    ResultDocument, Severity, Shift, Side, SideCurve, SourceRecord, Verdict,
};

const VALENCE: f64 = -1.953;
const CONDUCTION: f64 = 1.731;

/// Both sides measured and tied to the Fermi level.
pub(super) fn two_sides() -> (ResultDocument, Curves) {
    let curves = Curves {
        sides: vec![side(Side::Valence, 0.05), side(Side::Conduction, 0.1)],
        densities: vec![density(Side::Valence), density(Side::Conduction)],
    };
    (result(), curves)
}

/// Photoemission alone.
pub(super) fn one_side() -> (ResultDocument, Curves) {
    let (mut result, mut curves) = two_sides();
    curves.sides.truncate(1);
    curves.densities.truncate(1);
    result.measured.conduction_edge = None;
    result.measured.gap = None;
    result.measured.onset_gap = None;
    result.shift.conduction = None;
    result.difference = None;
    result.en_score = None;
    result.expanded = None;
    result.fits.truncate(1);
    result.verdict = Verdict {
        agrees: None,
        statement: "There is no measured gap: the study has no inverse photoemission.".to_owned(),
    };
    (result, curves)
}

/// A narrow gap, seen on many channels, without a statement on the computed side.
pub(super) fn narrow() -> (ResultDocument, Curves) {
    let (mut result, mut curves) = two_sides();
    curves.sides = vec![side(Side::Valence, 0.004), side(Side::Conduction, 0.02)];
    let slide = |q: &mut Option<Quantity>, by: f64| {
        *q = q.map(|q| Quantity::new(q.value + by, q.uncertainty_or_zero()));
    };
    for curve in &mut curves.sides {
        let by = if curve.side == Side::Valence {
            1.4
        } else {
            -1.4
        };
        curve.energy_ev.iter_mut().for_each(|e| *e += by);
        curve.window_ev = (curve.window_ev.0 + by, curve.window_ev.1 + by);
    }
    for curve in &mut curves.densities {
        let by = if curve.side == Side::Valence {
            1.4
        } else {
            -1.4
        };
        curve.energy_ev.iter_mut().for_each(|e| *e += by);
    }
    slide(&mut result.measured.valence_edge, 1.4);
    slide(&mut result.measured.conduction_edge, -1.4);
    slide(&mut result.measured.gap, -2.8);
    result.computed.corrected_gap = Some(Quantity::unstated(0.71));
    (result, curves)
}

/// Every case, by name.
pub(super) fn all() -> Vec<(&'static str, (ResultDocument, Curves))> {
    let mut bare = one_side();
    bare.1 = Curves::default();
    bare.0.measured.reference = Reference::Unknown;
    bare.0.measured.valence_edge = None;
    let mut hostile = two_sides();
    hostile.0.title = "<&\"'> </title><script>alert(1)</script>\u{7}".to_owned();
    vec![
        ("two", two_sides()),
        ("one", one_side()),
        ("narrow", narrow()),
        ("bare", bare),
        ("hostile", hostile),
    ]
}

fn bump(energy: f64, centre: f64, width: f64) -> f64 {
    (-0.5 * ((energy - centre) / width).powi(2)).exp()
}

fn step(energy: f64, edge: f64, width: f64) -> f64 {
    1.0 / (1.0 + ((edge - energy) / width).exp())
}

fn shape(side: Side, energy: f64) -> f64 {
    match side {
        Side::Valence => {
            step(-energy, -VALENCE + 0.12, 0.13)
                * (0.45
                    + 0.9 * bump(energy, -3.1, 0.55)
                    + 0.7 * bump(energy, -5.2, 0.8)
                    + 0.35 * bump(energy, -7.0, 0.6))
        }
        Side::Conduction => {
            step(energy, CONDUCTION + 0.2, 0.22)
                * (0.5 + 0.8 * bump(energy, 3.4, 0.7) + 0.6 * bump(energy, 6.1, 1.1))
        }
    }
}

fn background(side: Side, energy: f64) -> f64 {
    match side {
        Side::Valence => 60.0 + 900.0 * step(-energy, 5.0, 1.5),
        Side::Conduction => 25.0 + 6.0 * energy.max(0.0),
    }
}

fn amplitude(side: Side) -> f64 {
    match side {
        Side::Valence => 2600.0,
        Side::Conduction => 210.0,
    }
}

fn grid(side: Side, spacing: f64) -> Vec<f64> {
    let (start, stop) = match side {
        Side::Valence => (-9.0, 0.8),
        Side::Conduction => (-0.6, 8.4),
    };
    (0..)
        .map(|i| start + spacing * f64::from(i))
        .take_while(|&energy| energy < stop)
        .collect()
}

fn side(side: Side, spacing: f64) -> SideCurve {
    let energy_ev = grid(side, spacing);
    let window_ev = match side {
        Side::Valence => (-3.3, -0.6),
        Side::Conduction => (0.3, 3.2),
    };
    let mut curve = SideCurve {
        side,
        intensity_unit: "counts",
        energy_ev: energy_ev.clone(),
        measured: Vec::new(),
        standard_uncertainty: Vec::new(),
        model: Vec::new(),
        background: Vec::new(),
        residual: Vec::new(),
        window_ev,
    };
    for (index, &energy) in energy_ev.iter().enumerate() {
        let base = background(side, energy);
        let off = if energy < window_ev.0 || energy > window_ev.1 {
            1.0
        } else {
            0.0
        };
        let model = base + amplitude(side) * shape(side, energy) * (1.0 + 0.04 * off);
        let truth = base + amplitude(side) * shape(side, energy) * (1.0 - 0.02 * off);
        let index = f64::from(u32::try_from(index).unwrap());
        let wiggle =
            1.3 * ((index * 12.9898).sin() * 43758.5453).fract() + 0.5 * (index * 2.1).sin();
        let counts = (truth + wiggle * truth.sqrt()).round().max(0.0);
        curve.measured.push(counts);
        curve.standard_uncertainty.push(counts.max(1.0).sqrt());
        curve.model.push(model);
        curve.background.push(base);
        curve.residual.push((counts - model) / model.sqrt());
    }
    curve
}

fn density(side: Side) -> DensityCurve {
    let energy_ev = grid(side, 0.04);
    let density = energy_ev
        .iter()
        .map(|&e| amplitude(side) * shape(side, e))
        .collect();
    DensityCurve {
        side,
        energy_ev,
        density,
    }
}

fn result() -> ResultDocument {
    let difference = -0.096;
    let expanded = 0.241;
    ResultDocument {
        schema: ResultDocument::identifier(),
        title: "Invented oxide film, 300 K".to_owned(),
        measured: Measured {
            reference: Reference::Fermi,
            valence_edge: Some(Quantity::new(VALENCE, 0.031).with_interval(0.062)),
            conduction_edge: Some(Quantity::new(CONDUCTION, 0.068).with_interval(0.137)),
            gap: Some(Quantity::new(CONDUCTION - VALENCE, 0.074).with_interval(0.148)),
            onset_gap: Some(Quantity::new(3.312, 0.058)),
        },
        computed: Computed {
            gap: Some(Quantity::new(3.741, 0.090)),
            direct_gap: Some(Quantity::new(4.102, 0.090)),
            corrected_gap: Some(Quantity::new(3.588, 0.094)),
            spin_gaps: Vec::new(),
            valence_edge: location(5.12, 4),
            conduction_edge: location(8.861, 5),
            reordered_levels: 2,
        },
        shift: Shift {
            valence: Some(Quantity::new(-7.073, 0.029)),
            conduction: Some(Quantity::new(-7.13, 0.066)),
        },
        difference: Some(Quantity::new(difference, 0.120).with_interval(expanded)),
        en_score: Some(difference / expanded),
        expanded: Some(Expanded {
            standard_uncertainty_ev: 0.120,
            effective_degrees_of_freedom: Some(84.2),
            coverage_factor: 2.01,
            expanded_uncertainty_ev: expanded,
        }),
        tolerance_ev: 0.3,
        budget: budget(),
        verdict: Verdict {
            agrees: Some(true),
            statement: "The computed gap of 3.588 eV agrees with the measured gap of 3.684 eV: \
                        they differ by -0.10 eV, within the expanded uncertainty of 0.24 eV."
                .to_owned(),
        },
        cautions: vec![Caution {
            name: "model-inadequate".to_owned(),
            message: "The residuals of the conduction side keep their sign for longer than chance \
                      allows (probability 0.003); narrow the window or free the background."
                .to_owned(),
        }],
        protocols: protocols(),
        fits: vec![fit(Side::Valence), fit(Side::Conduction)],
        findings: vec![finding()],
        provenance: provenance(),
        files: Vec::new(),
    }
}

fn location(energy_ev: f64, band: i64) -> EdgeLocation {
    EdgeLocation {
        energy_ev,
        k: "1".to_owned(),
        band: Some(band),
        spin: None,
        line: Some(17),
    }
}

fn budget() -> Vec<BudgetRow> {
    let row =
        |name: &str, evaluation, v: f64, c: f64, difference_ev: f64, stated: bool| BudgetRow {
            name: name.to_owned(),
            evaluation,
            valence_edge_ev: v,
            conduction_edge_ev: c,
            gap_ev: (v * v + c * c).sqrt(),
            difference_ev,
            degrees_of_freedom: if evaluation == Evaluation::A {
                Some(38.0)
            } else {
                None
            },
            stated,
            basis: "invented for the tests".to_owned(),
        };
    vec![
        row(
            "counting statistics",
            Evaluation::A,
            0.012,
            0.041,
            0.043,
            true,
        ),
        row("calibration", Evaluation::B, 0.020, 0.050, 0.054, true),
        row(
            "protocol and window",
            Evaluation::A,
            0.015,
            0.020,
            0.025,
            true,
        ),
        row("photon energy", Evaluation::B, 0.0, 0.010, 0.010, true),
        row(
            "sampling of the Brillouin zone",
            Evaluation::B,
            0.0,
            0.0,
            0.045,
            true,
        ),
        row(
            "computation: starting point",
            Evaluation::B,
            0.0,
            0.0,
            0.080,
            true,
        ),
        row("computation: basis", Evaluation::B, 0.0, 0.0, 0.0, false),
        row(
            "zero-point renormalization",
            Evaluation::B,
            0.0,
            0.0,
            0.030,
            true,
        ),
    ]
}

fn protocols() -> Vec<ProtocolRecord> {
    let edge = |onset: f64, bias: f64| {
        Some(ProtocolEdge {
            onset: Quantity::new(onset, 0.018),
            bias: Quantity::new(bias, 0.006),
            edge: Quantity::new(onset - bias, 0.019),
        })
    };
    let record = |protocol: &str, headline: bool, v: f64, c: f64| ProtocolRecord {
        protocol: protocol.to_owned(),
        model_dependent: headline,
        headline,
        valence: edge(v, v - VALENCE),
        conduction: edge(c, c - CONDUCTION),
        gap: Some(Quantity::new(CONDUCTION - VALENCE, 0.03)),
        onset_gap: Some(Quantity::new(c - v, 0.03)),
    };
    vec![
        record("density-fit", true, -1.95, 1.74),
        record("tangent", false, -1.77, 1.54),
    ]
}

fn fit(side: Side) -> FitRecord {
    FitRecord {
        side,
        shift: Quantity::new(-7.073, 0.029),
        gaussian_fwhm: Quantity::new(0.412, 0.021),
        lorentzian_fwhm: Quantity::new(0.08, 0.03),
        window_start_ev: -3.3,
        window_stop_ev: -0.6,
        channels: 54,
        degrees_of_freedom: 48,
        statistics: "poisson".to_owned(),
        reduced_chi_square: 1.07,
        runs_probability: 0.31,
        evaluations: 22,
        converged: true,
        alternatives: Vec::new(),
    }
}

fn finding() -> Finding {
    Finding {
        rule: "uneven-grid".to_owned(),
        severity: Severity::Warning,
        file: "film_ipes.csv".to_owned(),
        line: 41,
        column: 1,
        field: None,
        message: "The step of the energy axis changes here.".to_owned(),
        evidence: "0.100 eV before, 0.105 eV after".to_owned(),
        remedy: "Convert to an even grid, or say that the change is meant.".to_owned(),
    }
}

fn provenance() -> Provenance {
    let mut provenance = Provenance::default();
    provenance.sources.push(SourceRecord {
        file: "film_pes.csv".to_owned(),
        size_bytes: 10_412,
        sha256: "0123456789abcdef".repeat(4),
    });
    provenance.step(
        "read",
        "film_pes.csv: 196 channels, kinetic energy in eV by its header",
    );
    provenance.step(
        "calibrated",
        "photon energy 21.218 eV and work function 4.41 eV",
    );
    provenance
}
