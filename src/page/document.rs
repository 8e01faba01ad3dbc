//! The parts put together: head, policy, contents, sections.
//!
//! The policy allows no address at all; style and script carry a number made from the page itself, so that nothing written
//! into a title or a label could run even if it were not escaped.

use super::{Report, figures, method, summary, symmetry, tables, verdict};
use maud::{DOCTYPE, Markup, PreEscaped, html};

const STYLE: &str = include_str!("style.css");
const SCRIPT: &str = include_str!("script.js");

/// The whole page.
///
/// # Holds
/// The same report gives the same bytes. There is no address of anything outside the page.
#[must_use]
pub fn html(report: &Report<'_>) -> String {
    let body = body(report);
    let nonce = blake3::hash(body.0.as_bytes()).to_hex();
    let nonce = nonce.as_str();
    let policy = format!(
        "default-src 'none'; img-src data:; style-src 'nonce-{nonce}'; script-src 'nonce-{nonce}'; base-uri 'none'; form-action 'none'"
    );
    let source = &report.document.source;
    html! {
        (DOCTYPE)
        html lang="en" {
            head {
                meta charset="utf-8";
                meta http-equiv="Content-Security-Policy" content=(policy);
                meta name="viewport" content="width=device-width, initial-scale=1";
                meta name="color-scheme" content="light dark";
                meta name="generator" content=(concat!("orbsieve ", env!("CARGO_PKG_VERSION")));
                title { (source.formula) " · " (report.document.geometry.point_group) " · orbital symmetry" }
                style nonce=(nonce) { (PreEscaped(STYLE)) }
            }
            body {
                (PreEscaped(body.0.replace("<style>", &format!("<style nonce=\"{nonce}\">"))))
                script nonce=(nonce) { (PreEscaped(SCRIPT)) }
            }
        }
    }
    .into_string()
}

fn body(report: &Report<'_>) -> Markup {
    let document = report.document;
    let has_transitions = document.transitions.as_ref().is_some_and(|entries| !entries.is_empty());
    let contents = [
        ("#answer", "Answer", true),
        ("#level-diagram", "Levels", report.levels.is_some()),
        ("#orbitals", "Orbitals", !report.pictures.is_empty()),
        ("#symmetry", "Point group", true),
        ("#sets", "Sets", true),
        ("#metal-d", "Metal d", !document.d_block.is_empty()),
        ("#transitions", "Transitions", has_transitions),
        ("#audit", "Audit", true),
        ("#table-orbitals", "All orbitals", true),
        ("#method", "Method", true),
    ];
    html! {
        a.skip href="#main" { "Skip to the answer" }
        header {
            h1 { (formula(&document.source.formula)) span.aside { "orbital symmetry" } }
            (summary::source(document))
            nav aria-label="Contents" {
                ul { @for (target, text, _) in contents.iter().filter(|entry| entry.2) { li { a href=(target) { (text) } } } }
            }
        }
        main #main {
            (summary::answer(report))
            (summary::warnings(document))
            @if let Some(levels) = report.levels {
                section #level-diagram { h2 { "Levels" } figure.levels { (PreEscaped(levels)) } }
            }
            @if !report.pictures.is_empty() { (figures::orbitals(document, report.pictures, report.view)) }
            (symmetry::section(report))
            (tables::sets(document))
            (tables::d_block(document))
            (tables::transitions(document))
            (verdict::section(report))
            (tables::orbitals(document))
            (method::section(report))
        }
        footer { p { "orbsieve " (env!("CARGO_PKG_VERSION")) " · this file needs no network and no script to be read" } }
    }
}

/// Numbers of a sum formula lowered.
fn formula(text: &str) -> Markup {
    html! {
        span { @for sign in text.chars() { @if sign.is_ascii_digit() { sub { (sign) } } @else { (sign) } } }
    }
}
