//! Tables that scroll in their own container.

use maud::{Markup, html};

/// A column's heading, and whether numbers stand under it.
pub(super) struct Head(pub(super) &'static str, pub(super) bool);

/// A table whose rows are named by their first cell; nothing where it has no rows.
pub(super) fn table(caption: &str, heads: &[Head], rows: &[Vec<Markup>]) -> Markup {
    if rows.is_empty() {
        return html! {};
    }
    html! {
        div.scroll tabindex="0" role="region" aria-label=(caption) {
            table {
                caption { (caption) }
                thead { tr {
                    @for Head(name, number) in heads {
                        th scope="col" class=[number.then_some("number")] { (name) }
                    }
                } }
                tbody { @for row in rows { (line(heads, row)) } }
            }
        }
    }
}

fn line(heads: &[Head], row: &[Markup]) -> Markup {
    html! {
        tr {
            @for (index, (cell, Head(_, number))) in row.iter().zip(heads).enumerate() {
                @if index == 0 {
                    th scope="row" { (cell) }
                } @else {
                    td class=[number.then_some("number")] { (cell) }
                }
            }
        }
    }
}

/// A cell of text.
pub(super) fn cell(text: impl Into<String>) -> Markup {
    let text: String = text.into();
    html! { (text) }
}
