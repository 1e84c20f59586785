//! What stops a reader, where, and how to settle it.

use std::fmt;

use annotate_snippets::{AnnotationKind, Level, Origin, Renderer, Snippet};

use super::Place;

/// How many problems one reading reports in full.
const SHOWN: usize = 20;

/// One reason why a text could not be read.
#[derive(Debug, Clone, PartialEq)]
pub struct Problem {
    /// What was found and what was expected.
    pub message: String,
    /// Where, where there is such a place.
    pub place: Option<Place>,
    /// How to settle it.
    pub help: Option<String>,
    /// Other places that belong to it, each with a label.
    pub related: Vec<(Place, String)>,
}

impl Problem {
    /// A problem with no place yet.
    #[must_use]
    pub fn new(message: impl Into<String>) -> Self {
        Self {
            message: message.into(),
            place: None,
            help: None,
            related: Vec::new(),
        }
    }

    /// The same problem at a place.
    #[must_use]
    pub fn at(mut self, place: Place) -> Self {
        self.place = Some(place);
        self
    }

    /// The same problem with advice.
    #[must_use]
    pub fn with_help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }

    /// The same problem with another place that belongs to it.
    #[must_use]
    pub fn with_related(mut self, place: Place, label: impl Into<String>) -> Self {
        self.related.push((place, label.into()));
        self
    }
}

impl fmt::Display for Problem {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        if let Some(place) = &self.place {
            write!(f, "{}:{}:{}: ", place.file, place.line, place.column)?;
        }
        f.write_str(&self.message)?;
        for (place, label) in &self.related {
            write!(
                f,
                "\n  {}:{}:{}: {label}",
                place.file, place.line, place.column
            )?;
        }
        match &self.help {
            Some(help) => write!(f, "\n  help: {help}"),
            None => Ok(()),
        }
    }
}

impl std::error::Error for Problem {}

/// The problem over several lines with the text it is about, without colour.
#[must_use]
pub fn render(problem: &Problem) -> String {
    let mut group = Level::ERROR
        .primary_title(&problem.message)
        .elements(problem.place.iter().flat_map(|place| excerpt_of(place, "")));
    for (place, label) in &problem.related {
        group = group.elements(excerpt_of(place, label));
    }
    if let Some(help) = &problem.help {
        group = group.element(Level::HELP.message(help));
    }
    Renderer::plain().render(&[group])
}

/// The origin and the one-line snippet of a place. The origin is given apart from the snippet
/// because the column counts in the whole line and the excerpt may be cut.
fn excerpt_of<'a>(place: &'a Place, label: &'a str) -> [annotate_snippets::Element<'a>; 2] {
    let byte = |chars: usize| {
        place
            .excerpt
            .char_indices()
            .nth(chars)
            .map_or(place.excerpt.len(), |(at, _)| at)
    };
    let span = byte(place.highlight.start)..byte(place.highlight.end);
    let mark = AnnotationKind::Primary.span(span);
    let mark = if label.is_empty() {
        mark
    } else {
        mark.label(label)
    };
    [
        Origin::path(&place.file)
            .line(place.line)
            .char_column(place.column)
            .into(),
        Snippet::source(&place.excerpt)
            .line_start(place.line)
            .annotation(mark)
            .into(),
    ]
}

/// Collects problems up to a number worth reading, and counts the rest.
#[derive(Debug, Default)]
pub(super) struct Problems {
    list: Vec<Problem>,
    more: usize,
}

impl Problems {
    /// Adds a problem.
    pub fn push(&mut self, problem: Problem) {
        self.push_with(|| problem);
    }

    /// Adds a problem that is only built where it will be shown.
    pub fn push_with(&mut self, problem: impl FnOnce() -> Problem) {
        if self.list.len() < SHOWN {
            self.list.push(problem());
        } else {
            self.more += 1;
        }
    }

    /// The value of a result; its problem is kept.
    pub fn keep<T>(&mut self, result: Result<T, Problem>) -> Option<T> {
        result.map_err(|problem| self.push(problem)).ok()
    }

    /// Whether there is none.
    pub fn is_empty(&self) -> bool {
        self.list.is_empty()
    }

    /// The problems, the last one saying how many more there are.
    pub fn into_list(self) -> Vec<Problem> {
        let mut list = self.list;
        if self.more > 0 {
            let more = self.more;
            list.push(Problem::new(format!("and {more} more like these")));
        }
        list
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::parse::Source;

    #[test]
    fn rendered_problem_shows_one_line_with_its_true_column() {
        let source = Source::from_text("a.csv", "E (eV),\tcounts\n1,µ x\n");
        let problem = Problem::new("expected a number and found text")
            .at(source.place(17..21))
            .with_related(source.place(8..14), "the column")
            .with_help("write a number");
        insta::assert_snapshot!(render(&problem), @"");
        insta::assert_snapshot!(problem, @"");
    }

    #[test]
    fn problems_beyond_the_limit_are_counted() {
        let mut problems = Problems::default();
        for _ in 0..25 {
            problems.push(Problem::new("x"));
        }
        let list = problems.into_list();
        assert_eq!(list.len(), 21);
        assert_eq!(list[20].message, "and 5 more like these");
    }
}
