//! Several sources may say the same thing; they must agree.

use std::fmt::Display;

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
