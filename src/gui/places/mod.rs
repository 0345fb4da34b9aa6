//! The five places in the window.

/// Connects a callback to a message.
macro_rules! on {
    ($adapter:expr, $send:expr, $on:ident, || $msg:expr) => {{
        let send = std::rc::Rc::clone($send);
        $adapter.$on(move || send($msg));
    }};
    ($adapter:expr, $send:expr, $on:ident, |$($argument:ident),+| $msg:expr) => {{
        let send = std::rc::Rc::clone($send);
        $adapter.$on(move |$($argument),+| send($msg));
    }};
}

mod account;
mod cylinders;
mod driver;
mod due;
mod plant;
mod setup;

pub use driver::{Out, Places, WithApp};

use crate::view::places::{Look, Msg, Office, Place};
use bubblepoint_ui::{AppWindow, Page, Shell};
use slint::ComponentHandle;
use std::rc::Rc;

/// Where messages go.
pub type Send = Rc<dyn Fn(Msg)>;

pub fn connect(window: &AppWindow, send: &Send) {
    due::connect(window, send);
    plant::connect(window, send);
    cylinders::connect(window, send);
    account::connect(window, send);
    setup::connect(window, send);
}

/// Shows the place that is open; the others are filled when they are gone to.
pub fn show(window: &AppWindow, office: &Office, look: &Look) {
    match office.place {
        Place::Due => due::show(window, office),
        Place::Plant => plant::show(window, office),
        Place::Cylinders => cylinders::show(window, office),
        Place::Account => account::show(window, office),
        Place::Setup => setup::show(window, office, look),
    }
    let shell = window.global::<Shell>();
    let (place, page) = match office.place {
        Place::Due => (bubblepoint_ui::Place::Due, Page::Due),
        Place::Plant => (bubblepoint_ui::Place::Plant, Page::Plant),
        Place::Cylinders => (bubblepoint_ui::Place::Cylinders, Page::Cylinders),
        Place::Account => (bubblepoint_ui::Place::Account, Page::Account),
        Place::Setup => (bubblepoint_ui::Place::Setup, Page::Setup),
    };
    if !matches!(shell.get_page(), Page::Visit | Page::VisitClosed) {
        shell.set_place(place);
        shell.set_page(page);
    }
}

/// The place that the bar or rail names.
pub(super) fn place(place: bubblepoint_ui::Place) -> Place {
    match place {
        bubblepoint_ui::Place::Due => Place::Due,
        bubblepoint_ui::Place::Plant => Place::Plant,
        bubblepoint_ui::Place::Cylinders => Place::Cylinders,
        bubblepoint_ui::Place::Account => Place::Account,
        bubblepoint_ui::Place::Setup => Place::Setup,
    }
}
