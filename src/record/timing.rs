//! `timing.txt`: what varies from issue to issue. It stands beside the record and is in no digest.

use std::fmt::Write;
use std::time::Duration;

/// How long an issue took, and where.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Timing {
    /// From reading the study to the last byte of its report.
    pub taken: Duration,
    /// How many studies were issued at a time.
    pub jobs: usize,
}

impl Timing {
    /// The name of the file in the report folder.
    pub const FILE: &str = "timing.txt";

    /// The text of the file.
    pub fn text(&self) -> String {
        let processors = std::thread::available_parallelism().map_or(1, std::num::NonZero::get);
        let mut text = String::from("This file varies from issue to issue. No digest covers it.\n");
        // Writing to a string cannot fail.
        let _ = writeln!(text, "seconds taken: {:.3}", self.taken.as_secs_f64());
        let _ = writeln!(text, "studies at a time: {}", self.jobs);
        let _ = writeln!(
            text,
            "machine: {} {}, processors: {processors}",
            std::env::consts::OS,
            std::env::consts::ARCH
        );
        text
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_time_taken_is_named_in_seconds() {
        let text = Timing { taken: Duration::from_millis(1234), jobs: 2 }.text();
        assert!(text.contains("seconds taken: 1.234\n"), "{text}");
        assert!(text.contains("studies at a time: 2\n"), "{text}");
    }
}
