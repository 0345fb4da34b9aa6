//! Compiles the screens. Debug information lets the headless tests find elements.
fn main() {
    let release = std::env::var("PROFILE").is_ok_and(|p| p == "release");
    let config = slint_build::CompilerConfiguration::new().with_debug_info(!release);
    if let Err(error) = slint_build::compile_with_config("app.slint", config) {
        eprintln!("{error}");
        std::process::exit(1);
    }
}
