//! The `halfstep` command: hands the arguments to the library and returns its exit status.

fn main() -> std::process::ExitCode {
    halfstep::cli::run(std::env::args_os())
}
