//! What stops a reader, where, and how to settle it.

use std::fmt;

use annotate_snippets::{AnnotationKind, Element, Level, Origin, Renderer, Snippet};

use super::Place;

/// How many problems one reading reports in full.
const SHOWN: usize = 20;

/// Characters of the file's text that a message repeats.
const REPEATED: usize = 80;

/// A text of the file as a message repeats it: cut where it is long, its unseen characters by number.
pub(super) fn visible(text: &str) -> String {
    let unseen =
        |c: char| c.is_control() || matches!(c, '\u{ad}' | '\u{200b}'..='\u{200f}' | '\u{feff}');
    let mut shown = String::new();
    for c in text.chars().take(REPEATED) {
        match c {
            c if unseen(c) => shown.extend(c.escape_unicode()),
            c => shown.push(c),
        }
    }
    if text.chars().nth(REPEATED).is_some() {
        shown.push('…');
    }
    shown
}

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
        .elements(Vec::<Element<'_>>::new());
    let mut apart: Vec<(&Place, &str)> = Vec::new();
    let mut beside: Vec<(&Place, &str)> = Vec::new();
    for (place, label) in &problem.related {
        let same = problem.place.as_ref().is_some_and(|main| {
            (&main.file, main.line, &main.excerpt) == (&place.file, place.line, &place.excerpt)
        });
        if same { &mut beside } else { &mut apart }.push((place, label));
    }
    if let Some(place) = &problem.place {
        group = group.elements(excerpt_of(place, "", &beside));
    }
    for (place, label) in apart {
        group = group.elements(excerpt_of(place, label, &[]));
    }
    if let Some(help) = &problem.help {
        group = group.element(Level::HELP.message(help));
    }
    Renderer::plain().render(&[group])
}

/// The one-line snippet of a place and of others in the same line. Where the line is cut, its origin
/// is given apart, because the renderer would count the column in the excerpt.
fn excerpt_of<'a>(
    place: &'a Place,
    label: &'a str,
    beside: &[(&'a Place, &'a str)],
) -> Vec<Element<'a>> {
    let mark = |kind: AnnotationKind, place: &'a Place, label: &'a str| {
        kind.span(byte(place, place.highlight.start)..byte(place, place.highlight.end))
            .label((!label.is_empty()).then_some(label))
    };
    let snippet = Snippet::source(&place.excerpt)
        .line_start(place.line)
        .annotation(mark(AnnotationKind::Primary, place, label))
        .annotations(
            beside
                .iter()
                .map(|&(place, label)| mark(AnnotationKind::Context, place, label)),
        );
    if place.column == place.highlight.start + 1 {
        return vec![snippet.path(&place.file).into()];
    }
    let origin = Origin::path(&place.file).line(place.line);
    vec![origin.char_column(place.column).into(), snippet.into()]
}

/// The byte of the excerpt at which a character starts.
fn byte(place: &Place, character: usize) -> usize {
    let mut starts = place.excerpt.char_indices().map(|(at, _)| at);
    starts.nth(character).unwrap_or(place.excerpt.len())
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

    /// Adds what another list has.
    pub fn append(&mut self, other: Self) {
        self.more += other.more;
        other
            .list
            .into_iter()
            .for_each(|problem| self.push(problem));
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
        insta::assert_snapshot!(render(&problem), @r"
    error: expected a number and found text
     --> a.csv:2:3
      |
    2 | 1,µ x
      |   ^^^
      |
     ::: a.csv:1:9
      |
    1 | E (eV), counts
      |         ^^^^^^ the column
      |
      = help: write a number
    ");
        let beside = Problem::new("two")
            .at(source.place(0..6))
            .with_related(source.place(8..14), "b");
        insta::assert_snapshot!(render(&beside), @r"
    error: two
     --> a.csv:1:1
      |
    1 | E (eV), counts
      | ^^^^^^  ------ b
    ");
        let long = Source::from_text("b", &"x".repeat(300));
        let cut = Problem::new("cut").at(long.place(200..201));
        assert!(render(&cut).contains("b:1:201"), "{}", render(&cut));
        insta::assert_snapshot!(problem, @r"
    a.csv:2:3: expected a number and found text
      a.csv:1:9: the column
      help: write a number
    ");
    }

    #[test]
    fn repeated_text_is_short_and_shows_what_cannot_be_seen() {
        assert_eq!(visible("5\0 µ\u{feff}"), r"5\u{0} µ\u{feff}");
        assert_eq!(visible(&"x".repeat(5_000_000)).chars().count(), 81);
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
