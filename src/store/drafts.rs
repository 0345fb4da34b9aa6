//! Drafts: what is typed and not saved yet, kept so that it outlives the
//! program being killed. They have their own connection and thread, which
//! does not wait for the disk (`synchronous=NORMAL`).

use super::sql_types::Instant;
use super::{Store, StoreError, Writing};
use crate::ledger::{ApplianceId, VisitId};
use chrono::{DateTime, Utc};
use rusqlite::{OptionalExtension, params};
use std::collections::BTreeMap;
use std::sync::mpsc::{Receiver, RecvTimeoutError, Sender, channel};
use std::thread::JoinHandle;
use std::time::{Duration, Instant as Tick};

/// Actions whose names begin so are done on a visit that is closed: a correction, a hand-over.
pub const AFTER_CLOSING: &str = "after closing: ";

/// What was being typed.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Draft {
    pub visit: VisitId,
    /// The appliance that it is about; `None` where it is about none, and in drafts of earlier programs.
    pub appliance: Option<ApplianceId>,
    /// Which action of the visit: `charge`, `close`, …
    pub action: String,
    pub body: String,
    pub saved: DateTime<Utc>,
}

impl Store {
    /// # Errors
    /// The store's own, as for all below.
    pub fn draft(&self, visit: VisitId, action: &str) -> Result<Option<Draft>, StoreError> {
        self.read(|c| {
            c.prepare_cached("SELECT appliance, body, saved FROM drafts WHERE visit = ?1 AND action = ?2")?
                .query_row(params![visit, action], |row| {
                    let Instant(saved) = row.get(2)?;
                    Ok(Draft { visit, appliance: row.get(0)?, action: action.to_owned(), body: row.get(1)?, saved })
                })
                .optional()
        })
    }

    pub fn drafts_of(&self, visit: VisitId) -> Result<Vec<Draft>, StoreError> {
        self.read(|c| {
            let mut statement = c.prepare_cached("SELECT appliance, action, body, saved FROM drafts WHERE visit = ?1 ORDER BY action")?;
            let drafts = statement.query_map([visit], |row| {
                let Instant(saved) = row.get(3)?;
                Ok(Draft { visit, appliance: row.get(0)?, action: row.get(1)?, body: row.get(2)?, saved })
            })?;
            drafts.collect()
        })
    }
}

impl Writing<'_> {
    /// # Errors
    /// The store's own.
    pub fn put_draft(&self, draft: &Draft) -> Result<(), StoreError> {
        self.run(|c| put(c, draft))
    }

    /// # Errors
    /// The store's own.
    pub fn clear_draft(&self, visit: VisitId, action: &str) -> Result<(), StoreError> {
        self.run(|c| clear(c, visit, action))
    }
}

fn put(c: &rusqlite::Connection, draft: &Draft) -> rusqlite::Result<()> {
    // A draft that comes late, after its visit was closed, is of no use.
    let after_closing = draft.action.starts_with(AFTER_CLOSING);
    c.prepare_cached(
        "INSERT INTO drafts (visit, appliance, action, body, saved) \
         SELECT ?1, ?2, ?3, ?4, ?5 FROM visits WHERE id = ?1 AND (state = 'open' OR ?6) \
         ON CONFLICT (visit, action) DO UPDATE SET appliance = excluded.appliance, body = excluded.body, saved = excluded.saved",
    )?
    .execute(params![draft.visit, draft.appliance, draft.action, draft.body, Instant(draft.saved), after_closing])
    .map(drop)
}

fn clear(c: &rusqlite::Connection, visit: VisitId, action: &str) -> rusqlite::Result<()> {
    c.prepare_cached("DELETE FROM drafts WHERE visit = ?1 AND action = ?2")?.execute(params![visit, action]).map(drop)
}

/// Before the name of a form, among the settings of this device.
const FORM: &str = "draft of ";

impl Store {
    /// What was being typed in a form of the registers.
    ///
    /// # Errors
    /// The store's own.
    pub fn form(&self, form: &str) -> Result<Option<String>, StoreError> {
        self.setting(&format!("{FORM}{form}"))
    }
}

