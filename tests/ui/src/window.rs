//! The window, opened headless at a given size.

use bubblepoint_ui::{AppWindow, Appearance, Shell, Theme};
use i_slint_backend_testing::{ElementHandle, ElementQuery, TestingBackend, TestingBackendOptions};
use slint::platform::{PointerEventButton, WindowEvent};
use slint::{ComponentHandle, LogicalPosition, LogicalSize, SharedString};
use std::cell::Cell;
use std::time::Duration;

/// Width and height of a window in logical pixels.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Size {
    pub name: &'static str,
    pub width: u32,
    pub height: u32,
}

pub const PHONE: Size = Size { name: "phone", width: 390, height: 844 };
pub const TABLET_UPRIGHT: Size = Size { name: "tablet-upright", width: 820, height: 1180 };
pub const TABLET: Size = Size { name: "tablet", width: 1180, height: 820 };
pub const DESK: Size = Size { name: "desk", width: 1440, height: 900 };
pub const SIZES: [Size; 4] = [PHONE, TABLET_UPRIGHT, TABLET, DESK];

thread_local! {
    static PREPARED: Cell<bool> = const { Cell::new(false) };
}

/// Sets the headless platform, once per thread. The software renderer draws, so pictures are what a user sees.
///
/// # Panics
/// When the thread has another platform already.
pub fn prepare() {
    if PREPARED.replace(true) {
        return;
    }
    let options = TestingBackendOptions { mock_time: true, threading: false, renderer_name: Some("software".into()) };
    slint::platform::set_platform(Box::new(TestingBackend::new(options))).expect("no other platform is set on this thread");
}

/// Opens the window with the screens' own preview content.
pub fn open(size: Size, appearance: Appearance, text_factor: f32) -> AppWindow {
    prepare();
    let window = AppWindow::new().expect("the headless platform makes windows");
    let theme = window.global::<Theme>();
    theme.set_appearance(appearance);
    theme.set_text_factor(text_factor);
    window.show().expect("the headless platform shows windows");
    window.window().set_size(LogicalSize::new(size.width as f32, size.height as f32));
    settle();
    window
}

/// Lets motion end and change handlers run.
pub fn settle() {
    for _ in 0..4 {
        i_slint_backend_testing::mock_elapsed_time(Duration::from_millis(200));
    }
}

/// Taps the acting element with this label, in its middle, as a finger would.
///
/// # Panics
/// When there is none, with the labels there are.
pub fn press(window: &AppWindow, label: &str) {
    let all = crate::acting(window);
    let Some(found) = all.iter().find(|a| a.label == label) else {
        let labels: Vec<&str> = all.iter().map(|a| a.label.as_str()).collect();
        panic!("nothing to press is labelled \u{201c}{label}\u{201d}; there are {labels:?}");
    };
    click(&found.element);
    settle();
}

/// Writes a text into the field with this label, over what stood there.
///
/// # Panics
/// When there is no such field.
pub fn field(window: &AppWindow, label: &str, text: &str) {
    use i_slint_backend_testing::AccessibleRole;
    let is_field = |element: &ElementHandle| {
        element.accessible_role() == Some(AccessibleRole::TextInput) && element.accessible_label().is_some_and(|l| l == label)
    };
    let all = every_element(window);
    let Some(found) = all.iter().find(|element| is_field(element)) else {
        let labels: Vec<_> = all.iter().filter_map(ElementHandle::accessible_label).collect();
        panic!("no field is labelled \u{201c}{label}\u{201d}; there are {labels:?}");
    };
    click(found);
    settle();
    let before = found.accessible_value().unwrap_or_default().chars().count();
    press_key(window, slint::platform::Key::End);
    for _ in 0..before {
        press_key(window, slint::platform::Key::Backspace);
    }
    for letter in text.chars() {
        press_key(window, letter.to_string());
    }
}

/// Draws a line across the element with this label; points are shares of its width and height.
///
/// # Panics
/// When there is no such element.
pub fn drag(window: &AppWindow, label: &str, points: &[(f32, f32)]) {
    let all = every_element(window);
    let Some(element) = all.iter().find(|e| e.accessible_label().is_some_and(|l| l == label)) else {
        panic!("nothing to draw on is labelled \u{201c}{label}\u{201d}");
    };
    let (at, size) = (element.absolute_position(), element.size());
    let place = |(x, y): (f32, f32)| LogicalPosition::new(at.x + size.width * x, at.y + size.height * y);
    let button = PointerEventButton::Left;
    let win = window.window();
    win.dispatch_event(WindowEvent::PointerMoved { position: place(points[0]) });
    win.dispatch_event(WindowEvent::PointerPressed { position: place(points[0]), button });
    for point in &points[1..] {
        i_slint_backend_testing::mock_elapsed_time(Duration::from_millis(16));
        win.dispatch_event(WindowEvent::PointerMoved { position: place(*point) });
    }
    i_slint_backend_testing::mock_elapsed_time(Duration::from_millis(16));
    win.dispatch_event(WindowEvent::PointerReleased { position: place(points[points.len() - 1]), button });
    settle();
}

fn click(element: &ElementHandle) {
    element.mock_single_click(PointerEventButton::Left);
}

/// Presses and releases one key.
pub fn press_key(window: &AppWindow, text: impl Into<SharedString>) {
    let text = text.into();
    window.window().dispatch_event(WindowEvent::KeyPressed { text: text.clone() });
    window.window().dispatch_event(WindowEvent::KeyReleased { text });
    settle();
}

pub(crate) fn every_element(window: &AppWindow) -> Vec<ElementHandle> {
    ElementQuery::from_root(window).find_all()
}

/// Marks the window as that of a demonstration, as the program does.
pub fn mark_demonstration(window: &AppWindow) {
    let shell = window.global::<Shell>();
    shell.set_demonstration(true);
    shell.set_demonstration_words(bubblepoint::view::words::demonstration().into());
}
