//! The real binary: exit status, both streams, files left behind.

#![expect(clippy::unwrap_used, reason = "what the helpers of a test cannot do fails the test")]

mod arguments;
mod begin;
mod issue;
mod pages;
mod paths;
mod streams;
mod tool;
