//! What frames every page: the place, the message line, appearance and text size.

use super::Gui;
use crate::view::{Desk, Message, Msg, Page};
use bubblepoint_ui::{self as ui, AppWindow, Appearance, AppearanceAdapter, Place, Shell, Theme};
use slint::ComponentHandle;
use std::rc::Rc;

/// The setting for colours: `light`, `dark` or `sunlight`.
pub const APPEARANCE: &str = "appearance";
/// The setting for the size of text, as a factor: `1`, `1.25`, `1.5`.
pub const TEXT_FACTOR: &str = "text factor";

pub fn connect(window: &AppWindow, gui: &Rc<Gui>) {
    let shell = window.global::<Shell>();
    on!(gui, shell.on_back() => Msg::Back);
    on!(gui, shell.on_put_message_away() => Msg::PutMessageAway);
    let going = Rc::clone(gui);
    shell.on_navigate(move |place| {
        going.act(|desk| {
            desk.go(match place {
                Place::Due => Page::Due,
                Place::Plant => Page::Plant,
                Place::Cylinders => Page::Cylinders,
                Place::Account => Page::Account,
                Place::Setup => Page::Setup,
            });
        });
    });
    let theme = window.global::<AppearanceAdapter>();
    let keeping = Rc::clone(gui);
    theme.on_changed_appearance(move |appearance| {
        let word = match appearance {
            Appearance::Light => "light",
            Appearance::Dark => "dark",
            Appearance::Sunlight => "sunlight",
        };
        keeping.act(|desk| keep(desk, APPEARANCE, word));
    });
    let keeping = Rc::clone(gui);
    theme.on_changed_text_factor(move |factor| keeping.act(|desk| keep(desk, TEXT_FACTOR, &factor.to_string())));
}

fn keep(desk: &mut Desk, key: &str, value: &str) {
    let kept = desk.app().set(key, value);
    desk.tell(kept);
}

/// Colours and text size as they were set; on first start light and 100 %.
pub fn appear(window: &AppWindow, desk: &Desk) {
    let setting = |key: &str| desk.app().store().setting(key).ok().flatten();
    let theme = window.global::<Theme>();
    match setting(APPEARANCE).as_deref() {
        Some("dark") => theme.set_appearance(Appearance::Dark),
        Some("sunlight") => theme.set_appearance(Appearance::Sunlight),
        Some("light") => theme.set_appearance(Appearance::Light),
        _ => {}
    }
    if let Some(factor) = setting(TEXT_FACTOR).and_then(|text| text.parse::<f32>().ok()).filter(|factor| (1.0..=2.0).contains(factor)) {
        theme.set_text_factor(factor);
    }
    let demonstration = setting("demonstration").is_some_and(|value| value == "yes");
    window.global::<Shell>().set_demonstration(demonstration);
}

pub fn show(window: &AppWindow, desk: &Desk) {
    let shell = window.global::<Shell>();
    let page = match desk.page() {
        Page::Due => ui::Page::Due,
        Page::Plant => ui::Page::Plant,
        Page::Cylinders => ui::Page::Cylinders,
        Page::Account => ui::Page::Account,
        Page::Setup => ui::Page::Setup,
        Page::Visit => ui::Page::Visit,
        Page::Closed => ui::Page::VisitClosed,
    };
    let place = match desk.page() {
        Page::Due | Page::Visit | Page::Closed => Place::Due,
        Page::Plant => Place::Plant,
        Page::Cylinders => Place::Cylinders,
        Page::Account => Place::Account,
        Page::Setup => Place::Setup,
    };
    shell.set_place(place);
    shell.set_page(page);
    let Message { text, grave } = desk.message().cloned().unwrap_or_else(|| Message::told(""));
    shell.set_message(text.into());
    shell.set_message_grave(grave);
}
