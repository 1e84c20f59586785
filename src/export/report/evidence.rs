//! Protocols, fits and findings.

use maud::{Markup, html};

use super::table::{Head, cell, table};
use crate::export::words::{typeset, value};
use crate::schema::{FitRecord, ProtocolEdge, ProtocolRecord, Quantity, ResultDocument, Severity};

fn shown(quantity: Option<&Quantity>) -> Markup {
    cell(quantity.map_or_else(String::new, |quantity| typeset(&value(quantity))))
}

/// Every protocol's reading.
pub(super) fn protocols(result: &ResultDocument) -> Markup {
    let heads = [
        Head("Protocol", false),
        Head("Valence onset", true),
        Head("bias", true),
        Head("edge", true),
        Head("Conduction onset", true),
        Head("bias", true),
        Head("edge", true),
        Head("Gap", true),
        Head("Gap of the onsets", true),
    ];
    let rows: Vec<Vec<Markup>> = result.protocols.iter().map(protocol).collect();
    html! {
        (table("Protocols: value ± standard uncertainty of the reading alone (eV)", &heads, &rows))
        @if !rows.is_empty() {
            p.note { "Bias is onset minus edge, as found on replicas of the fitted model. The headline "
                "numbers are those of the protocol marked so." }
        }
    }
}

fn protocol(record: &ProtocolRecord) -> Vec<Markup> {
    let mut row = vec![html! {
        (record.protocol)
        @if record.headline { " " small { "headline" } }
        @if record.model_dependent { " " small { "rests on the computed density" } }
    }];
    for edge in [&record.valence, &record.conduction] {
        let pick = |part: fn(&ProtocolEdge) -> &Quantity| shown(edge.as_ref().map(part));
        row.extend([
            pick(|edge| &edge.onset),
            pick(|edge| &edge.bias),
            pick(|edge| &edge.edge),
        ]);
    }
    row.extend([shown(record.gap.as_ref()), shown(record.onset_gap.as_ref())]);
    row
}

/// Every fit.
pub(super) fn fits(result: &ResultDocument) -> Markup {
    let heads = [
        Head("Side", false),
        Head("Shift (eV)", true),
        Head("Gaussian FWHM (eV)", true),
        Head("Lorentzian FWHM (eV)", true),
        Head("Window (eV)", true),
        Head("Channels", true),
        Head("Statistics", false),
        Head("Reduced χ²", true),
        Head("Runs test, probability", true),
        Head("Other minima, shift (eV)", false),
        Head("Converged", false),
    ];
    let rows: Vec<Vec<Markup>> = result.fits.iter().map(fit).collect();
    table("Fits: shift is measured minus computed", &heads, &rows)
}

fn fit(fit: &FitRecord) -> Vec<Markup> {
    let others: Vec<String> = fit
        .alternatives
        .iter()
        .map(|other| {
            format!(
                "{:.3} (deviance +{:.1})",
                other.shift_ev, other.deviance_above_best
            )
        })
        .collect();
    let others = if others.is_empty() {
        "none".to_owned()
    } else {
        others.join("; ")
    };
    let window = format!("{:.2} to {:.2}", fit.window_start_ev, fit.window_stop_ev);
    vec![
        cell(fit.side.technique()),
        shown(Some(&fit.shift)),
        shown(Some(&fit.gaussian_fwhm)),
        shown(Some(&fit.lorentzian_fwhm)),
        cell(typeset(&window)),
        cell(format!(
            "{} ({} free)",
            fit.channels, fit.degrees_of_freedom
        )),
        cell(fit.statistics.as_str()),
        cell(format!("{:.2}", fit.reduced_chi_square)),
        cell(format!("{:.3}", fit.runs_probability)),
        cell(typeset(&others)),
        cell(format!(
            "{}, {} evaluations",
            if fit.converged { "yes" } else { "no" },
            fit.evaluations
        )),
    ]
}

/// What the rules say of the files.
pub(super) fn findings(result: &ResultDocument) -> Markup {
    let heads = [
        Head("Rule", false),
        Head("Severity", false),
        Head("Where", false),
        Head("What", false),
        Head("Evidence", false),
        Head("Remedy", false),
    ];
    let rows: Vec<Vec<Markup>> = result
        .findings
        .iter()
        .map(|finding| {
            let severity = match finding.severity {
                Severity::Note => "note",
                Severity::Warning => "warning",
                Severity::Error => "error",
            };
            vec![
                cell(finding.rule.as_str()),
                cell(severity),
                cell(format!(
                    "{}:{}:{}",
                    finding.file, finding.line, finding.column
                )),
                cell(finding.message.as_str()),
                cell(finding.evidence.as_str()),
                cell(finding.remedy.as_str()),
            ]
        })
        .collect();
    html! {
        @if rows.is_empty() {
            p { "The rules have nothing to say of the files." }
        }
        (table("Findings: what the rules say of the files", &heads, &rows))
    }
}
