//! Protocols, fits and findings.

use maud::{Markup, html};

use super::table::{Head, cell, table};
use crate::export::words::{typeset, value};
use crate::schema::{
    Alternative, FitRecord, ProtocolEdge, ProtocolRecord, Quantity, ResultDocument,
};

fn shown(quantity: Option<&Quantity>) -> Markup {
    cell(quantity.map_or_else(String::new, |quantity| {
        if quantity.value == 0.0 && quantity.standard_uncertainty == Some(0.0) {
            return "0".to_owned();
        }
        typeset(&value(quantity))
    }))
}

/// Every protocol's reading: a row for each side and one for the gap.
pub(super) fn protocols(result: &ResultDocument) -> Markup {
    let heads = [
        Head("Protocol", false),
        Head("Of", false),
        Head("Onset, raw", true),
        Head("Bias", true),
        Head("Corrected", true),
    ];
    let rows: Vec<Vec<Markup>> = result.protocols.iter().flat_map(protocol).collect();
    html! {
        (table("Protocols: value ± standard uncertainty of the reading alone (eV)", &heads, &rows))
        @if !rows.is_empty() {
            p.note { "Bias is onset minus edge, as found on replicas of the fitted model. The headline "
                "numbers are those of the protocol marked so." }
        }
    }
}

fn protocol(record: &ProtocolRecord) -> [Vec<Markup>; 3] {
    let name = html! {
        (record.protocol)
        @if record.headline { " " small { "headline" } }
        @if record.model_dependent { " " small { "rests on the computed density" } }
    };
    let side = |of: &str, edge: Option<&ProtocolEdge>| {
        let part = |pick: fn(&ProtocolEdge) -> &Quantity| shown(edge.map(pick));
        let (onset, bias) = (part(|edge| &edge.onset), part(|edge| &edge.bias));
        vec![name.clone(), cell(of), onset, bias, part(|edge| &edge.edge)]
    };
    let (onset_gap, gap) = (shown(record.onset_gap.as_ref()), shown(record.gap.as_ref()));
    [
        side("valence edge", record.valence.as_ref()),
        side("conduction edge", record.conduction.as_ref()),
        vec![name.clone(), cell("gap"), onset_gap, cell(""), gap],
    ]
}

/// Every fit: a column for each.
pub(super) fn fits(result: &ResultDocument) -> Markup {
    let sides = result
        .fits
        .iter()
        .map(|fit| Head(fit.side.technique(), true));
    let heads: Vec<Head> = std::iter::once(Head("Of the fit", false))
        .chain(sides)
        .collect();
    let line = |&(name, show): &(&'static str, Show)| {
        let cells = result.fits.iter().map(|fit| cell(show(fit)));
        std::iter::once(cell(name)).chain(cells).collect()
    };
    let rows: Vec<Vec<Markup>> = LINES.iter().map(line).collect();
    html! {
        @if !result.fits.is_empty() {
            (table("Fits", &heads, &rows))
            p.note { "Chi-square and runs test weigh in that the levels stand at a finite number of "
                "k-points, which moves neighbouring channels together. The residuals in the figure and "
                "the files are over the uncertainty of the data alone, and can be larger." }
        }
    }
}

type Show = fn(&FitRecord) -> String;

const LINES: [(&str, Show); 10] = [
    ("Shift, measured minus computed (eV)", |fit| {
        typeset(&value(&fit.shift))
    }),
    ("Gaussian width, FWHM (eV)", |fit| {
        typeset(&value(&fit.gaussian_fwhm))
    }),
    ("Lorentzian width, FWHM (eV)", |fit| {
        typeset(&value(&fit.lorentzian_fwhm))
    }),
    ("Fitted window (eV)", |fit| {
        typeset(&format!(
            "{:.2} to {:.2}",
            fit.window_start_ev, fit.window_stop_ev
        ))
    }),
    ("Channels; degrees of freedom", |fit| {
        format!("{}; {}", fit.channels, fit.degrees_of_freedom)
    }),
    ("Statistics of the data", |fit| fit.statistics.clone()),
    ("Reduced chi-square", |fit| {
        format!("{:.2}", fit.reduced_chi_square)
    }),
    ("Runs test, probability", |fit| {
        format!("{:.3}", fit.runs_probability)
    }),
    ("Other minima: shift (eV), deviance above the best", others),
    ("Converged; evaluations", |fit| {
        let converged = if fit.converged { "yes" } else { "no" };
        format!("{converged}; {}", fit.evaluations)
    }),
];

fn others(fit: &FitRecord) -> String {
    let other = |at: &Alternative| format!("{:.3}, {:.1}", at.shift_ev, at.deviance_above_best);
    let others: Vec<String> = fit.alternatives.iter().map(other).collect();
    if others.is_empty() {
        return "none".to_owned();
    }
    typeset(&others.join("; "))
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
            let severity = finding.severity.name();
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
