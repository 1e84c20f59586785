//! A number with its unit, as study files and comment lines write it: `21.218 eV`, `-5 V`, `300 K`.

use nom::branch::alt;
use nom::character::complete::{char, digit1, multispace0, one_of};
use nom::combinator::{map_opt, opt, recognize, rest};
use nom::{IResult, Parser};

use crate::quantity::{Energy, EnergyUnit, Temperature};

/// Reads an energy with its unit, a vacuum wavelength (`nm`) included.
///
/// # Errors
/// A sentence that says what was expected and what was found.
///
/// ```
/// use bandrule::parse::energy_text;
/// assert_eq!(energy_text("-5.5 eV").map(|e| e.electronvolts()), Ok(-5.5));
/// assert!(energy_text("21.218").is_err());
/// ```
pub fn energy_text(text: &str) -> Result<Energy, String> {
    let (value, unit) = with_unit(text, ENERGY, EnergyUnit::from_spelling)?;
    if !unit.is_linear() && value <= 0.0 {
        return Err(format!(
            "expected a wavelength above zero and found `{}`",
            text.trim()
        ));
    }
    Ok(Energy::new(value, unit))
}

/// Reads an energy that is no photon's: like [`energy_text`], but a wavelength is refused.
///
/// # Errors
/// A sentence that says what was expected and what was found.
pub fn linear_energy_text(text: &str) -> Result<Energy, String> {
    match with_unit(text, ENERGY, EnergyUnit::from_spelling)? {
        (value, unit) if unit.is_linear() => Ok(Energy::new(value, unit)),
        _ => Err(format!(
            "expected an energy and found the wavelength `{}`; only a photon energy is given by one",
            text.trim()
        )),
    }
}

/// Reads an electric potential in V or mV; the result is in volts.
///
/// # Errors
/// A sentence that says what was expected and what was found.
pub fn potential_text(text: &str) -> Result<f64, String> {
    scaled(
        text,
        "a potential with its unit (V, mV), such as `-5 V`",
        |unit| match unit {
            "V" | "volt" | "volts" => Some(1.0),
            "mV" => Some(1_000.0),
            _ => None,
        },
    )
}

/// Reads a temperature in kelvin.
///
/// # Errors
/// A sentence that says what was expected and what was found.
pub fn temperature_text(text: &str) -> Result<Temperature, String> {
    scaled(text, "a temperature in kelvin, such as `300 K`", |unit| {
        matches!(unit, "K" | "kelvin").then_some(1.0)
    })
    .map(Temperature::from_kelvin)
}

/// Reads a time in s or ms; the result is in seconds.
///
/// # Errors
/// A sentence that says what was expected and what was found.
pub fn time_text(text: &str) -> Result<f64, String> {
    scaled(
        text,
        "a time with its unit (s, ms), such as `0.5 s`",
        |unit| match unit {
            "s" | "sec" | "second" | "seconds" => Some(1.0),
            "ms" => Some(1_000.0),
            _ => None,
        },
    )
}

const ENERGY: &str = "an energy with its unit (eV, meV, Ha, Ry, kJ/mol, kcal/mol, cm-1, nm, K), \
                      such as `21.218 eV`";

fn scaled(
    text: &str,
    expected: &str,
    per_base_unit: impl Fn(&str) -> Option<f64>,
) -> Result<f64, String> {
    with_unit(text, expected, per_base_unit).map(|(value, divisor)| value / divisor)
}

/// The number and the unit of a text.
fn with_unit<T>(
    text: &str,
    expected: &str,
    read: impl Fn(&str) -> Option<T>,
) -> Result<(f64, T), String> {
    let text = text.trim();
    let Ok((_, (value, unit))) = quantity(text) else {
        return Err(format!("expected {expected}, and found `{text}`"));
    };
    if unit.is_empty() {
        return Err(format!(
            "expected {expected}, and found `{text}` without a unit"
        ));
    }
    if unit.starts_with(',') {
        return Err(format!(
            "expected {expected}, with a point for the decimal mark, and found `{text}`"
        ));
    }
    match read(unit) {
        Some(read) => Ok((value, read)),
        None => Err(format!("expected {expected}, and found the unit `{unit}`")),
    }
}

fn quantity(text: &str) -> IResult<&str, (f64, &str)> {
    let (left, value) = decimal(text)?;
    let (left, _) = multispace0(left)?;
    let (left, unit) = rest(left)?;
    Ok((left, (value, unit)))
}

/// A finite decimal number. An `e` with no digits after it belongs to the unit, as in `5eV`.
fn decimal(text: &str) -> IResult<&str, f64> {
    let digits = alt((
        recognize((digit1, opt((char('.'), opt(digit1))))),
        recognize((char('.'), digit1)),
    ));
    let exponent = opt((one_of("eE"), opt(one_of("+-−")), digit1));
    map_opt(
        recognize((opt(one_of("+-−")), digits, exponent)),
        |text: &str| {
            let value: f64 = text.replace('−', "-").parse().ok()?;
            value.is_finite().then_some(value)
        },
    )
    .parse(text)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn ev(text: &str) -> f64 {
        energy_text(text).unwrap().electronvolts()
    }

    #[test]
    fn spellings() {
        assert_eq!(ev("21.218 eV"), 21.218);
        assert_eq!(ev("5eV"), 5.0);
        assert_eq!(ev("1e3 meV"), 1.0);
        assert_eq!(ev("−.5 eV"), -0.5);
        // The He I resonance line in vacuum, 58.4334 nm, is 21.218 eV.
        assert!((ev("584.334e-1 nm") - 21.218).abs() < 1e-3);
        assert_eq!(potential_text("-5 V"), Ok(-5.0));
        assert_eq!(potential_text("250 mV"), Ok(0.25));
        assert_eq!(temperature_text("300 K").unwrap().kelvin(), 300.0);
        assert_eq!(time_text("500 ms"), Ok(0.5));
    }

    #[test]
    fn refusals_say_what_was_expected_and_found() {
        let refused = |text| energy_text(text).map(|_| ()).unwrap_err();
        insta::assert_snapshot!(refused("21.218"), @"expected an energy with its unit (eV, meV, Ha, Ry, kJ/mol, kcal/mol, cm-1, nm, K), such as `21.218 eV`, and found `21.218` without a unit");
        insta::assert_snapshot!(refused("21,218 eV"), @"expected an energy with its unit (eV, meV, Ha, Ry, kJ/mol, kcal/mol, cm-1, nm, K), such as `21.218 eV`, with a point for the decimal mark, and found `21,218 eV`");
        insta::assert_snapshot!(refused("0 nm"), @"expected a wavelength above zero and found `0 nm`");
        for text in [
            "", "eV", "nan eV", "inf eV", "1e999 eV", "5 keV", "5 mev", "5 eV 6",
        ] {
            assert!(energy_text(text).is_err(), "{text}");
        }
        assert!(linear_energy_text("58 nm").is_err());
        assert!(potential_text("5 eV").is_err());
        assert!(temperature_text("20 C").is_err());
        assert!(time_text("5").is_err());
    }
}