impl Writing<'_> {
    /// # Errors
    /// The store's own.
    pub fn put_form(&self, form: &str, body: &str) -> Result<(), StoreError> {
        self.run(|c| put_form(c, form, body))
    }

    /// # Errors
    /// The store's own.
    pub fn clear_form(&self, form: &str) -> Result<(), StoreError> {
        self.run(|c| clear_form(c, form))
    }
}

fn put_form(c: &rusqlite::Connection, form: &str, body: &str) -> rusqlite::Result<()> {
    c.prepare_cached("INSERT INTO settings (key, value) VALUES (?1, ?2) ON CONFLICT (key) DO UPDATE SET value = excluded.value")?
        .execute(params![format!("{FORM}{form}"), body])
        .map(drop)
}

fn clear_form(c: &rusqlite::Connection, form: &str) -> rusqlite::Result<()> {
    c.prepare_cached("DELETE FROM settings WHERE key = ?1")?.execute([format!("{FORM}{form}")]).map(drop)
}

/// The longest a draft waits for further typing before it is written; with
/// the writing itself it stays under a quarter of a second.
const WAIT: Duration = Duration::from_millis(100);

enum Order {
    Put(Draft),
    Clear(VisitId, String),
    /// A form of the registers; `None` clears it.
    Form(String, Option<String>),
    Flush(Sender<Option<StoreError>>),
}

/// Writes drafts on a thread of its own; of several for one action within a
/// tenth of a second only the last is written.
pub struct DraftWriter {
    orders: Option<Sender<Order>>,
    thread: Option<JoinHandle<()>>,
}

impl DraftWriter {
    /// Opens the thread's own connection to the file of `store`.
    ///
    /// # Errors
    /// As [`Store::another`].
    pub fn open(store: &Store) -> Result<Self, StoreError> {
        let own = store.another()?;
        own.read(|c| c.pragma_update(None, "synchronous", "NORMAL"))?;
        let (orders, received) = channel();
        let thread = std::thread::Builder::new()
            .name("drafts".to_owned())
            .spawn(move || keep(&own, &received))
            .map_err(|e| StoreError::CannotOpen { path: store.path().map(Into::into).unwrap_or_default(), detail: e.to_string() })?;
        Ok(Self { orders: Some(orders), thread: Some(thread) })
    }

    /// Never waits; the draft is on disk at most a quarter of a second later.
    pub fn put(&self, draft: Draft) {
        self.order(Order::Put(draft));
    }

    pub fn clear(&self, visit: VisitId, action: &str) {
        self.order(Order::Clear(visit, action.to_owned()));
    }

    /// As [`DraftWriter::put`], of a form of the registers.
    pub fn put_form(&self, form: &str, body: &str) {
        self.order(Order::Form(form.to_owned(), Some(body.to_owned())));
    }

    pub fn clear_form(&self, form: &str) {
        self.order(Order::Form(form.to_owned(), None));
    }

    /// Waits until all is written that was put before.
    ///
    /// # Errors
    /// Why not: of the last try to write. What could not be written is held and tried again.
    pub fn flush(&self) -> Result<(), StoreError> {
        let (answer, done) = channel();
        self.order(Order::Flush(answer));
        // A thread that has ended has nothing left to write.
        done.recv().ok().flatten().map_or(Ok(()), Err)
    }

    fn order(&self, order: Order) {
        if let Some(orders) = &self.orders {
            // Fails only when the thread has ended; a flush then reports it.
            let _ = orders.send(order);
        }
    }
}

impl Drop for DraftWriter {
    fn drop(&mut self) {
        // Hanging up ends the thread, which writes what it holds first.
        self.orders = None;
        if let Some(thread) = self.thread.take() {
            let _ = thread.join();
        }
    }
}

/// What waits to be written; `None` clears it.
#[derive(Default)]
struct Held {
    /// By visit and action.
    drafts: BTreeMap<(VisitId, String), Option<Draft>>,
    forms: BTreeMap<String, Option<String>>,
}

