//! Several sources may say the same thing; they must agree.

use std::fmt::Display;

use super::role::{Hints, Settle};
use super::{Place, Problem};

/// A value, who says it, and where.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Evidence<T> {
    pub value: T,
    /// Who says it, as in `header cell "E (eV)", line 3`.
    pub says: String,
    pub place: Option<Place>,
}

impl<T> Evidence<T> {
    /// Evidence at a place in the file.
    pub fn at(value: T, says: impl Into<String>, place: Place) -> Self {
        Self {
            value,
            says: says.into(),
            place: Some(place),
        }
    }

    /// Evidence from the user's settings.
    pub fn setting(value: T, says: impl Into<String>) -> Self {
        Self {
            value,
            says: says.into(),
            place: None,
        }
    }
}

/// The one value that all the evidence gives; `None` where there is none.
///
/// # Errors
/// A problem that shows two pieces of evidence that contradict each other.
pub(super) fn agree<T: PartialEq + Display>(
    what: &str,
    evidence: Vec<Evidence<T>>,
) -> Result<Option<Evidence<T>>, Problem> {
    let mut evidence = evidence.into_iter();
    let Some(first) = evidence.next() else {
        return Ok(None);
    };
    match evidence.find(|other| other.value != first.value) {
        None => Ok(Some(first)),
        Some(other) => Err(contradiction(what, first, other)),
    }
}

/// The one value of the file's evidence and the user's. An option of the command line overrules the
/// file, and says so; a setting of a study file must agree with it.
pub(super) fn settled<T: PartialEq + Display>(
    what: &str,
    mut evidence: Vec<Evidence<T>>,
    hint: Option<Evidence<T>>,
    hints: &Hints,
) -> Result<Option<Evidence<T>>, Problem> {
    match hint {
        Some(mut hint) if hints.settle == Settle::Options => {
            let against = evidence.iter().find(|other| other.value != hint.value);
            if let Some(other) = against {
                hint.says = format!("{}, against {} by {}", hint.says, other.value, other.says);
            }
            Ok(Some(hint))
        }
        hint => {
            evidence.extend(hint);
            agree(what, evidence)
        }
    }
}

fn contradiction<T: Display>(what: &str, one: Evidence<T>, other: Evidence<T>) -> Problem {
    let mut problem = Problem::new(format!(
        "{what} is given as {} by {}, and as {} by {}",
        one.value, one.says, other.value, other.says
    ))
    .with_help("find out which one is true and remove or correct the other");
    let mut places = [(one.place, one.says), (other.place, other.says)]
        .into_iter()
        .filter_map(|(place, says)| place.map(|place| (place, says)));
    problem.place = places.next().map(|(place, _)| place);
    problem.related = places
        .filter(|(place, _)| problem.place.as_ref() != Some(place))
        .collect();
    problem
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn options_overrule_the_file_and_keys_must_agree() {
        let file = || vec![Evidence::setting(1, "the header")];
        let hint = || Some(Evidence::setting(2, "--unit"));
        let mut hints = Hints::default();
        assert!(settled("the unit", file(), hint(), &hints).is_err());
        hints.settle = Settle::Options;
        let unit = settled("the unit", file(), hint(), &hints)
            .unwrap()
            .unwrap();
        assert_eq!(
            (unit.value, unit.says.as_str()),
            (2, "--unit, against 1 by the header")
        );
    }

    #[test]
    fn agreement_and_contradiction() {
        assert_eq!(agree::<i32>("the unit", vec![]), Ok(None));
        let same = vec![Evidence::setting(1, "a"), Evidence::setting(1, "b")];
        assert_eq!(agree("the unit", same).unwrap().unwrap().says, "a");
        let different = vec![Evidence::setting(1, "a"), Evidence::setting(2, "b")];
        assert_eq!(
            agree("the unit", different).unwrap_err().message,
            "the unit is given as 1 by a, and as 2 by b"
        );
    }
}
