//! What must hold on every page: whatever acts is large enough, named and
//! within the window, and no text is cut off.

use crate::window::every_element;
use bubblepoint_ui::AppWindow;
use i_slint_backend_testing::{AccessibleRole, ElementHandle};
use slint::ComponentHandle;
use std::fmt;

/// The least width and height of anything that acts, in logical pixels.
const TARGET: f32 = 48.0;
/// What `Words` says to a screen reader when its text has too little room.
const CUT_OFF: &str = "text cut off";
/// Half a pixel of rounding is no fault.
const SLACK: f32 = 0.5;

/// Something that acts when pressed.
pub struct Acting {
    pub label: String,
    pub role: AccessibleRole,
    pub kind: String,
    pub element: ElementHandle,
}

/// What is wrong with one element of a page.
#[derive(Debug, Clone, PartialEq)]
pub enum Fault {
    TooSmall { what: String, width: f32, height: f32 },
    Unnamed { what: String, x: f32, y: f32 },
    OutsideWindow { what: String, left: f32, right: f32 },
    MainActionOutOfView { what: String, bottom: f32 },
    CutOff { text: String, width: f32, height: f32 },
}

impl fmt::Display for Fault {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::TooSmall { what, width, height } => write!(f, "{what} is {width} by {height}, less than {TARGET}"),
            Self::Unnamed { what, x, y } => write!(f, "{what} at {x}, {y} has no label"),
            Self::OutsideWindow { what, left, right } => write!(f, "{what} lies from {left} to {right}, outside the window"),
            Self::MainActionOutOfView { what, bottom } => write!(f, "main action {what} ends at {bottom}, below the window"),
            Self::CutOff { text, width, height } => write!(f, "\u{201c}{text}\u{201d} is cut off in {width} by {height}"),
        }
    }
}

fn acts(role: AccessibleRole) -> bool {
    matches!(
        role,
        AccessibleRole::Button
            | AccessibleRole::Checkbox
            | AccessibleRole::Combobox
            | AccessibleRole::ListItem
            | AccessibleRole::RadioButton
            | AccessibleRole::Slider
            | AccessibleRole::Spinbox
            | AccessibleRole::Switch
            | AccessibleRole::Tab
            | AccessibleRole::TextInput
    )
}

/// Everything on the page that acts.
pub fn acting(window: &AppWindow) -> Vec<Acting> {
    every_element(window)
        .into_iter()
        .filter_map(|element| {
            let role = element.accessible_role().filter(|role| acts(*role))?;
            Some(Acting {
                label: element.accessible_label().unwrap_or_default().to_string(),
                role,
                kind: element.type_name().unwrap_or_default().to_string(),
                element,
            })
        })
        .collect()
}

/// Every text of the page, as a screen reader says it.
pub fn texts(window: &AppWindow) -> Vec<String> {
    every_element(window).into_iter().filter_map(|element| element.accessible_label()).map(|label| label.to_string()).collect()
}

/// All faults of the page that is shown.
pub fn sweep(window: &AppWindow) -> Vec<Fault> {
    let size = window.window().size().to_logical(window.window().scale_factor());
    let mut faults = Vec::new();
    for one in acting(window) {
        let (extent, at) = (one.element.size(), one.element.absolute_position());
        let what = format!("{} \u{201c}{}\u{201d}", one.kind, one.label);
        if extent.width + SLACK < TARGET || extent.height + SLACK < TARGET {
            faults.push(Fault::TooSmall { what: what.clone(), width: extent.width, height: extent.height });
        }
        if one.label.trim().is_empty() {
            faults.push(Fault::Unnamed { what: what.clone(), x: at.x, y: at.y });
        }
        if at.x < -SLACK || at.x + extent.width > size.width + SLACK {
            faults.push(Fault::OutsideWindow { what: what.clone(), left: at.x, right: at.x + extent.width });
        }
        if one.kind == "MainButton" && at.y + extent.height > size.height + SLACK {
            faults.push(Fault::MainActionOutOfView { what, bottom: at.y + extent.height });
        }
    }
    for element in every_element(window) {
        if element.accessible_description().is_some_and(|said| said == CUT_OFF) {
            let extent = element.size();
            faults.push(Fault::CutOff {
                text: element.accessible_label().unwrap_or_default().to_string(),
                width: extent.width,
                height: extent.height,
            });
        }
    }
    faults
}
