//! Properties that hold over many examples: orders of convergence, coverage of bounds.

#![allow(
    unreachable_pub,
    clippy::disallowed_methods,
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    clippy::panic,
    clippy::print_stdout,
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::doc_markdown,
    clippy::format_push_string,
    missing_docs,
    dead_code,
    reason = "a test: truths come from the standard library, failures are panics"
)]

#[path = "../common/mod.rs"]
mod common;
mod hidden;
mod orders;
