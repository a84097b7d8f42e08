//! The `halfstep` command: hands the arguments to the library and returns its exit status.
fn main() {}
