//! Joins the five places to the desk: one store, one page in front.

use super::Gui;
use super::places::{Out, Places, WithApp};
use crate::app::AppError;
use crate::view::places::{Go, Look, Msg as Office, Place};
use crate::view::visit::choose_appliance;
use crate::view::{Desk, Message, Msg, Page, places, words};
use bubblepoint_ui::{AppWindow, Shell};
use slint::ComponentHandle;
use std::rc::Rc;

fn page(place: Place) -> Page {
    match place {
        Place::Due => Page::Due,
        Place::Plant => Page::Plant,
        Place::Cylinders => Page::Cylinders,
        Place::Account => Page::Account,
        Place::Setup => Page::Setup,
    }
}

fn place(page: Page) -> Option<Place> {
    match page {
        Page::Due => Some(Place::Due),
        Page::Plant => Some(Place::Plant),
        Page::Cylinders => Some(Place::Cylinders),
        Page::Account => Some(Place::Account),
        Page::Setup => Some(Place::Setup),
        _ => None,
    }
}

/// Opens the places on the desk's store. Where their settings cannot be read the desk says so.
pub fn join(window: &AppWindow, gui: &Rc<Gui>) {
    let read = gui.desk(|desk| {
        let office = places::Office::new(desk.app(), &desk.documents())?;
        Ok::<_, AppError>((office, Look::read(desk.app())?))
    });
    let (office, look) = match read {
        Ok(read) => read,
        Err(error) => return gui.act(|desk| desk.tell(Err(error))),
    };
    let weak = Rc::downgrade(gui);
    let with_app: WithApp = Rc::new(move |act| {
        if let Some(gui) = weak.upgrade()
            && let Ok(desk) = gui.desk.try_borrow()
        {
            act(desk.app());
        }
    });
    let weak = Rc::downgrade(gui);
    let out: Out = Rc::new(move |_, go| {
        if let Some(gui) = weak.upgrade() {
            gui.act(|desk| follow(desk, go));
        }
    });
    let places = Places::open(window, office, look, with_app, out);
    let shell = window.global::<Shell>();
    let (own, back) = (Rc::clone(gui), Rc::clone(&places));
    shell.on_back(move || match own.desk(|desk| place(desk.page())) {
        Some(_) => back.update(Office::Back),
        None => own.tell(Msg::Back),
    });
    let (own, away) = (Rc::clone(gui), Rc::clone(&places));
    shell.on_put_message_away(move || {
        own.tell(Msg::PutMessageAway);
        away.update(Office::PutMessageAway);
    });
    // Set once, here.
    let _ = gui.places.set(places);
}

/// Goes where the places lead.
fn follow(desk: &mut Desk, go: Go) {
    let outcome = match go {
        Go::At(place) => {
            desk.go(page(place));
            Ok(())
        }
        Go::Begin { site, appliance } => begin(desk, site, appliance),
        Go::Visit(visit) => desk.take_up(visit),
        Go::Entry(_, entry) => desk.open_entry(entry),
        Go::Open(path) => {
            if let Err(cause) = desk.open_with_platform(&path) {
                desk.say(Message::told(words::cannot_open(&path.display().to_string(), &cause)));
            }
            Ok(())
        }
        Go::Look | Go::Appear(_) | Go::Leave => Ok(()),
    };
    desk.tell(outcome);
}

fn begin(desk: &mut Desk, site: Option<crate::ledger::SiteId>, appliance: Option<crate::ledger::ApplianceId>) -> Result<(), AppError> {
    desk.ask_where()?;
    let Some(site) = site else { return Ok(()) };
    desk.begin_at(site)?;
    if let Some(appliance) = appliance {
        desk.update(Msg::ChooseAppliance(choose_appliance::Msg::Choose(appliance.to_string())));
    }
    Ok(())
}

impl Gui {
    /// The page in front is one of the places: it is shown as the store now is.
    pub(super) fn arrive(&self) {
        let at = self.desk.try_borrow().ok().map(|desk| (place(desk.page()), desk.changes()));
        if let (Some((Some(place), changes)), Some(places)) = (at, self.places.get()) {
            places.arrive(place, changes);
        }
    }
}
