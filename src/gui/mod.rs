//! The window: maps view models to the generated Slint types, and what is
//! pressed and typed to messages for the [`Desk`]. Decides nothing.
//!
//! One file per group of screens, each with a `connect` (callbacks to
//! messages) and a `show` (view model to properties).

#[macro_use]
mod rows;
mod closing;
mod joined;
mod machine;
pub mod places;
mod shell;
mod visit;
mod weighing;
mod work;

pub use machine::{desk_options, has_display};

use crate::app::{App, AppError};
use crate::view::visit::Panel;
use crate::view::{Desk, Msg, Page, words};
use bubblepoint_ui::AppWindow;
use slint::{ComponentHandle, Weak};
use std::cell::{Cell, OnceCell, RefCell};
use std::path::PathBuf;
use std::rc::Rc;

/// Why the window did not open.
#[derive(Debug, thiserror::Error)]
pub enum WindowError {
    #[error("{}", words::no_display())]
    NoDisplay,
    #[error("{}", words::window_failed(.0))]
    Platform(String),
    #[error(transparent)]
    App(#[from] AppError),
}

impl From<slint::PlatformError> for WindowError {
    fn from(error: slint::PlatformError) -> Self {
        Self::Platform(error.to_string())
    }
}

/// Opens the window on a store and stays until it is closed. `documents`
/// replaces the platform's folder for documents.
///
/// # Errors
/// No display; the platform's own; a store that cannot be read.
pub fn open(app: App, documents: Option<PathBuf>) -> Result<(), WindowError> {
    if !has_display() {
        return Err(WindowError::NoDisplay);
    }
    let window = AppWindow::new()?;
    let gui = Gui::attach(&window, Desk::new(app, desk_options(documents))?);
    window.run()?;
    gui.flush();
    Ok(())
}

/// A window and the desk that it shows.
pub struct Gui {
    window: Weak<AppWindow>,
    desk: RefCell<Desk>,
    /// What the page of the visit was last shown at.
    shown_at: Cell<Option<u64>>,
    /// The five places, on the desk's own store.
    places: OnceCell<Rc<places::Places>>,
}

impl Gui {
    /// Connects a window with a desk and shows it. The window's callbacks keep the desk alive.
    pub fn attach(window: &AppWindow, desk: Desk) -> Rc<Self> {
        let gui = Rc::new(Self { window: window.as_weak(), desk: RefCell::new(desk), shown_at: Cell::new(None), places: OnceCell::new() });
        shell::connect(window, &gui);
        visit::connect(window, &gui);
        weighing::connect(window, &gui);
        work::connect(window, &gui);
        closing::connect(window, &gui);
        shell::mark_demonstration(window, &gui.desk.borrow());
        joined::join(window, &gui);
        gui.show();
        gui
    }

    /// Sends a message to the desk and shows what came of it.
    pub fn tell(&self, msg: Msg) {
        self.act(|desk| desk.update(msg));
    }

    /// Sends a message whose outcome the window shows already: a point of a stroke.
    fn tell_silently(&self, msg: Msg) {
        if let Ok(mut desk) = self.desk.try_borrow_mut() {
            desk.update(msg);
        }
    }

    /// Does something on the desk and shows what came of it.
    pub fn act(&self, act: impl FnOnce(&mut Desk)) {
        let Some(window) = self.window.upgrade() else { return };
        // A callback that the showing itself sets off has nothing to say.
        let Ok(mut desk) = self.desk.try_borrow_mut() else { return };
        self.take_over(&window, &mut desk);
        act(&mut desk);
        drop(desk);
        self.show();
    }

    /// Reads the desk.
    pub fn desk<T>(&self, read: impl FnOnce(&Desk) -> T) -> T {
        read(&self.desk.borrow())
    }

    /// Waits until every draft is on disk.
    pub fn flush(&self) {
        if let Ok(mut desk) = self.desk.try_borrow_mut() {
            desk.flush();
        }
    }

    /// Steps that a page takes by itself, such as from the summary to the signatures.
    fn take_over(&self, window: &AppWindow, desk: &mut Desk) {
        visit::take_over(window, desk);
        closing::take_over(window, desk);
    }

    /// Shows the desk as it stands: the page in front, and of the visit only what is open.
    pub fn show(&self) {
        let Some(window) = self.window.upgrade() else { return };
        let outcome = self.desk.try_borrow().map_or(Ok(()), |desk| self.show_page(&window, &desk));
        if let Ok(mut desk) = self.desk.try_borrow_mut() {
            desk.tell(outcome);
        }
        if let Ok(desk) = self.desk.try_borrow() {
            shell::show(&window, &desk);
        }
        self.arrive();
    }

    fn show_page(&self, window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
        match desk.page() {
            Page::Visit => {
                if self.shown_at.get() != Some(desk.changes()) {
                    visit::show_page(window, desk)?;
                    self.shown_at.set(Some(desk.changes()));
                }
                match desk.panel() {
                    Panel::None => {}
                    Panel::Begin => visit::show_begin(window, desk)?,
                    Panel::Facts => visit::show_facts(window, desk)?,
                    Panel::ChooseAppliance => visit::show_choose_appliance(window, desk)?,
                    Panel::Cautions => visit::show_cautions(window, desk)?,
                    Panel::ChooseCylinder => weighing::show_choose_cylinder(window, desk)?,
                    Panel::When => visit::show_when(window, desk)?,
                    Panel::Charge => weighing::show_charge(window, desk)?,
                    Panel::Recover => weighing::show_recover(window, desk)?,
                    Panel::LeakTest => work::show_leak_test(window, desk)?,
                    Panel::Repair => work::show_repair(window, desk)?,
                    Panel::Pressure => work::show_pressure(window, desk)?,
                    Panel::Note => work::show_note(window, desk)?,
                    Panel::Entry => closing::show_entry(window, desk)?,
                    Panel::Close => closing::show_close(window, desk)?,
                }
                visit::show_stamp(window, desk)?;
                visit::show_act(window, desk);
            }
            Page::Closed => closing::show_closed(window, desk)?,
            Page::Due | Page::Plant | Page::Cylinders | Page::Account | Page::Setup => {}
        }
        Ok(())
    }
}
