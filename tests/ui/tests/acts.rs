//! The open action by touch, mouse and keyboard: what is typed, chosen and
//! drawn arrives on the other side, as the fingers meant it.

use bubblepoint_ui::{
    Act, Appearance, ChargeAdapter, ChargeChoice, CloseAdapter, Page, PressureAdapter, Shell, Signer, VisitAdapter, WhenAdapter,
};
use bubblepoint_ui_tests::{PHONE, TABLET, acting, drag, open, press, press_key, settle};
use slint::{ComponentHandle, platform::Key};
use std::cell::RefCell;
use std::rc::Rc;

pub const CHECKS: &[super::Check] = &[
    ("acts::figures_are_typed_on_the_pad_and_on_a_keyboard", figures_are_typed_on_the_pad_and_on_a_keyboard),
    ("acts::typing_goes_on_after_a_choice", typing_goes_on_after_a_choice),
    ("acts::choices_are_folded_away_on_a_phone", choices_are_folded_away_on_a_phone),
    ("acts::a_signature_is_drawn_by_dragging", a_signature_is_drawn_by_dragging),
    (
        "acts::an_action_covers_a_phone_and_stands_beside_the_visit_elsewhere",
        an_action_covers_a_phone_and_stands_beside_the_visit_elsewhere,
    ),
    ("acts::closing_takes_two_steps", closing_takes_two_steps),
    ("acts::what_stands_in_the_way_is_in_view_on_a_phone", what_stands_in_the_way_is_in_view_on_a_phone),
    ("acts::a_pipe_colder_than_ice_can_be_typed", a_pipe_colder_than_ice_can_be_typed),
    ("acts::the_head_says_when_and_by_whom", the_head_says_when_and_by_whom),
];

fn keys_of_charge(window: &bubblepoint_ui::AppWindow) -> Rc<RefCell<String>> {
    let typed = Rc::new(RefCell::new(String::new()));
    let seen = Rc::clone(&typed);
    window.global::<ChargeAdapter>().on_key(move |key| {
        seen.borrow_mut().push_str(&key);
        seen.borrow_mut().push(' ');
    });
    typed
}

fn show(window: &bubblepoint_ui::AppWindow, act: Act) {
    window.global::<Shell>().set_page(Page::Visit);
    window.global::<VisitAdapter>().set_act(act);
    settle();
}

fn figures_are_typed_on_the_pad_and_on_a_keyboard() {
    let window = open(PHONE, Appearance::Light, 1.0);
    show(&window, Act::Charge);
    let typed = keys_of_charge(&window);
    for key in ["1", "9", "decimal sign", "6", "0", "take back one digit"] {
        press(&window, key);
    }
    assert_eq!(*typed.borrow(), "1 9 . 6 0 back ");
    typed.borrow_mut().clear();
    for key in ["2", "4", ",", "5", ".", "x"] {
        press_key(&window, key);
    }
    press_key(&window, Key::Backspace);
    assert_eq!(*typed.borrow(), "2 4 . 5 . back ", "both decimal signs, nothing that is no figure");
}

fn typing_goes_on_after_a_choice() {
    let window = open(TABLET, Appearance::Light, 1.0);
    show(&window, Act::Charge);
    let typed = keys_of_charge(&window);
    let chosen = Rc::new(RefCell::new(Vec::new()));
    let seen = Rc::clone(&chosen);
    window.global::<ChargeAdapter>().on_choose_weighing(move |what, key| seen.borrow_mut().push(format!("{what:?} {key}")));
    press(&window, "gross before kg, 24.180, last 24.18");
    press_key(&window, "7");
    press_key(&window, Key::Tab);
    press_key(&window, "8");
    assert_eq!(*chosen.borrow(), ["Reading before"]);
    assert_eq!(*typed.borrow(), "7 8 ", "digits reach the reading wherever the focus is");
}

fn choices_are_folded_away_on_a_phone() {
    let window = open(PHONE, Appearance::Light, 1.0);
    show(&window, Act::Charge);
    let chosen = Rc::new(RefCell::new(Vec::new()));
    let seen = Rc::clone(&chosen);
    window.global::<ChargeAdapter>().on_choose(move |what, key| seen.borrow_mut().push((what, key.to_string())));
    assert!(!acting(&window).iter().any(|a| a.label == "seasonal return"));
    press(&window, "leak, liquid, to full charge, change");
    press(&window, "seasonal return");
    assert_eq!(*chosen.borrow(), [(ChargeChoice::Purpose, "seasonal".to_owned())]);
    assert!(!acting(&window).iter().any(|a| a.label == "decimal sign"), "the pad gives way to the choices");
    press(&window, "gross after kg, 19.64");
    assert!(acting(&window).iter().any(|a| a.label == "decimal sign"), "a reading brings the pad back");
}

