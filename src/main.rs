//! The program: everything is in [`midwire::cli`].

fn main() -> std::process::ExitCode {
    midwire::cli::main()
}
