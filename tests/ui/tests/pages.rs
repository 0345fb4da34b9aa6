//! Every page at every size and text size: nothing that acts is too small,
//! unnamed or out of reach, nothing is cut off.

use bubblepoint_ui::{Appearance, Page, Place, Shell};
use bubblepoint_ui_tests::{SIZES, open, sweep};
use slint::ComponentHandle;

pub const CHECKS: &[super::Check] = &[("pages::nothing_is_small_unnamed_or_cut_off", nothing_is_small_unnamed_or_cut_off)];

fn nothing_is_small_unnamed_or_cut_off() {
    let mut faults = Vec::new();
    for size in SIZES {
        for factor in [1.0, 1.5] {
            let window = open(size, Appearance::Light, factor);
            let shell = window.global::<Shell>();
            shell.set_demonstration(true);
            shell.set_place(Place::Due);
            shell.set_page(Page::Due);
            bubblepoint_ui_tests::settle();
            for fault in sweep(&window) {
                faults.push(format!("{} at {factor}: {fault}", size.name));
            }
        }
    }
    assert!(faults.is_empty(), "\n{}", faults.join("\n"));
}
