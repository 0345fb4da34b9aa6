//! Runs the five places in a window: messages in, pages out, and a worker
//! that looks through the store so that no frame waits for it.

use super::{Send, connect, place, show};
use crate::app::App;
use crate::app::Appearance as Light;
use crate::store::StoreError;
use crate::view::Message;
use crate::view::places::{Go, Look, Msg, Office, Overview, Place, plant, signing};
use crate::view::visit::close::InkMsg;
use bubblepoint_ui::{AppWindow, Appearance, Page, Shell, Theme};
use slint::{ComponentHandle, Timer, TimerMode};
use std::cell::{Cell, Ref, RefCell};
use std::rc::Rc;
use std::sync::mpsc::{Receiver, TryRecvError, channel};
use std::time::Duration;

/// How often the worker is asked whether it is done.
const ASK_EVERY: Duration = Duration::from_millis(20);

/// Lends the use cases, whoever owns them.
pub type WithApp = Rc<dyn Fn(&mut dyn FnMut(&App))>;
/// Does what lies outside the places: visits, files, the way out.
pub type Out = Rc<dyn Fn(&AppWindow, Go)>;

pub struct Places {
    window: slint::Weak<AppWindow>,
    office: RefCell<Office>,
    look: RefCell<Look>,
    with_app: WithApp,
    out: Out,
    coming: RefCell<Option<Receiver<Result<Overview, StoreError>>>>,
    /// The store changed while the worker was at it.
    again: Cell<bool>,
    /// The place that the window came to last, and the count of changes then.
    arrived: Cell<Option<(Place, u64)>>,
    /// A message of the places is shown.
    said: Cell<bool>,
    timer: Timer,
}

impl Places {
    /// Connects the places to a window and begins to look through the store.
    pub fn open(window: &AppWindow, office: Office, look: Look, with_app: WithApp, out: Out) -> Rc<Self> {
        let places = Rc::new(Self {
            window: window.as_weak(),
            office: RefCell::new(office),
            look: RefCell::new(look),
            with_app,
            out,
            coming: RefCell::default(),
            again: Cell::new(false),
            arrived: Cell::new(None),
            said: Cell::new(false),
            timer: Timer::default(),
        });
        let weak = Rc::downgrade(&places);
        let send: Send = Rc::new(move |msg| {
            if let Some(places) = weak.upgrade() {
                places.update(msg);
            }
        });
        connect(window, &send);
        places.show();
        places.look_through();
        places
    }

    /// Takes the bar or rail, back and messages too: for a window without visits.
    pub fn take_shell(self: &Rc<Self>, window: &AppWindow) {
        let shell = window.global::<Shell>();
        let places = Rc::clone(self);
        shell.on_navigate(move |to| places.navigate(to));
        let places = Rc::clone(self);
        shell.on_back(move || places.update(Msg::Back));
        let places = Rc::clone(self);
        shell.on_put_message_away(move || places.update(Msg::PutMessageAway));
    }

    /// Goes to a place, also out of a visit.
    pub fn navigate(self: &Rc<Self>, to: bubblepoint_ui::Place) {
        if let Some(window) = self.window.upgrade() {
            window.global::<Shell>().set_page(Page::Due);
        }
        self.update(Msg::Go(place(to)));
    }

