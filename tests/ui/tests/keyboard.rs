//! The window by keyboard: places can be reached and taken, *back* goes back.

use bubblepoint_ui::{Appearance, Page, Place, Shell};
use bubblepoint_ui_tests::{DESK, PHONE, open, press, press_key, settle};
use slint::{ComponentHandle, platform::Key};
use std::cell::RefCell;
use std::rc::Rc;

pub const CHECKS: &[super::Check] = &[
    ("keyboard::tab_and_space_choose_a_place", tab_and_space_choose_a_place),
    ("keyboard::escape_and_the_back_key_go_back", escape_and_the_back_key_go_back),
    ("keyboard::a_tap_chooses_a_place", a_tap_chooses_a_place),
];

fn chosen_places(window: &bubblepoint_ui::AppWindow) -> Rc<RefCell<Vec<Place>>> {
    let chosen = Rc::new(RefCell::new(Vec::new()));
    let seen = Rc::clone(&chosen);
    window.global::<Shell>().on_navigate(move |place| seen.borrow_mut().push(place));
    chosen
}

fn tab_and_space_choose_a_place() {
    let window = open(DESK, Appearance::Light, 1.0);
    window.global::<Shell>().set_page(Page::Due);
    settle();
    let chosen = chosen_places(&window);
    press_key(&window, Key::Tab);
    press_key(&window, " ");
    press_key(&window, Key::Tab);
    press_key(&window, Key::Return);
    assert_eq!(*chosen.borrow(), [Place::Due, Place::Plant]);
}

fn escape_and_the_back_key_go_back() {
    let window = open(PHONE, Appearance::Light, 1.0);
    let steps = Rc::new(RefCell::new(0));
    let seen = Rc::clone(&steps);
    window.global::<Shell>().on_back(move || *seen.borrow_mut() += 1);
    press_key(&window, Key::Escape);
    press_key(&window, Key::Back);
    assert_eq!(*steps.borrow(), 2);
}

fn a_tap_chooses_a_place() {
    let window = open(PHONE, Appearance::Light, 1.0);
    window.global::<Shell>().set_page(Page::Due);
    settle();
    let chosen = chosen_places(&window);
    press(&window, "Cylinders");
    assert_eq!(*chosen.borrow(), [Place::Cylinders]);
}
