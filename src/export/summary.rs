//! The result on one screen of a terminal: at most 24 lines of 80 columns.

use super::words::{difference_interval, interval_text, plain, value, variance_shares};
use crate::quantity::rounded;
use crate::schema::{Quantity, ResultDocument};

const WIDTH: usize = 80;
const HEIGHT: usize = 24;
/// Columns of the names in the tables.
const NAMES: usize = 36;
/// Columns of a number up to its decimal point.
const WHOLE: usize = 6;

/// The result as text for a terminal.
///
/// Numbers are rounded by their uncertainty; in the table `±` introduces a standard uncertainty, as
/// its head says, and intervals say that they are of 95 %.
#[must_use]
pub fn summary(result: &ResultDocument) -> String {
    let mut lines = vec![cut(&plain(&result.title), WIDTH), String::new()];
    lines.extend(wrap(&plain(&result.verdict.statement)));
    lines.push(String::new());
    lines.extend(numbers(result));
    lines.extend(contributions(result));
    let room = HEIGHT.saturating_sub(lines.len());
    lines.extend(cautions(result, room));
    let mut text = lines.join("\n");
    text.push('\n');
    text
}

fn numbers(result: &ResultDocument) -> Vec<String> {
    let line = |name: &str, quantity: &Option<Quantity>| row(name, &stated(quantity.as_ref()));
    let mut lines = vec![
        format!("{:1$}value ± standard uncertainty", "", NAMES + WHOLE),
        line("measured valence edge", &result.measured.valence_edge),
        line("measured conduction edge", &result.measured.conduction_edge),
        line("measured gap", &result.measured.gap),
        line(
            "computed gap, with corrections",
            &result.computed.corrected_gap,
        ),
        line("difference, computed - measured", &result.difference),
    ];
    if let Some(interval) = difference_interval(result) {
        lines.push(row(
            "95 % interval of the difference",
            &format!("{} eV", interval_text(interval)),
        ));
    }
    if let Some(score) = result.en_score {
        lines.push(row(
            "E_n, difference / 95 % half width",
            &rounded(score, 0.1),
        ));
    }
    lines
}

fn stated(quantity: Option<&Quantity>) -> String {
    match quantity {
        None => "not determined".to_owned(),
        Some(q) if q.standard_uncertainty.is_some() => format!("{} eV", value(q)),
        Some(q) => format!("{} eV, uncertainty not stated", value(q)),
    }
}

/// A name and a number, decimal points below each other.
fn row(name: &str, number: &str) -> String {
    let whole = number.find('.').filter(|_| !number.starts_with('n'));
    let indent = whole.map_or(WHOLE - 2, |at| WHOLE.saturating_sub(at));
    let name = cut(name, NAMES);
    cut(&format!("  {name:<NAMES$}{:indent$}{number}", ""), WIDTH)
}

/// The three largest contributions to the uncertainty of the difference.
fn contributions(result: &ResultDocument) -> Vec<String> {
    let shares = variance_shares(result);
    let mut rows: Vec<_> = result
        .budget
        .iter()
        .zip(shares)
        .filter(|(_, share)| *share > 0.0)
        .collect();
    rows.sort_by(|(_, a), (_, b)| b.total_cmp(a));
    if rows.is_empty() || result.difference.is_none() {
        return Vec::new();
    }
    let mut lines = vec![
        String::new(),
        "Largest contributions to the uncertainty of the difference, share of variance".to_owned(),
    ];
    for (contribution, share) in rows.into_iter().take(3) {
        let u = contribution.difference_ev;
        let number = format!("{} eV, {:.0} %", rounded(u, u), 100.0 * share);
        lines.push(row(&plain(&contribution.name), &number));
    }
    lines
}

/// One line a caution, in `room` lines; what does not fit is counted.
fn cautions(result: &ResultDocument, room: usize) -> Vec<String> {
    let all = &result.cautions;
    if all.is_empty() {
        return Vec::new();
    }
    // A blank line, the heading, and at least one line under it.
    let room = room.saturating_sub(2).max(1);
    let shown = if all.len() <= room {
        all.len()
    } else {
        room - 1
    };
    let mut lines = vec![String::new(), "Cautions".to_owned()];
    for caution in &all[..shown] {
        let text = format!("  {}: {}", caution.name, caution.message);
        lines.push(cut(&plain(&text), WIDTH));
    }
    if shown < all.len() {
        lines.push(format!("  {} more in the report", all.len() - shown));
    }
    lines
}

/// The text in at most `width` characters, with an ellipsis where it is longer.
fn cut(text: &str, width: usize) -> String {
    if text.chars().count() <= width {
        return text.to_owned();
    }
    let kept: String = text.chars().take(width - 1).collect();
    format!("{}\u{2026}", kept.trim_end())
}

/// The text in lines of at most 80 columns.
fn wrap(text: &str) -> Vec<String> {
    let mut lines = Vec::new();
    let mut line = String::new();
    for word in text.split_whitespace() {
        if !line.is_empty() && line.chars().count() + 1 + word.chars().count() > WIDTH {
            lines.push(std::mem::take(&mut line));
        }
        if !line.is_empty() {
            line.push(' ');
        }
        line.push_str(word);
    }
    lines.push(line);
    lines
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::export::sample;
    use crate::schema::Caution;

    #[test]
    fn two_sides() {
        insta::assert_snapshot!(summary(&sample::two_sides().0), @"
        Invented oxide film, 300 K

        The computed gap of 3.588 eV agrees with the measured gap of 3.684 eV: they
        differ by -0.10 eV, within the expanded uncertainty of 0.24 eV.

                                                  value ± standard uncertainty
          measured valence edge                   -1.953 ± 0.031 eV
          measured conduction edge                 1.731 ± 0.068 eV
          measured gap                             3.684 ± 0.074 eV
          computed gap, with corrections           3.588 ± 0.094 eV
          difference, computed - measured         -0.10 ± 0.12 eV
          95 % interval of the difference         -0.34 to 0.14 eV
          E_n, difference / 95 % half width       -0.40

        Largest contributions to the uncertainty of the difference, share of variance
          computation: starting point              0.080 eV, 43 %
          calibration                              0.054 eV, 20 %
          sampling of the Brillouin zone           0.045 eV, 14 %

        Cautions
          model-inadequate: The residuals of the conduction side keep their sign for lo…
        ");
    }

    #[test]
    fn one_side() {
        insta::assert_snapshot!(summary(&sample::one_side().0), @"
        Invented oxide film, 300 K

        There is no measured gap: the study has no inverse photoemission.

                                                  value ± standard uncertainty
          measured valence edge                   -1.953 ± 0.031 eV
          measured conduction edge                not determined
          measured gap                            not determined
          computed gap, with corrections           3.588 ± 0.094 eV
          difference, computed - measured         not determined

        Cautions
          model-inadequate: The residuals of the conduction side keep their sign for lo…
        ");
    }

    #[test]
    fn every_case_fits_the_screen() {
        for (name, (mut result, _)) in sample::all() {
            let caution = Caution {
                name: "alignment-ambiguous".to_owned(),
                message: "word\n ".repeat(60),
            };
            result.cautions = vec![caution; 20];
            let text = summary(&result);
            assert!(text.lines().count() <= HEIGHT, "{name}: {text}");
            assert!(
                text.lines().all(|line| line.chars().count() <= WIDTH),
                "{name}: {text}"
            );
            assert!(text.contains("more in the report"), "{name}: {text}");
        }
    }
}
