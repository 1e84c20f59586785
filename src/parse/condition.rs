//! The keys of comment lines that say how a curve was measured or levels were computed.

use super::metadata::{axis_named, reference_named};
use super::quantity_text::{
    energy_text, linear_energy_text, potential_text, temperature_text, time_text,
};
use super::role::Kind;
use crate::quantity::{AxisKind, Energy, EnergyUnit, Reference, Temperature};
use crate::schema::{Computation, Conditions};

/// A key that comment lines are read for.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum ConditionKey {
    /// Photon energy.
    PhotonEnergy,
    /// Work function of the analyser.
    AnalyserWorkFunction,
    /// Work function of the cathode.
    CathodeWorkFunction,
    /// Bias of the sample.
    SampleBias,
    /// Resolution as a full width at half maximum.
    Resolution,
    /// Temperature of the sample.
    Temperature,
    /// Pass energy.
    PassEnergy,
    /// Time on a channel in a sweep.
    Dwell,
    /// Number of sweeps.
    Sweeps,
    /// Technique.
    Technique,
    /// Kind of the energy axis.
    Axis,
    /// Zero of the energies.
    Reference,
    /// Method of the computation.
    Method,
    /// Starting point of the computation.
    StartingPoint,
    /// Temperature of the computed lattice.
    LatticeTemperature,
    /// Whether spin-orbit coupling is in the energies.
    SpinOrbit,
}

/// A value that was read.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum Value {
    /// In eV, V, K, s or 1, as the key says.
    Number(f64),
    Text(String),
    Axis(AxisKind),
    Reference(Reference),
    Flag(bool),
}

/// A key's grammar: the words it needs, and those it may have beside them.
type Form = (
    ConditionKey,
    &'static [&'static str],
    &'static [&'static str],
);

const FILLER: [&str; 3] = ["of", "the", "energy"];

const MEASURED: [Form; 19] = {
    use ConditionKey as Key;
    [
        (
            Key::PhotonEnergy,
            &["photon"],
            &["energy", "source", "detector", "lamp", "excitation"],
        ),
        (Key::PhotonEnergy, &["excitation", "energy"], &["source"]),
        (Key::PhotonEnergy, &["hv"], &[]),
        (Key::PhotonEnergy, &["hν"], &[]),
        (
            Key::AnalyserWorkFunction,
            &["work", "function"],
            &["analyser", "analyzer", "spectrometer"],
        ),
        (
            Key::CathodeWorkFunction,
            &["work", "function", "cathode"],
            &[],
        ),
        (Key::SampleBias, &["bias"], &["sample", "voltage"]),
        (
            Key::Resolution,
            &["resolution"],
            &["fwhm", "instrument", "instrumental"],
        ),
        (Key::Temperature, &["temperature"], &["sample"]),
        (Key::Temperature, &["t"], &[]),
        (
            Key::PassEnergy,
            &["pass", "energy"],
            &["analyser", "analyzer"],
        ),
        (Key::Dwell, &["dwell"], &["time"]),
        (Key::Dwell, &["time", "per"], &["channel", "step", "point"]),
        (Key::Sweeps, &["sweeps"], &["number"]),
        (Key::Sweeps, &["scans"], &["number"]),
        (Key::Technique, &["technique"], &[]),
        (Key::Axis, &["axis"], &["kind"]),
        (Key::Reference, &["reference"], &["level"]),
        (Key::Reference, &["zero"], &["level"]),
    ]
};

const COMPUTED: [Form; 8] = {
    use ConditionKey as Key;
    [
        (Key::Method, &["method"], &[]),
        (Key::StartingPoint, &["starting", "point"], &[]),
        (Key::LatticeTemperature, &["lattice", "temperature"], &[]),
        (
            Key::SpinOrbit,
            &["spin", "orbit"],
            &["coupling", "included"],
        ),
        (Key::SpinOrbit, &["spinorbit"], &["coupling", "included"]),
        (Key::SpinOrbit, &["soc"], &["included"]),
        (Key::Reference, &["reference"], &["level"]),
        (Key::Reference, &["zero"], &["level"]),
    ]
};