fn keep(store: &Store, orders: &Receiver<Order>) {
    let mut held = Held::default();
    while let Ok(first) = orders.recv() {
        let until = Tick::now() + WAIT;
        let mut waiting = Vec::new();
        let mut hung_up = false;
        take(first, &mut held, &mut waiting);
        // Whoever types without a pause is written all the same.
        while waiting.is_empty() && Tick::now() < until {
            match orders.recv_timeout(until.saturating_duration_since(Tick::now())) {
                Ok(order) => take(order, &mut held, &mut waiting),
                Err(RecvTimeoutError::Timeout) => break,
                Err(RecvTimeoutError::Disconnected) => {
                    hung_up = true;
                    break;
                }
            }
        }
        // What could not be written is held for the next time; once that is
        // written too, nothing has failed any more.
        let mut failed = write(store, &held).err();
        if failed.is_none() {
            held = Held::default();
        }
        for answer in waiting {
            // Whoever asked may have gone.
            let _ = answer.send(failed.take());
        }
        if hung_up {
            return;
        }
    }
}

fn take(order: Order, held: &mut Held, waiting: &mut Vec<Sender<Option<StoreError>>>) {
    match order {
        Order::Put(draft) => drop(held.drafts.insert((draft.visit, draft.action.clone()), Some(draft))),
        Order::Clear(visit, action) => drop(held.drafts.insert((visit, action), None)),
        Order::Form(form, body) => drop(held.forms.insert(form, body)),
        Order::Flush(answer) => waiting.push(answer),
    }
}

fn write(store: &Store, held: &Held) -> Result<(), StoreError> {
    if held.drafts.is_empty() && held.forms.is_empty() {
        return Ok(());
    }
    let (_turn, transaction) = store.begin_writing()?;
    for ((visit, action), draft) in &held.drafts {
        store.read(|c| match draft {
            Some(draft) => put(c, draft),
            None => clear(c, *visit, action),
        })?;
    }
    for (form, body) in &held.forms {
        store.read(|c| match body {
            Some(body) => put_form(c, form, body),
            None => clear_form(c, form),
        })?;
    }
    transaction.commit().map_err(|e| store.told(e))
}

#[cfg(test)]
mod tests {
    use super::super::OpenMode;
    use super::super::samples::{fill, ids, now};
    use super::*;

    fn draft(body: &str) -> Draft {
        Draft { visit: ids::VISIT, appliance: Some(ids::APPLIANCE), action: "charge".to_owned(), body: body.to_owned(), saved: now() }
    }

    #[test]
    fn drafts_arrive_without_being_waited_for() {
        let folder = tempfile::tempdir().unwrap();
        let store = Store::open(&folder.path().join("a.store"), OpenMode::Create).unwrap();
        fill(&store);
        let writer = DraftWriter::open(&store).unwrap();
        for body in ["1", "12", "12.", "12.5"] {
            writer.put(draft(body));
        }
        std::thread::sleep(Duration::from_millis(250));
        assert_eq!(store.draft(ids::VISIT, "charge").unwrap(), Some(draft("12.5")));

        writer.put(draft("13"));
        writer.clear(ids::VISIT, "charge");
        writer.flush().unwrap();
        assert_eq!(store.drafts_of(ids::VISIT).unwrap(), []);

        writer.put_form("site", "half");
        writer.put_form("cylinder", "other");
        writer.clear_form("cylinder");
        writer.flush().unwrap();
        assert_eq!((store.form("site").unwrap().as_deref(), store.form("cylinder").unwrap()), (Some("half"), None));

        writer.put(draft("14"));
        drop(writer);
        assert_eq!(store.draft(ids::VISIT, "charge").unwrap(), Some(draft("14")));
    }
    #[test]
    fn a_failure_that_was_made_good_is_no_failure_any_more() {
        let folder = tempfile::tempdir().unwrap();
        let store = Store::open(&folder.path().join("a.store"), OpenMode::Create).unwrap();
        fill(&store);
        let writer = DraftWriter::open(&store).unwrap();
        let refuse = "CREATE TRIGGER full BEFORE INSERT ON drafts BEGIN SELECT RAISE(ABORT, 'no room'); END;";
        store.read(|c| c.execute_batch(refuse)).unwrap();
        writer.put(draft("1"));
        std::thread::sleep(Duration::from_millis(400));
        assert_eq!(store.draft(ids::VISIT, "charge").unwrap(), None);
        store.read(|c| c.execute_batch("DROP TRIGGER full;")).unwrap();
        writer.put(Draft { action: "note".to_owned(), ..draft("2") });
        std::thread::sleep(Duration::from_millis(400));
        assert_eq!(store.drafts_of(ids::VISIT).unwrap().len(), 2, "what was held is written with the next");
        writer.flush().unwrap();
    }
}
