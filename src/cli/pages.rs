//! Completion scripts and manual pages, made from the definitions of the arguments.

use super::arguments::Arguments;
use super::console::Console;
use super::status::Status;
use clap::CommandFactory;
use clap_complete::Shell;

/// Prints the completion script for a shell.
pub(super) fn completions(shell: Shell, console: &Console) -> Status {
    let mut script = Vec::new();
    clap_complete::generate(shell, &mut Arguments::command(), "halfstep", &mut script);
    console.print(&String::from_utf8_lossy(&script));
    Status::Well
}

/// Prints the manual page of the program, or of one of its commands.
pub(super) fn manual(command: Option<&str>, console: &Console) -> Status {
    let mut program = Arguments::command();
    program.build();
    let of = match command {
        None => Some(&program),
        Some(name) => program.find_subcommand(name),
    };
    let Some(of) = of else {
        console.fault(&format!("there is no command `{}`", command.unwrap_or_default()));
        return Status::Wrong;
    };
    let mut page = Vec::new();
    if let Err(cause) = clap_mangen::Man::new(of.clone()).render(&mut page) {
        console.fault(&format!("cannot make the manual page: {cause}"));
        return Status::Failed;
    }
    console.print(&String::from_utf8_lossy(&page));
    Status::Well
}