/// The key that a text is, and the unit that it gives in brackets, as in `Photon energy (eV)`.
/// A key with a word that is not in its grammar is another key, and is left alone.
pub(super) fn recognise(text: &str, kind: Kind) -> Option<(ConditionKey, Option<String>)> {
    let bracketed = text
        .trim()
        .strip_suffix([')', ']'])
        .and_then(|head| head.split_once(['(', '[']))
        .filter(|(_, unit)| is_unit(unit));
    let (name, unit) = match bracketed {
        Some((name, unit)) => (name, Some(unit.to_owned())),
        None => (text, None),
    };
    let lower = name.to_lowercase();
    let words: Vec<&str> = lower
        .split(|c: char| !c.is_alphanumeric())
        .filter(|word| !word.is_empty())
        .collect();
    let forms: &[Form] = match kind {
        Kind::Levels | Kind::Density => &COMPUTED,
        Kind::Spectrum | Kind::Dispersion => &MEASURED,
        Kind::Gaps | Kind::Series | Kind::Any => &[],
    };
    let fits = |&&(_, needed, beside): &&Form| {
        needed.iter().all(|word| words.contains(word))
            && words
                .iter()
                .all(|word| needed.contains(word) || beside.contains(word) || FILLER.contains(word))
    };
    forms.iter().find(fits).map(|&(key, ..)| (key, unit))
}

/// Whether a value may be in this unit.
fn is_unit(text: &str) -> bool {
    EnergyUnit::from_spelling(text).is_some() || matches!(text, "V" | "mV" | "s" | "ms")
}

/// Reads the value of a key; `unit` is what the key gives in brackets.
///
/// # Errors
/// A sentence that says what was expected and found.
pub(super) fn read(key: ConditionKey, value: &str, unit: Option<&str>) -> Result<Value, String> {
    use ConditionKey as Key;
    let text = match (unit, value.trim().parse::<f64>()) {
        (Some(unit), Ok(_)) => format!("{value} {unit}"),
        (Some(unit), Err(_)) if !value.ends_with(unit) => {
            return Err(format!(
                "the key gives the unit `{unit}`, and the value is `{value}`"
            ));
        }
        _ => without_remark(value).to_owned(),
    };
    let ev = |energy: Result<Energy, String>| energy.map(Energy::electronvolts);
    let number = match key {
        Key::PhotonEnergy => ev(energy_text(&text)),
        Key::AnalyserWorkFunction
        | Key::CathodeWorkFunction
        | Key::Resolution
        | Key::PassEnergy => ev(linear_energy_text(&text)),
        Key::SampleBias => potential_text(&text),
        Key::Temperature | Key::LatticeTemperature => {
            temperature_text(&text).map(Temperature::kelvin)
        }
        Key::Dwell => time_text(&text),
        Key::Sweeps => sweeps(&text),
        Key::Axis => return axis(&text),
        Key::Reference => return reference(&text),
        Key::SpinOrbit => return flag(&text),
        Key::Technique | Key::Method | Key::StartingPoint => {
            return Ok(Value::Text(value.to_owned()));
        }
    };
    number.map(Value::Number)
}

/// The value without a remark in brackets after it, as in `21.218 eV (resonance line)`.
fn without_remark(value: &str) -> &str {
    match value
        .trim()
        .strip_suffix(')')
        .and_then(|head| head.rsplit_once(" ("))
    {
        // A remark that may change the value stays, and the value is not read.
        Some((head, remark)) if !is_changing(remark) => head.trim(),
        _ => value.trim(),
    }
}

fn is_changing(remark: &str) -> bool {
    const WORDS: [&str; 14] = [
        "sigma",
        "hwhm",
        "half",
        "negative",
        "minus",
        "total",
        "nominal",
        "uncalibrated",
        "calibrated",
        "approx",
        "about",
        "not",
        "times",
        "x",
    ];
    let lower = remark.to_lowercase();
    let mut words = lower.split(|c: char| !c.is_alphanumeric());
    words.any(|word| WORDS.contains(&word) || word.contains(|c: char| c.is_ascii_digit()))
}

fn sweeps(text: &str) -> Result<f64, String> {
    match text.parse::<u32>() {
        Ok(number) => Ok(f64::from(number)),
        Err(_) => Err(format!("expected a whole number and found `{text}`")),
    }
}

fn axis(text: &str) -> Result<Value, String> {
    axis_named(text).map(Value::Axis).ok_or_else(|| {
        format!("expected kinetic, binding, final-state or photon, and found `{text}`")
    })
}

fn reference(text: &str) -> Result<Value, String> {
    reference_named(text).map(Value::Reference).ok_or_else(|| {
        format!("expected fermi, valence-edge, vacuum or unknown, and found `{text}`")
    })
}

