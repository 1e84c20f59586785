//! Where the numbers come from.

use maud::{Markup, html};

use super::table::{Head, cell, table};
use crate::schema::{EdgeLocation, ResultDocument};

/// The files read, the edges in them, and what was done.
pub(super) fn provenance(result: &ResultDocument) -> Markup {
    let provenance = &result.provenance;
    let heads = [
        Head("File", false),
        Head("Bytes", true),
        Head("SHA-256", false),
    ];
    let rows: Vec<Vec<Markup>> = provenance
        .sources
        .iter()
        .map(|source| {
            vec![
                cell(source.file.as_str()),
                cell(source.size_bytes.to_string()),
                html! { code { (source.sha256) } },
            ]
        })
        .collect();
    html! {
        section {
            h2 { "Where the numbers come from" }
            (table("Files read", &heads, &rows))
            (edges(result))
            @if !provenance.steps.is_empty() {
                h3 { "Steps" }
                ol.steps { @for step in &provenance.steps {
                    li { strong { (step.action) } ": " (step.detail) }
                } }
            }
            p.note { "Written by " (provenance.program) ". The file result.json beside this page holds "
                "every number unrounded and the hashes of the files written with it." }
        }
    }
}

fn edges(result: &ResultDocument) -> Markup {
    let computed = &result.computed;
    let heads = [
        Head("Computed edge", false),
        Head("Energy, computed scale (eV)", true),
        Head("k-point", false),
        Head("Band", true),
        Head("Spin", true),
        Head("Line of the table", true),
    ];
    let row = |name: &str, edge: &EdgeLocation| {
        let index = |index: Option<i64>| cell(index.map_or_else(String::new, |i| i.to_string()));
        vec![
            cell(name),
            cell(format!("{:.4}", edge.energy_ev).replace('-', "\u{2212}")),
            cell(edge.k.as_str()),
            index(edge.band),
            index(edge.spin),
            cell(edge.line.map_or_else(String::new, |line| line.to_string())),
        ]
    };
    let rows = [
        row("highest occupied", &computed.valence_edge),
        row("lowest empty", &computed.conduction_edge),
    ];
    html! {
        (table("Computed edges in the table of levels", &heads, &rows))
        @if computed.reordered_levels > 0 {
            p.note { "Pairs of levels that the quasiparticle energies reorder against the mean field: "
                (computed.reordered_levels) "." }
        }
    }
}
