//! The `stripwright` program: everything is in the library, this only starts it.

fn main() -> std::process::ExitCode {
    stripwright::cli::run()
}
