//! The layers hold: a file that looks up fails, by name and line.

use std::fs;
use std::path::{Path, PathBuf};

/// Which modules each layer may use, besides itself.
const LAYERS: &[(&str, &[&str])] = &[
    ("quantity", &[]),
    ("gas", &["quantity"]),
    ("ledger", &["quantity", "gas"]),
    ("rules", &["quantity", "gas", "ledger"]),
    ("measure", &["quantity", "gas", "ledger"]),
    ("record", &["quantity", "gas", "ledger", "rules", "measure"]),
    ("store", &["quantity", "gas", "ledger", "rules", "measure", "record"]),
    ("print", &["quantity", "gas", "ledger", "rules", "measure", "record"]),
    ("exchange", &["quantity", "gas", "ledger", "rules", "measure", "record"]),
    ("app", &["quantity", "gas", "ledger", "rules", "measure", "record", "store", "print", "exchange"]),
    ("view", &["quantity", "gas", "ledger", "rules", "measure", "record", "store", "print", "exchange", "app"]),
    ("gui", &["quantity", "gas", "ledger", "rules", "measure", "record", "store", "print", "exchange", "app", "view"]),
    ("cli", &["quantity", "gas", "ledger", "rules", "measure", "record", "store", "print", "exchange", "app", "view", "gui"]),
];

/// Crates and words that only the named places may use.
const KEPT_TO: &[(&str, &[&str])] = &[
    ("printpdf", &["src/print/pdf.rs"]),
    ("rusqlite", &["src/store"]),
    ("slint", &["src/gui"]),
    ("bubblepoint_ui", &["src/gui"]),
    ("clap", &["src/cli"]),
];

/// Layers in which no float may appear.
const WITHOUT_FLOAT: &[&str] = &["quantity", "ledger", "rules"];

fn root() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

fn rust_files(folder: &Path) -> Vec<PathBuf> {
    let mut files = Vec::new();
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            files.extend(rust_files(&path));
        } else if path.extension().is_some_and(|ending| ending == "rs") {
            files.push(path);
        }
    }
    files
}

/// Lines that are code: no comments, and nothing from a file's tests on.
fn code(path: &Path) -> Vec<(usize, String)> {
    let text = fs::read_to_string(path).unwrap();
    let tests = text.find("#[cfg(test)]\nmod tests").unwrap_or(text.len());
    text[..tests].lines().enumerate().map(|(number, line)| (number + 1, line.split("//").next().unwrap_or_default().to_owned())).collect()
}

#[test]
fn no_layer_looks_up() {
    let mut faults = Vec::new();
    for (layer, below) in LAYERS {
        let folder = root().join("src").join(layer);
        for file in rust_files(&folder) {
            for (number, line) in code(&file) {
                for (other, _) in LAYERS {
                    let used = line.contains(&format!("crate::{other}::")) || line.contains(&format!("crate::{other};"));
                    if used && other != layer && !below.contains(other) {
                        faults.push(format!("{}:{number}: {layer} uses {other}", file.display()));
                    }
                }
            }
        }
    }
    assert!(faults.is_empty(), "{}", faults.join("\n"));
}

#[test]
fn crates_stay_where_they_belong() {
    let mut faults = Vec::new();
    for file in rust_files(&root().join("src")) {
        let path = file.strip_prefix(root()).unwrap().to_owned();
        for (number, line) in code(&file) {
            for (name, places) in KEPT_TO {
                let used = line.contains(&format!("{name}::")) && !line.contains(&format!("_{name}::"));
                if used && !places.iter().any(|place| path.starts_with(place)) {
                    faults.push(format!("{}:{number}: {name} belongs in {}", path.display(), places.join(", ")));
                }
            }
        }
    }
    assert!(faults.is_empty(), "{}", faults.join("\n"));
}

#[test]
fn exact_layers_have_no_float() {
    let mut faults = Vec::new();
    for layer in WITHOUT_FLOAT {
        for file in rust_files(&root().join("src").join(layer)) {
            for (number, line) in code(&file) {
                if line.contains("f64") || line.contains("f32") {
                    faults.push(format!("{}:{number}: {}", file.display(), line.trim()));
                }
            }
        }
    }
    assert!(faults.is_empty(), "{}", faults.join("\n"));
}

#[test]
fn every_test_file_is_named_in_a_module() {
    let mut faults = Vec::new();
    for file in rust_files(&root().join("tests")) {
        let path = file.strip_prefix(root().join("tests")).unwrap().to_owned();
        if path.starts_with("ui") || path.starts_with("bench") || path == Path::new("main.rs") {
            continue;
        }
        let (name, folder) = match path.file_stem().unwrap().to_str().unwrap() {
            "mod" => {
                let folder = path.parent().unwrap();
                (folder.file_name().unwrap().to_str().unwrap().to_owned(), folder.parent().unwrap().to_owned())
            }
            stem => (stem.to_owned(), path.parent().unwrap().to_owned()),
        };
        let table = root().join("tests").join(if folder == Path::new("") { "main.rs".into() } else { folder.join("mod.rs") });
        let named = fs::read_to_string(&table)
            .is_ok_and(|text| text.lines().any(|line| line.trim_start_matches("pub ").trim() == format!("mod {name};")));
        if !named {
            faults.push(format!("{} is not named in {}", path.display(), table.display()));
        }
    }
    assert!(faults.is_empty(), "{}", faults.join("\n"));
}
