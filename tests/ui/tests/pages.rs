//! Every page at every size and text size: nothing that acts is too small,
//! unnamed or out of reach, nothing is cut off.

use bubblepoint_ui::{Appearance, Line, Page, Place, Shell, VisitAdapter};
use bubblepoint_ui_tests::{DESK, Fault, PHONE, SIZES, Size, acting, mark_demonstration, open, scenes, settle, sweep};
use slint::{ComponentHandle, ModelRc, VecModel};

pub const CHECKS: &[super::Check] = &[
    ("pages::the_sweep_finds_what_it_looks_for", the_sweep_finds_what_it_looks_for),
    ("pages::nothing_is_small_unnamed_or_cut_off", nothing_is_small_unnamed_or_cut_off),
    ("pages::places_are_a_bar_on_a_phone_and_a_rail_elsewhere", places_are_a_bar_on_a_phone_and_a_rail_elsewhere),
];

/// A window too narrow, and a name too long, must be found out.
fn the_sweep_finds_what_it_looks_for() {
    let narrow = Size { name: "narrow", width: 120, height: 300 };
    let window = open(narrow, Appearance::Light, 1.5);
    let faults = sweep(&window);
    assert!(faults.iter().any(|f| matches!(f, Fault::OutsideWindow { .. })), "nothing is found outside: {faults:?}");
    assert!(faults.iter().any(|f| matches!(f, Fault::MainActionOutOfView { .. })), "no main action is found below: {faults:?}");

    let window = open(PHONE, Appearance::Light, 1.0);
    let long = "A very long name of a very long appliance that no row can hold on one line".repeat(2);
    let line = Line { name: long.clone().into(), facts: long.repeat(2).into(), state: "state".into(), ..Line::default() };
    window.global::<VisitAdapter>().set_entries(ModelRc::new(VecModel::from(vec![line])));
    settle();
    let cut: Vec<String> =
        sweep(&window).into_iter().filter_map(|f| if let Fault::CutOff { text, .. } = f { Some(text) } else { None }).collect();
    assert_eq!(cut, [long.clone(), long.repeat(2)], "one line and two lines cut off");
}

fn nothing_is_small_unnamed_or_cut_off() {
    let mut faults = Vec::new();
    let mut looked_at = 0;
    for scene in scenes() {
        for size in SIZES {
            for factor in [1.0, 1.5] {
                let window = open(size, Appearance::Light, factor);
                mark_demonstration(&window);
                (scene.set)(&window);
                settle();
                looked_at += acting(&window).len();
                for fault in sweep(&window) {
                    faults.push(format!("{} on a {} at {factor}: {fault}", scene.name, size.name));
                }
            }
        }
    }
    assert!(looked_at > 20 * scenes().count(), "only {looked_at} elements that act were found");
    assert!(faults.is_empty(), "{} faults:\n{}", faults.len(), faults.join("\n"));
}

fn places_are_a_bar_on_a_phone_and_a_rail_elsewhere() {
    for size in SIZES {
        let window = open(size, Appearance::Light, 1.0);
        let shell = window.global::<Shell>();
        shell.set_page(Page::Due);
        shell.set_place(Place::Plant);
        settle();
        let places: Vec<_> = acting(&window).into_iter().filter(|a| a.kind == "PlaceButton").collect();
        assert_eq!(places.iter().map(|p| p.label.as_str()).collect::<Vec<_>>(), ["Due", "Plant", "Cylinders", "Account", "Setup"]);
        let (first, last) = (places[0].element.absolute_position(), places[4].element.absolute_position());
        if size == PHONE {
            assert!(first.y == last.y && first.y + 65.0 > size.height as f32, "{}: a bar at the foot", size.name);
        } else {
            assert!(first.x == 0.0 && last.x == 0.0 && last.y > first.y, "{}: a rail at the left", size.name);
        }
    }
    let window = open(DESK, Appearance::Light, 1.0);
    assert_eq!(window.global::<Shell>().get_form_factor(), bubblepoint_ui::FormFactor::Desk);
}
