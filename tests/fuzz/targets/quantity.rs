//! The bytes are the text of a quantity.
#![no_main]

use halfstep::fault::{Faults, FileId, Span};
use halfstep::study::Text;
use halfstep::study::block::quantity::read_quantity;
use libfuzzer_sys::fuzz_target;

fuzz_target!(|value: String| {
    let at = Span::new(FileId(0), 0, value.len());
    let text = Text { value, at, exact: true };
    let mut faults = Faults::new();
    // A text is either read or refused with a fault.
    assert_eq!(read_quantity(&text, &mut faults).is_none(), faults.any_error());
});
