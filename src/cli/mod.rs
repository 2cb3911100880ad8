//! Arguments, printing and progress; one file per command.

mod line;

use std::process::ExitCode;

use clap::{Parser, Subcommand};

/// From a filter requirement, a laminate and a board house's limits to a printed microwave filter.
#[derive(Parser, Debug)]
#[command(version, about, max_term_width = 100)]
struct Arguments {
    /// Results as JSON on stdout.
    #[arg(long, global = true)]
    json: bool,
    /// No progress and no warnings on stderr; errors still show.
    #[arg(long, global = true)]
    quiet: bool,
    #[command(subcommand)]
    command: Command,
}

#[derive(Subcommand, Debug)]
enum Command {
    Line(line::Arguments),
}

/// How a command talks: results to stdout, findings and progress to stderr.
#[derive(Clone, Copy, Debug)]
pub struct Voice {
    /// Results as JSON.
    pub json: bool,
    /// No progress, no warnings.
    pub quiet: bool,
}

/// How a command ended; the exit status of the program.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Ending {
    /// 0: done, every requirement and rule met.
    Done,
    /// 1: done, but a requirement or a rule is not met.
    Unmet,
    /// 2: nothing made.
    NothingMade,
}

impl From<Ending> for ExitCode {
    fn from(ending: Ending) -> ExitCode {
        ExitCode::from(match ending {
            Ending::Done => 0,
            Ending::Unmet => 1,
            Ending::NothingMade => 2,
        })
    }
}

/// Reads the arguments and runs the command.
pub fn run() -> ExitCode {
    let arguments = Arguments::parse();
    let voice = Voice { json: arguments.json, quiet: arguments.quiet };
    match &arguments.command {
        Command::Line(arguments) => line::run(arguments, voice),
    }
    .into()
}
