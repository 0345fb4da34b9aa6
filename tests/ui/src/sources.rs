//! The screens' own text, for the rules a compiler does not check.

use std::fs;
use std::path::{Path, PathBuf};

/// One `.slint` file of the screens.
pub struct SlintFile {
    /// Path below `ui/`.
    pub name: String,
    pub text: String,
}

/// Every `.slint` file below `ui/`.
///
/// # Panics
/// When the folder cannot be read: the tests run from the project's own tree.
pub fn screens() -> Vec<SlintFile> {
    let root = Path::new(env!("CARGO_MANIFEST_DIR")).join("../../ui");
    let mut files = Vec::new();
    let mut folders = vec![root.clone()];
    while let Some(folder) = folders.pop() {
        for entry in fs::read_dir(&folder).expect("the screens' folder can be read") {
            let path: PathBuf = entry.expect("the screens' folder can be read").path();
            if path.is_dir() {
                folders.push(path);
            } else if path.extension().is_some_and(|e| e == "slint") {
                let name = path.strip_prefix(&root).expect("below ui").to_string_lossy().replace('\\', "/");
                files.push(SlintFile { name, text: fs::read_to_string(&path).expect("a screen can be read") });
            }
        }
    }
    files.sort_by(|a, b| a.name.cmp(&b.name));
    files
}

/// A line without its comment and its texts.
fn bare(line: &str) -> String {
    let mut out = String::new();
    let mut quoted = false;
    let mut before = ' ';
    for c in line.chars() {
        if c == '"' && before != '\\' {
            quoted = !quoted;
        } else if !quoted {
            if c == '/' && before == '/' {
                out.pop();
                return out;
            }
            out.push(c);
        }
        before = c;
    }
    out
}

/// Lines that name a colour or a size of their own: `(line, what)`. Zero is no size,
/// and `1px` is how Slint turns a number into a length.
pub fn literals(file: &SlintFile) -> Vec<(usize, String)> {
    let mut found = Vec::new();
    for (number, line) in file.text.lines().enumerate() {
        let line = bare(line);
        for word in line.split(|c: char| !(c.is_ascii_alphanumeric() || matches!(c, '#' | '.' | '_' | '-'))) {
            let colour = word.strip_prefix('#').is_some_and(|hex| hex.len() >= 3 && hex.chars().all(|c| c.is_ascii_hexdigit()));
            let size = ["px", "phx", "pt", "rem", "cm", "mm"].iter().any(|unit| {
                word.strip_suffix(unit)
                    .is_some_and(|n| n != "0" && n != "1" && !n.is_empty() && n.trim_start_matches('-').parse::<f32>().is_ok())
            });
            let named = matches!(word, "transparent" | "black" | "white" | "red" | "green" | "blue" | "gray" | "grey" | "yellow");
            if colour || size || named {
                found.push((number + 1, word.to_owned()));
            }
        }
    }
    found
}

/// Lines that use Slint's own text, button or field where our widgets must stand.
pub fn raw_text(file: &SlintFile) -> Vec<(usize, String)> {
    let mut found = Vec::new();
    for (number, line) in file.text.lines().enumerate() {
        let line = bare(line);
        for name in ["Text", "TextInput", "LineEdit", "TextEdit", "SpinBox", "ComboBox", "TouchArea", "PopupWindow"] {
            if line.split(|c: char| !(c.is_alphanumeric() || c == '-')).collect::<Vec<_>>().contains(&name) && line.contains('{') {
                found.push((number + 1, name.to_owned()));
            }
        }
    }
    found
}
