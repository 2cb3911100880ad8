//! Arguments, printing and progress; one file per command.

mod advise;
mod check;
mod dimension;
mod fresh_file;
mod line;
mod list;
mod make;
mod new;
mod predict;
pub mod problems;
mod read;
mod section;
mod section_file;
mod solve;
mod table;

use std::io::IsTerminal;
use std::io::Write;
use std::process::ExitCode;
use std::time::Duration;

use clap::{CommandFactory, Parser, Subcommand};
use indicatif::ProgressBar;

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
    New(new::New),
    Make(make::MakeArguments),
    Dimension(dimension::Arguments),
    Draw(make::DrawArguments),
    Predict(predict::Arguments),
    Advise(advise::Arguments),
    Solve(solve::Arguments),
    Line(line::Arguments),
    Check(check::Arguments),
    List(list::List),
    /// Writes the completion script of a shell to stdout.
    Completions {
        /// The shell.
        shell: clap_complete::Shell,
    },
}

/// How a command talks: results to stdout, findings and progress to stderr.
#[derive(Clone, Copy, Debug)]
pub struct Voice {
    /// Results as JSON.
    pub json: bool,
    /// No progress, no warnings.
    pub quiet: bool,
}

impl Voice {
    /// A line for people on stderr; nothing when quiet.
    pub fn say(self, line: &str) {
        if !self.quiet && !self.json {
            // When stderr is gone there is nobody left to tell.
            let _ = writeln!(std::io::stderr(), "{line}");
        }
    }

    /// Shows on a terminal what a long work is at.
    pub fn progress(self, at: &'static str) -> ProgressBar {
        if self.quiet || self.json || !std::io::stderr().is_terminal() {
            return ProgressBar::hidden();
        }
        let bar = ProgressBar::new_spinner().with_message(at);
        bar.enable_steady_tick(Duration::from_millis(100));
        bar
    }
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
    let ending = match &arguments.command {
        Command::New(arguments) => new::run(arguments, voice),
        Command::Make(arguments) => make::run_make(arguments, voice),
        Command::Dimension(arguments) => dimension::run(arguments, voice),
        Command::Draw(arguments) => make::run_draw(arguments, voice),
        Command::Predict(arguments) => predict::run(arguments, voice),
        Command::Advise(arguments) => advise::run(arguments, voice),
        Command::Solve(arguments) => solve::run(arguments, voice),
        Command::Line(arguments) => line::run(arguments, voice),
        Command::Check(arguments) => check::run(arguments, voice),
        Command::List(arguments) => list::run(arguments, voice),
        Command::Completions { shell } => {
            let mut script = Vec::new();
            clap_complete::generate(*shell, &mut Arguments::command(), "stripwright", &mut script);
            results(&String::from_utf8_lossy(&script))
        }
    };
    ending.into()
}

/// Writes results to stdout. A reader that stops listening (a pipe into `head`) is no failure; a full disk is.
pub fn results(text: &str) -> Ending {
    let mut out = std::io::stdout().lock();
    match out.write_all(text.as_bytes()).and_then(|()| out.flush()) {
        Ok(()) => Ending::Done,
        Err(error) if error.kind() == std::io::ErrorKind::BrokenPipe => Ending::Done,
        Err(error) => {
            // Where stderr fails too there is nobody left to tell.
            let _ = writeln!(std::io::stderr(), "error: the results cannot be written: {error}");
            Ending::NothingMade
        }
    }
}
