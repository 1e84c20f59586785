//! What header cells say.

use super::header::*;
use super::role::{Kind, Role};
use crate::quantity::{AxisKind, Reference};

fn levels(cell: &str) -> Reading {
    read(cell, Kind::Levels)
}

fn spectrum(cell: &str) -> Reading {
    read(cell, Kind::Spectrum)
}

#[test]
fn names_of_levels() {
    use Role::{
        Band, Energy, EnergyMeanField, EnergyQuasiparticle, KIndex, KX, KZ, Occupation, Spin,
        Weight,
    };
    for (role, cells) in [
        (
            EnergyQuasiparticle,
            "E_QP|E_qp (eV)|Eqp|GW|G0W0 energy [Ha]|quasiparticle energy / eV|quasi-particle|e.qp|E_GW@PBE|QP_energy_eV|ε_{QP}|eps QP",
        ),
        (
            EnergyMeanField,
            "E_KS|KS|DFT energy|eKS (eV)|E_HF|mean field energy|E-MF|mean-field eigenvalue|E_PBE in eV|energy (DFT) [eV]",
        ),
        (Energy, "E|energy (eV)|eigenvalue|eig|band energy|ε"),
        (Occupation, "occ|f|occupation number|Occupation"),
        (Weight, "w|wtk|weight|k-point weight|wk"),
        (KIndex, "k|ik|kpt|k index|k-point|kpoint index|K_POINT|iK"),
        (KX, "kx|k1|k_x (1/bohr)|kx / (2pi/a)|k_1"),
        (KZ, "kz|k3"),
        (Band, "band|n|ib|nband|band index|Band"),
        (Spin, "spin|is|ispin|spin channel|spin index"),
        (
            Role::Correction,
            "E_QP - E_KS|QP correction (eV)|GW-PBE|E_GW − E_HF / eV",
        ),
        (
            Role::Renormalization,
            "Z|Z factor|renormalization factor|znk",
        ),
        (Role::Exchange, "sigma_x (eV)|Σx|exchange|Sigma x"),
        (Role::Correlation, "sigma_c (eV)|Re Σ_c(E) (eV)|correlation"),
        (Role::XcPotential, "V_xc (eV)|vxc|xc potential"),
        (Role::KDistance, "k distance|kpath|distance|k path (1/bohr)"),
        (Role::BandEnergy, "band 1|E1|E_QP 4 (eV)|KS band 12"),
        (Role::Projection, "Zn d|proj s|O 2p|projection (Zn 4s)"),
        (Role::Unit, "unit|energy unit"),
    ] {
        for cell in cells.split('|') {
            assert_eq!(levels(cell).role, Some(role), "{cell}");
        }
    }
}

#[test]
fn names_of_other_tables() {
    for (kind, role, cells) in [
        (
            Kind::Density,
            Role::Density,
            "DOS (states/eV)|total|density of states|tdos",
        ),
        (
            Kind::Density,
            Role::Projection,
            "s|p|d|f|Ga s|N 2p (1/eV)|pdos d|up|DOS down",
        ),
        (Kind::Density, Role::Energy, "E|E - E_F (eV)|energy (Ha)"),
        (
            Kind::Dispersion,
            Role::Momentum,
            "k|k_x (1/Å)|k parallel (Å^-1)|wave vector",
        ),
        (
            Kind::Dispersion,
            Role::Energy,
            "E_B (eV)|E - E_F|peak energy (eV)|KE",
        ),
        (
            Kind::Dispersion,
            Role::StandardUncertainty,
            "u(E) (eV)|sigma|error (meV)",
        ),
        (
            Kind::Gaps,
            Role::Value,
            "gap|E_g (eV)|band gap / eV|direct gap|IP (eV)|electron affinity (eV)|G0W0@PBE (eV)|\
             HSE06|optical gap|Exp. gap",
        ),
        (Kind::Gaps, Role::Material, "material|compound|Formula"),
        (Kind::Gaps, Role::Origin, "source|ref.|DOI"),
        (Kind::Gaps, Role::StartingPoint, "starting point|start"),
        (Kind::Gaps, Role::Temperature, "T (K)|temperature"),
        (Kind::Gaps, Role::Unit, "unit"),
        (
            Kind::Series,
            Role::Parameter,
            "bands|n bands|cutoff (Ry)|k-points|k grid|plane waves",
        ),
        (Kind::Series, Role::Value, "gap (eV)|E_g|direct gap"),
    ] {
        for cell in cells.split('|') {
            assert_eq!(read(cell, kind).role, Some(role), "{cell}");
        }
    }
    assert_eq!(read("G0W0@PBE (eV)", Kind::Gaps).label, "G0W0@PBE");
    assert_eq!(read("k_x (1/Å)", Kind::Dispersion).units, ["1/Å"]);
    assert_eq!(read("DOS (states/eV)", Kind::Density).units, ["states/eV"]);
    assert_eq!(spectrum("sweep 3").role, Some(Role::Sweep));
    // Detectors or angles are numbered too.
    assert_eq!(spectrum("counts 2").role, None);
}

