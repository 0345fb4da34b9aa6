//! What frames every page: the place that is lit, the message line, the mark of a demonstration.

use super::Gui;
use crate::view::{Desk, Message, Page, words};
use bubblepoint_ui::{self as ui, AppWindow, Place, Shell};
use slint::ComponentHandle;
use std::rc::Rc;

pub fn connect(window: &AppWindow, gui: &Rc<Gui>) {
    let shell = window.global::<Shell>();
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
}

/// A demonstration says so on every page.
pub fn mark_demonstration(window: &AppWindow, desk: &Desk) {
    let demonstration = desk.app().is_demonstration().unwrap_or(false);
    let shell = window.global::<Shell>();
    shell.set_demonstration(demonstration);
    shell.set_demonstration_words(words::demonstration().into());
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
