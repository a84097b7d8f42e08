//! The arguments of the command.

use clap::{Args, Parser, Subcommand};
use std::num::{NonZeroU64, NonZeroUsize};
use std::path::PathBuf;

/// Turns Markdown studies with differential equations into reports whose every number carries the bound of its
/// numerical error.
#[derive(Debug, Parser)]
#[command(name = "halfstep", version, about, after_help = EXAMPLES, propagate_version = true)]
#[command(arg_required_else_help = true, disable_help_subcommand = true)]
pub struct Arguments {
    /// What to do.
    #[command(subcommand)]
    pub command: Command,
}

const EXAMPLES: &str = "\
Examples:
  halfstep begin drain.md         write a first study, ready to be issued
  halfstep proofread drain.md     check it without integrating anything
  halfstep issue drain.md         write out/drain/report.html and record.json
  halfstep issue studies          issue every study in a folder

Exit status:
  0  all is well
  1  a criterion is not met or undecided
  2  a study or an argument is wrong
  4  the machine failed (disk, memory), or halfstep has a defect";

/// A command.
#[derive(Debug, Subcommand)]
pub enum Command {
    /// Execute studies and write their reports and records
    #[command(after_help = ISSUE_EXAMPLES)]
    Issue(Issue),
    /// Check studies as far as that needs no integration
    #[command(after_help = "Example:\n  halfstep proofread studies drain.md")]
    Proofread(Proofread),
    /// List the schemes, or show one: coefficients, order, stability
    #[command(after_help = "Examples:\n  halfstep schemes\n  halfstep schemes rk4")]
    Schemes {
        /// The scheme to show
        name: Option<String>,
    },
    /// Write a short commented study that can be issued as it is
    #[command(after_help = "Example:\n  halfstep begin drain.md && halfstep issue drain.md")]
    Begin {
        /// The file to write; it must not exist yet
        file: PathBuf,
    },
    /// Print a completion script for a shell
    #[command(hide = true)]
    Completions {
        /// The shell
        shell: clap_complete::Shell,
    },
    /// Print the manual page in roff
    #[command(hide = true)]
    Manual {
        /// The command whose page is wanted
        command: Option<String>,
    },
}

const ISSUE_EXAMPLES: &str = "\
Examples:
  halfstep issue drain.md                   writes out/drain/report.html
  halfstep issue studies --out reports      keeps the folders below studies
  halfstep issue studies --jobs 1 --quiet   one study at a time, no progress

In a folder, the .md files whose front matter has the key `study` are studies; the
others are passed over, and so are hidden folders and links. A file that is named
must be a study. A study that cannot be issued leaves its last good report as it is.";

/// The arguments of `issue`.
#[derive(Clone, Debug, Args)]
pub struct Issue {
    /// Studies, and folders with studies
    #[arg(required = true, value_name = "PATH")]
    pub paths: Vec<PathBuf>,
    /// The folder for the reports
    #[arg(long, value_name = "DIR", default_value = "out")]
    pub out: PathBuf,
    /// How many studies to issue at a time; as many as there are processors where it is left out
    #[arg(long, value_name = "N")]
    pub jobs: Option<NonZeroUsize>,
    /// Print no progress
    #[arg(long)]
    pub quiet: bool,
    /// A folder with templates of your own; a template that is not there is the built-in one
    #[arg(long, value_name = "DIR")]
    pub templates: Option<PathBuf>,
    /// The largest number of steps of a run
    #[arg(long, value_name = "N", default_value = "100000000")]
    pub limit: NonZeroU64,
}

/// The arguments of `proofread`.
#[derive(Clone, Debug, Args)]
pub struct Proofread {
    /// Studies, and folders with studies
    #[arg(required = true, value_name = "PATH")]
    pub paths: Vec<PathBuf>,
}

#[cfg(test)]
mod tests {
    use super::*;
    use clap::CommandFactory;

    #[test]
    fn the_definitions_hold_together() {
        Arguments::command().debug_assert();
    }

    #[test]
    fn issue_has_the_stated_defaults() {
        let arguments = Arguments::try_parse_from(["halfstep", "issue", "a.md"]).unwrap();
        let Command::Issue(issue) = arguments.command else { panic!("issue") };
        assert_eq!(issue.out, PathBuf::from("out"));
        assert_eq!(issue.limit.get(), 100_000_000);
        assert_eq!((issue.jobs, issue.quiet, issue.templates), (None, false, None));
    }

    #[test]
    fn no_jobs_and_no_steps_are_refused() {
        for wrong in [["--jobs", "0"], ["--limit", "0"], ["--limit", "-1"], ["--jobs", "many"]] {
            let arguments = ["halfstep", "issue", "a.md"].into_iter().chain(wrong);
            assert!(Arguments::try_parse_from(arguments).is_err(), "{wrong:?}");
        }
    }
}
