//! Arguments, progress, exit status: calls the stages, prints what came of them.
//!
//! Results go to standard output, faults and progress to standard error. This folder alone knows a clock, a
//! terminal and the environment, and nothing of them reaches a report or a record.

pub mod arguments;
mod begin;
mod console;
pub mod fault_text;
pub mod find;
mod guard;
pub mod issue;
mod pages;
pub mod pipeline;
mod progress;
mod proofread;
mod schemes;
mod source;
pub mod stages;
mod status;

pub use status::Status;

use arguments::{Arguments, Command};
use clap::Parser;
use console::Console;
use std::ffi::OsString;
use std::process::ExitCode;

/// Runs the command with these arguments, the first of which is the name of the program.
pub fn run(arguments: impl IntoIterator<Item = OsString>) -> ExitCode {
    guard::keep_places_of_panics();
    let arguments = match Arguments::try_parse_from(arguments) {
        Ok(arguments) => arguments,
        Err(refused) => return refuse(&refused),
    };
    let console = Console::new();
    let outcome = guard::guard(|| command(&arguments.command, &console));
    let status = outcome.unwrap_or_else(|defect| {
        console.fault(&format!("halfstep has a defect and stopped: {defect}"));
        Status::Failed
    });
    status.worst(console.close()).into()
}

fn command(command: &Command, console: &Console) -> Status {
    match command {
        Command::Issue(asked) => issue::issue(asked, console),
        Command::Proofread(asked) => proofread::proofread(asked, console),
        Command::Schemes { name } => schemes::schemes(name.as_deref(), console),
        Command::Begin { file } => begin::begin(file, console),
        Command::Completions { shell } => pages::completions(*shell, console),
        Command::Manual { command } => pages::manual(command.as_deref(), console),
    }
}

/// Prints what the reader of arguments has to say: help and version (status 0), or what is wrong (status 2).
fn refuse(refused: &clap::Error) -> ExitCode {
    let printed = refused.print();
    let broken_pipe = |cause: &std::io::Error| cause.kind() == std::io::ErrorKind::BrokenPipe;
    match printed {
        Err(cause) if !broken_pipe(&cause) => Status::Failed.into(),
        _ if refused.use_stderr() => Status::Wrong.into(),
        _ => Status::Well.into(),
    }
}
