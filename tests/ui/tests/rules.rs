//! Rules of the screens' own text: sizes and colours come from the theme,
//! words stand in the one text widget.

use bubblepoint_ui_tests::{SlintFile, literals, raw_text, screens};

pub const CHECKS: &[super::Check] = &[
    ("rules::colours_and_sizes_come_from_the_theme", colours_and_sizes_come_from_the_theme),
    ("rules::places_use_the_widgets", places_use_the_widgets),
    ("rules::the_rules_find_what_they_look_for", the_rules_find_what_they_look_for),
];

/// The window's own least and first sizes are set before any theme is known.
const WINDOW_SIZES: &[&str] = &["min-width", "min-height", "preferred-width", "preferred-height"];

fn colours_and_sizes_come_from_the_theme() {
    let mut faults = Vec::new();
    for file in screens() {
        if file.name.starts_with("theme/") {
            continue;
        }
        let lines: Vec<&str> = file.text.lines().collect();
        for (line, what) in literals(&file) {
            let window_size = file.name == "app.slint" && WINDOW_SIZES.iter().any(|w| lines[line - 1].trim_start().starts_with(w));
            if !window_size {
                faults.push(format!("ui/{}:{line}: {what}", file.name));
            }
        }
    }
    assert!(faults.is_empty(), "take these from Theme:\n{}", faults.join("\n"));
}

fn places_use_the_widgets() {
    let mut faults = Vec::new();
    for file in screens() {
        if file.name.starts_with("places/") || file.name == "app.slint" {
            faults.extend(raw_text(&file).into_iter().map(|(line, what)| format!("ui/{}:{line}: {what}", file.name)));
        }
    }
    assert!(faults.is_empty(), "use the widgets of ui/widgets for these:\n{}", faults.join("\n"));
}

fn the_rules_find_what_they_look_for() {
    let file = SlintFile {
        name: "places/made_up.slint".into(),
        text: "Rectangle { width: 12px; background: #fff; }\n// 13px in a comment\nText { text: \"14px\"; x: 0px; }\ncolor: white;".into(),
    };
    assert_eq!(literals(&file), vec![(1, "12px".to_owned()), (1, "#fff".to_owned()), (4, "white".to_owned())]);
    assert_eq!(raw_text(&file), vec![(3, "Text".to_owned())]);
}
