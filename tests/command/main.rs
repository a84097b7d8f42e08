//! The real binary: exit status, both streams, files left behind.

mod arguments;
mod begin;
mod pages;
mod paths;
mod streams;
mod tool;