fn flag(text: &str) -> Result<Value, String> {
    match text.to_lowercase().as_str() {
        "yes" | "true" | "on" | "included" | "1" => Ok(Value::Flag(true)),
        "no" | "false" | "off" | "none" | "not included" | "0" => Ok(Value::Flag(false)),
        _ => Err(format!("expected yes or no and found `{text}`")),
    }
}

/// Puts a value that was read into the conditions of a measurement.
pub(super) fn set_condition(conditions: &mut Conditions, key: ConditionKey, value: &Value) {
    use ConditionKey as Key;
    match (key, value) {
        (Key::Technique, Value::Text(text)) => conditions.technique = Some(text.clone()),
        (key, Value::Number(number)) => {
            let slot = match key {
                Key::PhotonEnergy => &mut conditions.photon_energy_ev,
                Key::AnalyserWorkFunction => &mut conditions.analyser_work_function_ev,
                Key::CathodeWorkFunction => &mut conditions.cathode_work_function_ev,
                Key::SampleBias => &mut conditions.sample_bias_v,
                Key::Resolution => &mut conditions.resolution_fwhm_ev,
                Key::Temperature => &mut conditions.temperature_k,
                Key::PassEnergy => &mut conditions.pass_energy_ev,
                Key::Dwell => &mut conditions.dwell_s,
                Key::Sweeps => &mut conditions.sweeps,
                _ => return,
            };
            *slot = Some(*number);
        }
        _ => {}
    }
}

/// Puts a value that was read into the description of a computation.
pub(super) fn set_computation(computation: &mut Computation, key: ConditionKey, value: &Value) {
    use ConditionKey as Key;
    match (key, value) {
        (Key::Method, Value::Text(text)) => computation.method = Some(text.clone()),
        (Key::StartingPoint, Value::Text(text)) => computation.starting_point = Some(text.clone()),
        (Key::LatticeTemperature, Value::Number(kelvin)) => {
            computation.lattice_temperature_k = Some(*kelvin);
        }
        (Key::SpinOrbit, Value::Flag(flag)) => computation.spin_orbit_included = Some(*flag),
        _ => {}
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn keys() {
        use ConditionKey as Key;
        for (text, key) in [
            ("Photon energy", Key::PhotonEnergy),
            ("photon energy of the source", Key::PhotonEnergy),
            ("hν", Key::PhotonEnergy),
            ("Work function", Key::AnalyserWorkFunction),
            ("analyser_work_function", Key::AnalyserWorkFunction),
            ("cathode work function", Key::CathodeWorkFunction),
            ("sample bias", Key::SampleBias),
            ("Resolution (FWHM)", Key::Resolution),
            ("energy resolution", Key::Resolution),
            ("T", Key::Temperature),
            ("pass energy", Key::PassEnergy),
            ("Dwell time", Key::Dwell),
            ("number of sweeps", Key::Sweeps),
            ("scans", Key::Sweeps),
            ("energy axis", Key::Axis),
        ] {
            assert_eq!(recognise(text, Kind::Spectrum), Some((key, None)), "{text}");
        }
        for text in [
            "sample work function",
            "angular resolution",
            "resolution (sigma) x",
            "electron temperature",
            "note",
        ] {
            assert_eq!(recognise(text, Kind::Spectrum), None, "{text}");
        }
        assert_eq!(
            recognise("spin-orbit coupling", Kind::Levels),
            Some((Key::SpinOrbit, None))
        );
        assert_eq!(recognise("temperature", Kind::Levels), None);
    }

    #[test]
    fn values() {
        use ConditionKey as Key;
        assert_eq!(
            read(Key::PhotonEnergy, "21.218 eV (resonance line)", None),
            Ok(Value::Number(21.218))
        );
        assert_eq!(
            read(Key::PassEnergy, "5", Some("eV")),
            Ok(Value::Number(5.0))
        );
        assert_eq!(read(Key::Sweeps, "12", None), Ok(Value::Number(12.0)));
        assert_eq!(
            read(Key::SpinOrbit, "not included", None),
            Ok(Value::Flag(false))
        );
        assert_eq!(
            read(Key::Axis, "E - E_F", None),
            Ok(Value::Axis(AxisKind::FinalState))
        );
        assert!(read(Key::Resolution, "100 nm", None).is_err());
        assert!(read(Key::Sweeps, "1.5", None).is_err());
        // The key and the value may both give the unit, if it is the same.
        assert!(read(Key::PassEnergy, "5 eV", Some("meV")).is_err());
        assert_eq!(
            read(Key::PassEnergy, "5 eV", Some("eV")),
            Ok(Value::Number(5.0))
        );
    }
}