#[test]
fn names_that_are_not_said_in_full_have_no_role() {
    for cell in [
        "occ KS",
        "E_F",
        "Ef",
        "E_K",
        "binding energy (eV)",
        "E_F - E",
        "E below E_F",
        "foo",
        "",
        "s",
        "I0",
        "E_KS - E_QP",
        "E_QP (eV",
        "E QP raw",
        "-E_QP (eV)",
        "E_QP (eV, below E_F)",
        "E - E_KS (eV)",
        "E-E_KS (eV)",
        "∆E_QP (eV)",
        "|E_QP| (eV)",
        "1/E_QP",
        "gap",
    ] {
        assert_eq!(levels(cell).role, None, "{cell}");
    }
    for cell in [
        "E loss (eV)",
        "E_k (eV)",
        "energy uncertainty",
        "temperature",
        "normalised intensity",
        "-E_B (eV)",
        "- binding energy",
        "−I (arb. u.)",
        "√counts",
        "counts %",
        "error %",
        "dI/dE",
        "log(counts)",
    ] {
        assert_eq!(spectrum(cell).role, None, "{cell}");
    }
}

#[test]
fn axes_and_zeros_of_curves() {
    use AxisKind::{Binding, FinalState, Kinetic, Photon};
    let fermi = Some(Reference::Fermi);
    for (cell, axis, reference) in [
        ("Kinetic energy / eV", Some(Kinetic), None),
        ("E_kin (eV)", Some(Kinetic), None),
        ("Ekin", Some(Kinetic), None),
        ("KE [eV]", Some(Kinetic), None),
        ("E_k,kin (eV)", None, None),
        ("BE (eV)", Some(Binding), None),
        ("E_B (eV)", Some(Binding), None),
        ("E_F - E (eV)", Some(Binding), fermi),
        ("E - E_F (eV)", Some(FinalState), fermi),
        ("E-EF", Some(FinalState), fermi),
        ("E−E_F / eV", Some(FinalState), fermi),
        ("(E − E_F)/eV", Some(FinalState), fermi),
        (
            "E − E_VBM (eV)",
            Some(FinalState),
            Some(Reference::ValenceEdge),
        ),
        ("energy above Fermi level (eV)", Some(FinalState), fermi),
        ("final state energy", Some(FinalState), None),
        ("Energy relative to E_F (eV)", None, fermi),
        ("Binding energy (eV, wrt E_F)", Some(Binding), fermi),
        (
            "kinetic energy wrt vacuum",
            Some(Kinetic),
            Some(Reference::Vacuum),
        ),
        ("photon energy (eV)", Some(Photon), None),
        ("wavelength (nm)", Some(Photon), None),
        ("Energy (eV)", None, None),
        ("Energy (eV, below E_F)", Some(Binding), fermi),
        // Upwards and downwards at once.
        ("Binding energy (eV, above E_F)", None, fermi),
        ("Binding energy above E_F (eV)", None, fermi),
        ("E_B - E_F (eV)", None, fermi),
        ("Kinetic energy below E_F (eV)", None, fermi),
        ("\u{feff}KE\u{200b} (eV)", Some(Kinetic), None),
    ] {
        let reading = spectrum(cell);
        assert_eq!(
            (reading.axis, reading.reference),
            (axis, reference),
            "{cell}"
        );
    }
    assert_eq!(
        levels("E_QP - E_VBM (eV)").reference,
        Some(Reference::ValenceEdge)
    );
    assert_eq!(
        levels("E_QP - E_VBM (eV)").role,
        Some(Role::EnergyQuasiparticle)
    );
}

#[test]
fn names_of_intensities() {
    for cell in [
        "Intensity",
        "counts",
        "Counts/s",
        "cps",
        "N(E)",
        "N",
        "I (arb. u.)",
        "signal",
        "count rate (1/s)",
        "arb. u.",
    ] {
        assert_eq!(spectrum(cell).role, Some(Role::Intensity), "{cell}");
    }
    for cell in [
        "sigma",
        "u(I)",
        "standard uncertainty",
        "std",
        "σ (counts)",
        "error",
    ] {
        assert_eq!(
            spectrum(cell).role,
            Some(Role::StandardUncertainty),
            "{cell}"
        );
    }
    assert!(spectrum("electron counts").counts);
    assert!(!spectrum("count rate").counts);
}

#[test]
fn units() {
    for (cell, units) in [
        ("E_QP (eV)", vec!["eV"]),
        ("E_QP[meV]", vec!["meV"]),
        ("E_QP / kJ/mol", vec!["kJ/mol"]),
        ("energy in Ha", vec!["Ha"]),
        ("E_QP_eV", vec!["eV"]),
        ("energy_qp_ev", vec!["ev"]),
        ("E_QP_mev", vec!["mev"]),
        ("E (eV) [Ha]", vec!["eV", "Ha"]),
        ("E_QP (keV)", vec!["keV"]),
        ("E_QP(k) (eV)", vec!["eV"]),
        ("E / (eV)", vec!["eV"]),
        ("E_QP", vec![]),
    ] {
        assert_eq!(levels(cell).units, units, "{cell}");
    }
    assert_eq!(spectrum("Intensity / counts/s").units, ["counts/s"]);
    assert_eq!(spectrum("error (%)").units, ["%"]);
    assert_eq!(spectrum("intensity_cps").units, ["cps"]);
}
