//! The program: parses its arguments and does what they say.

fn main() -> std::process::ExitCode {
    bubblepoint::cli::main()
}