    pub fn office(&self) -> Ref<'_, Office> {
        self.office.borrow()
    }

    pub fn update(self: &Rc<Self>, msg: Msg) {
        // The screen itself laid its choices over the place: back takes them away.
        if matches!(msg, Msg::Back) && self.window.upgrade().is_some_and(|window| self.stop_choosing(&window)) {
            return;
        }
        let shows = !matches!(msg, Msg::Plant(plant::Msg::Signing(signing::Msg::Ink(InkMsg::Point { .. }))));
        let mut msg = Some(msg);
        let mut next = Vec::new();
        (self.with_app)(&mut |app| {
            if let Some(msg) = msg.take() {
                next = self.office.borrow_mut().update(app, msg);
            }
        });
        // The ink field draws its own points; the page is shown again when the pen is lifted.
        if !shows {
            return;
        }
        self.show();
        let front = self.office.borrow().place;
        if let Some((_, changes)) = self.arrived.get().filter(|(at, _)| *at != front) {
            self.arrived.set(Some((front, changes)));
            next.insert(0, Go::At(front));
        }
        for go in next {
            self.go(go);
        }
    }

    fn stop_choosing(&self, window: &AppWindow) -> bool {
        match self.office.borrow().place {
            Place::Due => super::due::stop_choosing(window),
            Place::Account => super::account::stop_choosing(window),
            _ => false,
        }
    }

    /// The window has come to a place, by the bar or out of a visit; `changes`
    /// counts what was written meanwhile.
    pub fn arrive(self: &Rc<Self>, place: Place, changes: u64) {
        if self.arrived.replace(Some((place, changes))) != Some((place, changes)) {
            self.update(Msg::Go(place));
        }
    }

    fn go(self: &Rc<Self>, go: Go) {
        match go {
            Go::Look => self.look_through(),
            Go::Appear(look) => {
                *self.look.borrow_mut() = look;
                if let Some(window) = self.window.upgrade() {
                    self.appear(&window);
                }
                self.show();
            }
            go => {
                if let Some(window) = self.window.upgrade() {
                    (self.out)(&window, go);
                }
            }
        }
    }

    /// Tells what has happened outside the places.
    pub fn tell(&self, text: String, grave: bool) {
        self.office.borrow_mut().message = Some(Message { text, grave });
        self.show();
    }

    /// Colours and text size as they are set.
    pub fn appear(&self, window: &AppWindow) {
        let theme = window.global::<Theme>();
        let look = self.look.borrow();
        theme.set_appearance(match look.appearance {
            Light::Light => Appearance::Light,
            Light::Dark => Appearance::Dark,
            Light::Sunlight => Appearance::Sunlight,
        });
        theme.set_text_factor(look.text_size as f32 / 100.0);
    }

    pub fn show(&self) {
        if let Some(window) = self.window.upgrade() {
            let office = self.office.borrow();
            show(&window, &office, &self.look.borrow());
            let shell = window.global::<Shell>();
            if let Some(message) = &office.message {
                shell.set_message(message.text.as_str().into());
                shell.set_message_grave(message.grave);
                self.said.set(true);
            } else if self.said.replace(false) {
                shell.set_message("".into());
            }
        }
    }

    /// Has the store looked through: by a worker with a connection of its own;
    /// a store in memory, which has only one, at once.
    pub fn look_through(self: &Rc<Self>) {
        if self.coming.borrow().is_some() {
            self.again.set(true);
            return;
        }
        let mut here = false;
        (self.with_app)(&mut |app| match app.store().another() {
            Ok(store) => {
                let (sender, receiver) = channel();
                let (now, today) = (app.now(), app.today());
                // Nobody listens any more once the window is gone.
                std::thread::spawn(move || drop(sender.send(Overview::read(&store, now, today))));
                *self.coming.borrow_mut() = Some(receiver);
            }
            Err(_) => {
                self.office.borrow_mut().look(app);
                here = true;
            }
        });
        if here {
            self.show();
            return;
        }
        let weak = Rc::downgrade(self);
        self.timer.start(TimerMode::Repeated, ASK_EVERY, move || {
            if let Some(places) = weak.upgrade() {
                places.ask();
            }
        });
    }

    fn ask(self: &Rc<Self>) {
        let answer = match self.coming.borrow().as_ref().map(Receiver::try_recv) {
            Some(Err(TryRecvError::Empty)) => return,
            Some(Ok(answer)) => Some(answer),
            Some(Err(TryRecvError::Disconnected)) | None => None,
        };
        self.timer.stop();
        *self.coming.borrow_mut() = None;
        match answer {
            Some(Ok(overview)) => self.update(Msg::Looked(Box::new(overview))),
            Some(Err(error)) => self.tell(error.to_string(), true),
            None => {}
        }
        if self.again.replace(false) {
            self.look_through();
        }
    }
}
