//! The headline numbers, the cautions and the budget.

use maud::{Markup, html};

use super::table::{Head, cell, table};
use crate::export::words::{
    difference_interval, interval, interval_text, typeset, value, variance_shares,
};
use crate::quantity::rounded;
use crate::schema::{BudgetRow, Evaluation, Expanded, Quantity, ResultDocument};

/// The numbers that the verdict rests on.
pub(super) fn numbers(result: &ResultDocument) -> Markup {
    let (measured, computed) = (&result.measured, &result.computed);
    let mut rows = vec![
        quantity("Measured valence edge", measured.valence_edge.as_ref()),
        quantity(
            "Measured conduction edge",
            measured.conduction_edge.as_ref(),
        ),
        quantity("Measured gap", measured.gap.as_ref()),
        quantity(
            "Measured gap of the raw onsets",
            measured.onset_gap.as_ref(),
        ),
        quantity("Computed gap, as tabulated", computed.gap.as_ref()),
        quantity(
            "Computed direct gap, as tabulated",
            computed.direct_gap.as_ref(),
        ),
    ];
    rows.extend(corrections(
        computed.gap.as_ref(),
        computed.corrected_gap.as_ref(),
    ));
    rows.push(quantity(
        "Computed gap, with corrections",
        computed.corrected_gap.as_ref(),
    ));
    for spin in &computed.spin_gaps {
        let name = format!("Computed gap of spin channel {}", spin.spin);
        rows.push(quantity(&name, Some(&Quantity::unstated(spin.gap_ev))));
    }
    let mut difference = quantity(
        "Difference, computed minus measured",
        result.difference.as_ref(),
    );
    if let Some(ends) = difference_interval(result) {
        difference[2] = cell(typeset(&interval_text(ends)));
    }
    rows.push(difference);
    rows.extend(result.expanded.as_ref().map(expanded));
    if let Some(score) = result.en_score {
        let text = typeset(&rounded(score, 0.1));
        rows.push(vec![
            html! { "E" sub { "n" } ", difference over its expanded uncertainty" },
            cell(text),
            cell(""),
        ]);
    }
    rows.push(vec![
        cell("Largest expanded uncertainty that may read as agreement"),
        cell(format!("{} eV", result.tolerance_ev)),
        cell(""),
    ]);
    let heads = [
        Head("Quantity", false),
        Head("Value ± standard uncertainty", true),
        Head("95 % interval (eV)", true),
    ];
    table("Numbers, rounded by their uncertainty", &heads, &rows)
}

fn quantity(name: &str, quantity: Option<&Quantity>) -> Vec<Markup> {
    let ends = quantity.and_then(interval).map(interval_text);
    vec![
        cell(name),
        cell(quantity.map_or_else(|| "not determined".to_owned(), stated)),
        cell(ends.map_or_else(String::new, |text| typeset(&text))),
    ]
}

fn stated(quantity: &Quantity) -> String {
    let note = if quantity.standard_uncertainty.is_none() {
        " (uncertainty not stated)"
    } else {
        ""
    };
    format!("{} eV{note}", typeset(&value(quantity)))
}

/// The sum of the corrections, rounded as the corrected gap is.
fn corrections(gap: Option<&Quantity>, corrected: Option<&Quantity>) -> Option<Vec<Markup>> {
    let (gap, corrected) = (gap?, corrected?);
    let u = corrected.standard_uncertainty.unwrap_or(f64::NAN);
    let sum = rounded(corrected.value - gap.value, u);
    Some(vec![
        cell("Sum of the corrections"),
        cell(format!("{} eV", typeset(&sum))),
        cell(""),
    ])
}

fn expanded(expanded: &Expanded) -> Vec<Markup> {
    let u = expanded.expanded_uncertainty_ev;
    let freedom = expanded.effective_degrees_of_freedom;
    let freedom = freedom.map_or_else(|| "very many".to_owned(), |freedom| format!("{freedom:.0}"));
    vec![
        html! { "Expanded uncertainty of the difference, U" sub { "95" } },
        cell(format!("{} eV", rounded(u, u))),
        html! { "k = " (format!("{:.2}", expanded.coverage_factor)) ", ν" sub { "eff" } " = " (freedom) },
    ]
}

/// What a reader should know.
pub(super) fn cautions(result: &ResultDocument) -> Markup {
    html! {
        section {
            h2 { "Cautions" }
            @if result.cautions.is_empty() {
                p { "None." }
            } @else {
                dl.cautions {
                    @for caution in &result.cautions {
                        dt { (caution.name) }
                        dd { (caution.message) }
                    }
                }
            }
        }
    }
}

/// One row a contribution.
pub(super) fn budget(result: &ResultDocument) -> Markup {
    let heads = [
        Head("Contribution", false),
        Head("Type", false),
        Head("Valence edge (eV)", true),
        Head("Conduction edge (eV)", true),
        Head("Gap (eV)", true),
        Head("Difference (eV)", true),
        Head("Share of its variance", true),
        Head("Degrees of freedom", true),
        Head("Basis", false),
    ];
    let shares = variance_shares(result);
    let rows: Vec<Vec<Markup>> = result.budget.iter().zip(shares).map(contribution).collect();
    table("Uncertainty budget: standard uncertainties", &heads, &rows)
}

fn contribution((row, share): (&BudgetRow, f64)) -> Vec<Markup> {
    let kind = match row.evaluation {
        Evaluation::A => "A",
        Evaluation::B => "B",
    };
    let freedom = row.degrees_of_freedom;
    let number = |u: f64| {
        cell(if u == 0.0 {
            "0".to_owned()
        } else {
            rounded(u, u)
        })
    };
    let (difference, share) = if row.stated {
        (
            number(row.difference_ev),
            html! { (bar(share)) (format!("{:.0} %", 100.0 * share)) },
        )
    } else {
        (cell("not stated"), cell("not stated"))
    };
    vec![
        cell(row.name.as_str()),
        cell(kind),
        number(row.valence_edge_ev),
        number(row.conduction_edge_ev),
        number(row.gap_ev),
        difference,
        share,
        cell(freedom.map_or_else(|| "very many".to_owned(), |freedom| format!("{freedom:.0}"))),
        cell(row.basis.as_str()),
    ]
}

/// A share as a length beside its number.
fn bar(share: f64) -> Markup {
    let style = format!("width:{:.1}em", 6.0 * share.clamp(0.0, 1.0));
    html! { span.share aria-hidden="true" style=(style) {} }
}
