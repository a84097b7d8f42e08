//! The bytes are a whole study.
#![no_main]

use halfstep::fault::{Faults, Sources, show};
use halfstep::study;
use libfuzzer_sys::fuzz_target;

fuzz_target!(|bytes: &[u8]| {
    let Ok(text) = study::source::decode("study.md", bytes.to_vec()) else { return };
    let mut sources = Sources::default();
    let file = sources.add("study.md", text);
    let mut faults = Faults::new();
    study::read(&sources, file, &mut faults);
    show(&faults, &sources, 20, false);
});