fn a_signature_is_drawn_by_dragging() {
    for (factor, second_page) in [(1.0, false), (1.5, true)] {
        let window = open(PHONE, Appearance::Light, factor);
        let close = window.global::<CloseAdapter>();
        close.set_signing(true);
        let points = Rc::new(RefCell::new(Vec::new()));
        let lifts = Rc::new(RefCell::new(0));
        let (seen, lifted) = (Rc::clone(&points), Rc::clone(&lifts));
        close.on_point(move |who, x, y, first| seen.borrow_mut().push((who, x, y, first)));
        close.on_lifted(move |_| *lifted.borrow_mut() += 1);
        show(&window, Act::Close);
        drag(&window, "technician, Mara Lindqvist, not signed yet", &[(0.1, 0.1), (0.5, 0.9), (0.9, 0.2)]);
        let drawn = points.borrow().clone();
        assert_eq!(*lifts.borrow(), 1);
        assert!(drawn.len() >= 3, "{drawn:?}");
        assert_eq!(drawn.iter().filter(|p| p.3).count(), 1, "one stroke begins once");
        assert!(drawn.iter().all(|p| p.0 == Signer::Technician && (0..=3000).contains(&p.1) && (0..=1000).contains(&p.2)));
        let (first, last) = (drawn[0], drawn[drawn.len() - 1]);
        assert!((280..=320).contains(&first.1) && (80..=120).contains(&first.2), "begins where the finger came down: {first:?}");
        assert!((2680..=2720).contains(&last.1) && (180..=220).contains(&last.2), "ends where it left, nothing scrolled: {last:?}");
        assert!(close.get_technician_strokes().starts_with('M'));
        press(&window, "clear, technician");
        assert_eq!(close.get_technician_strokes(), "");
        if second_page {
            press(&window, "On to the representative");
        }
        drag(&window, "representative, , not signed yet", &[(0.2, 0.5), (0.8, 0.5)]);
        assert!(points.borrow().iter().any(|p| p.0 == Signer::Representative));
    }
}

fn an_action_covers_a_phone_and_stands_beside_the_visit_elsewhere() {
    let close = "Close visit";
    let window = open(PHONE, Appearance::Light, 1.0);
    show(&window, Act::Charge);
    assert!(!acting(&window).iter().any(|a| a.label == close));
    let window = open(TABLET, Appearance::Light, 1.0);
    show(&window, Act::Charge);
    assert!(acting(&window).iter().any(|a| a.label == close));
    assert_eq!(acting(&window).iter().filter(|a| a.kind == "MainButton").count(), 1, "one next step at a time");
}

fn closing_takes_two_steps() {
    let window = open(PHONE, Appearance::Light, 1.0);
    let closed = Rc::new(RefCell::new(0));
    let seen = Rc::clone(&closed);
    let close = window.global::<CloseAdapter>();
    close.on_close_visit(move || *seen.borrow_mut() += 1);
    close.set_ready(true);
    show(&window, Act::Close);
    press(&window, "On to the signatures");
    assert_eq!(*closed.borrow(), 0);
    press(&window, "Close visit");
    assert_eq!(*closed.borrow(), 1);
}

fn what_stands_in_the_way_is_in_view_on_a_phone() {
    let window = open(PHONE, Appearance::Light, 1.0);
    let charge = window.global::<ChargeAdapter>();
    let mut weighing = charge.get_weighing();
    weighing.gap_words = "S-204 weighed 24.18 kg when last known; this is 0.35 kg less.".into();
    charge.set_weighing(weighing.clone());
    show(&window, Act::Charge);
    let has = |label: &str| acting(&window).iter().any(|a| a.label == label);
    assert!(has("decimal sign"), "figures can still be typed");
    press(&window, "The cylinder weighs otherwise: say why");
    assert!(!has("decimal sign"), "the pad gives way");
    let all = acting(&window);
    let of = |label: &str| all.iter().find(|a| a.label == label).unwrap_or_else(|| panic!("no {label}"));
    let (last, save) = (&of("do not know").element, &of("Save charge").element);
    assert!(last.absolute_position().y + last.size().height <= save.absolute_position().y, "the whole question is in view");
    // An answer brings the pad back.
    press(&window, "used elsewhere");
    weighing.gap_reason = "used elsewhere".into();
    charge.set_weighing(weighing);
    settle();
    assert!(has("decimal sign") && !has("The cylinder weighs otherwise: say why"));
}

fn a_pipe_colder_than_ice_can_be_typed() {
    let window = open(PHONE, Appearance::Light, 1.0);
    show(&window, Act::Pressure);
    let typed = Rc::new(RefCell::new(String::new()));
    let seen = Rc::clone(&typed);
    window.global::<PressureAdapter>().on_key(move |key| seen.borrow_mut().push_str(&key));
    press(&window, "above or below nought");
    press(&window, "7");
    press_key(&window, "-");
    assert_eq!(*typed.borrow(), "-7-");
    show(&window, Act::Charge);
    assert!(!acting(&window).iter().any(|a| a.label == "above or below nought"), "a scale's figures have no sign of their own");
}

fn the_head_says_when_and_by_whom() {
    let window = open(PHONE, Appearance::Light, 1.0);
    let opened = Rc::new(RefCell::new(0));
    let seen = Rc::clone(&opened);
    window.global::<WhenAdapter>().on_open(move || *seen.borrow_mut() += 1);
    for act in [Act::Charge, Act::Recover, Act::LeakTest, Act::Repair, Act::Pressure, Act::Note] {
        show(&window, act);
        press(&window, "when and by whom, now, Mara Lindqvist");
    }
    assert_eq!(*opened.borrow(), 6);
    let typed = Rc::new(RefCell::new(String::new()));
    let keys = Rc::clone(&typed);
    window.global::<WhenAdapter>().on_key(move |key| keys.borrow_mut().push_str(&key));
    let stepped = Rc::new(RefCell::new(Vec::new()));
    let steps = Rc::clone(&stepped);
    window.global::<WhenAdapter>().on_step(move |part, by| steps.borrow_mut().push((part.to_string(), by)));
    show(&window, Act::When);
    for digit in ["1", "2", "0", "5"] {
        press(&window, digit);
    }
    press(&window, "day, earlier");
    assert_eq!((typed.borrow().as_str(), stepped.borrow().as_slice()), ("1205", [("day".to_owned(), -1)].as_slice()));
}
