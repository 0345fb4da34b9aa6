//! What the screens show as previews is for drawing them alone: the program
//! sets every property itself, so that no preview stands in its window.

use bubblepoint_ui_tests::{DESK, OFFICE_PAGES, empty, office, screens, settle, texts};
use std::fs;
use std::path::Path;

pub const CHECKS: &[super::Check] = &[
    ("previews::the_program_sets_every_property_of_an_adapter", the_program_sets_every_property_of_an_adapter),
    ("previews::an_empty_store_shows_no_preview", an_empty_store_shows_no_preview),
];

/// Set by the window itself.
const ITS_OWN: &[(&str, &str)] = &[("Shell", "form-factor")];
/// Names that only the previews know.
const INVENTED: &[&str] = &["Fish market", "Mara Lindqvist", "Ibrahim Keller", "Jonas Adeyemi", "Northquay", "Brackwater", "S-204", "8c41"];

fn rust_files(folder: &Path, files: &mut Vec<String>) {
    for entry in fs::read_dir(folder).expect("the sources can be read") {
        let path = entry.expect("the sources can be read").path();
        if path.is_dir() {
            rust_files(&path, files);
        } else {
            files.push(fs::read_to_string(&path).expect("a source can be read"));
        }
    }
}

/// The properties of a file's globals that another side can set: `(global, property)`.
fn properties(text: &str) -> Vec<(String, String)> {
    let mut found = Vec::new();
    let mut global = None;
    for line in text.lines() {
        if let Some(rest) = line.strip_prefix("export global ") {
            global = rest.split_whitespace().next().map(str::to_owned);
        } else if line == "}" {
            global = None;
        }
        let line = line.trim_start();
        let property = line.strip_prefix("in property <").or_else(|| line.strip_prefix("in-out property <"));
        if let (Some(global), Some((_, name))) = (&global, property.and_then(|rest| rest.split_once("> "))) {
            let name: String = name.chars().take_while(|c| c.is_ascii_alphanumeric() || *c == '-').collect();
            found.push((global.clone(), name));
        }
    }
    found
}

fn the_program_sets_every_property_of_an_adapter() {
    let mut files = Vec::new();
    rust_files(&Path::new(env!("CARGO_MANIFEST_DIR")).join("../../src/gui"), &mut files);
    let mut faults = Vec::new();
    let mut looked_at = 0;
    for screen in screens().iter().filter(|file| file.name.starts_with("places/") || file.name == "shell.slint") {
        for (global, property) in properties(&screen.text) {
            looked_at += 1;
            let setter = format!("set_{}", property.replace('-', "_"));
            let is_set = |text: &String| {
                text.contains(&format!("::<{global}>"))
                    && [format!("{setter}("), format!("{setter},")].iter().any(|call| text.contains(call))
            };
            if !files.iter().any(is_set) && !ITS_OWN.contains(&(&*global, &*property)) {
                faults.push(format!("ui/{}: {global}.{property}", screen.name));
            }
        }
    }
    assert!(looked_at > 200, "only {looked_at} properties were found");
    assert!(faults.is_empty(), "never set from Rust, so that their preview would stand in the window:\n{}", faults.join("\n"));
}

fn an_empty_store_shows_no_preview() {
    let folder = tempfile::tempdir().expect("a folder");
    let app = empty();
    let mut faults = Vec::new();
    for page in OFFICE_PAGES {
        let opened = office(&app, DESK, folder.path());
        (page.reach)(&opened);
        settle();
        for text in texts(&opened.window) {
            if INVENTED.iter().any(|name| text.contains(name)) {
                faults.push(format!("{}: {text}", page.name));
            }
        }
    }
    assert!(faults.is_empty(), "{}", faults.join("\n"));
}
