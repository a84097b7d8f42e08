//! The only place that computes elementary functions.
