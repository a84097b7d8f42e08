//! The first byte chooses a kind of block, the others are its body.
#![no_main]

use halfstep::fault::{Faults, Sources, show};
use halfstep::study;
use libfuzzer_sys::fuzz_target;

fuzz_target!(|bytes: &[u8]| {
    let Some((kind, body)) = bytes.split_first() else { return };
    let Ok(body) = std::str::from_utf8(body) else { return };
    let kind = ["model a", "run a", "chart a", "table a", "criteria"][usize::from(*kind) % 5];
    let mut sources = Sources::default();
    let file = sources.add("study.md", format!("---\nstudy: x\n---\n~~~~~~{kind}\n{body}\n~~~~~~\n"));
    let mut faults = Faults::new();
    study::read(&sources, file, &mut faults);
    show(&faults, &sources, 20, false);
});
