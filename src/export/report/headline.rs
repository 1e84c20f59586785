//! The headline numbers, the cautions and the budget.

use maud::{Markup, html};

use super::table::{Head, cell, table};
use crate::export::words::{
    difference_interval, interval, interval_text, typeset, unbroken, value, variance_shares,
};
use crate::quantity::{decimals_for, rounded};
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
        cell("Tolerance: the largest expanded uncertainty that can show agreement"),
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
    let stated = quantity.map(|quantity| format!("{} eV", typeset(&value(quantity))));
    let ends = quantity.map(|quantity| match interval(quantity) {
        Some(ends) => typeset(&interval_text(ends)),
        None => "not stated".to_owned(),
    });
    vec![
        cell(name),
        cell(stated.unwrap_or_else(|| "not determined".to_owned())),
        cell(ends.unwrap_or_default()),
    ]
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
    vec![
        html! {
            "Expanded uncertainty of the difference, U" sub { "95" }
            " (k = " (format!("{:.2}", expanded.coverage_factor))
            ", ν" sub { "eff" } " = " (freedom(expanded.effective_degrees_of_freedom)) ")"
        },
        cell(format!("{} eV", rounded(u, u))),
        cell(""),
    ]
}

fn freedom(degrees: Option<f64>) -> String {
    degrees.map_or_else(|| "∞".to_owned(), |degrees| format!("{degrees:.0}"))
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
                        dd { (unbroken(&caution.message)) }
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
    let decimals = decimals_for(combined(result.difference.as_ref(), result));
    let rows = result.budget.iter().zip(shares);
    let mut rows: Vec<Vec<Markup>> = rows.map(|row| contribution(row, decimals)).collect();
    if !rows.is_empty() {
        rows.push(total(result, decimals));
    }
    table(
        "Uncertainty budget: standard uncertainties, Type A or B of the GUM",
        &heads,
        &rows,
    )
}

/// The standard uncertainty of a quantity, else the root of the sum of the rows' squares.
fn combined(quantity: Option<&Quantity>, result: &ResultDocument) -> f64 {
    let sum = || {
        result
            .budget
            .iter()
            .map(|row| row.difference_ev.powi(2))
            .sum::<f64>()
            .sqrt()
    };
    quantity
        .and_then(|quantity| quantity.standard_uncertainty)
        .unwrap_or_else(sum)
}

fn total(result: &ResultDocument, decimals: usize) -> Vec<Markup> {
    let measured = &result.measured;
    let of = |quantity: &Option<Quantity>| {
        let u = quantity.and_then(|quantity| quantity.standard_uncertainty);
        html! { strong { (u.map_or_else(String::new, |u| fixed(u, decimals))) } }
    };
    let freedom_of_all = result
        .expanded
        .as_ref()
        .map(|all| freedom(all.effective_degrees_of_freedom));
    vec![
        html! { strong { "combined" } },
        cell(""),
        of(&measured.valence_edge),
        of(&measured.conduction_edge),
        of(&measured.gap),
        of(&result.difference),
        cell(""),
        cell(freedom_of_all.unwrap_or_default()),
        cell("root of the sum of the squares"),
    ]
}

/// An uncertainty with the decimals of its column; one that they do not show is called less.
fn fixed(u: f64, decimals: usize) -> String {
    let text = format!("{u:.decimals$}");
    let shows = text.chars().any(|c| c.is_ascii_digit() && c != '0');
    if u == 0.0 || decimals == 0 || shows || !u.is_finite() {
        return if u == 0.0 { "0".to_owned() } else { text };
    }
    format!("<0.{:0>decimals$}", 1)
}

fn contribution((row, share): (&BudgetRow, f64), decimals: usize) -> Vec<Markup> {
    let kind = match row.evaluation {
        Evaluation::A => "A",
        Evaluation::B => "B",
    };
    let number = |u: f64| cell(fixed(u, decimals));
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
        cell(freedom(row.degrees_of_freedom)),
        cell(row.basis.as_str()),
    ]
}

/// A share as a length beside its number.
fn bar(share: f64) -> Markup {
    let style = format!("width:{:.1}em", 6.0 * share.clamp(0.0, 1.0));
    html! { span.share aria-hidden="true" style=(style) {} }
}
