//! The demonstration: an invented service company in an invented harbour town
//! whose two shores lie under two laws, built through the same use cases and
//! the same import as everything else, on a clock that is moved through the
//! days before the one on which it is built.
//!
//! Quernhaven's west shore is under United States rules, its east shore under
//! those of the European Union. People, companies and places are invented; the
//! gases and the law are real.

mod ink;
mod stage;
mod story;

use super::testing::SetClock;
use super::{App, AppError, IdSource, ImportError, Setting};
use crate::store::{OpenMode, Store, StoreError};
use chrono::{DateTime, NaiveDate, Utc};
use chrono_tz::Tz;
use stage::Stage;
use std::path::{Path, PathBuf};
use std::sync::atomic::{AtomicU64, Ordering};
use uuid::Uuid;

/// Setting that marks a store as a demonstration.
const MARK: &str = "yes";

#[derive(Debug, thiserror::Error)]
pub enum DemonstrationError {
    #[error("{} is a store that is no demonstration. It was not touched. Name a file that is not there yet.", path.display())]
    OtherStore { path: PathBuf },
    #[error("The demonstration at {} is open in another window. Close it there and do this again; nothing was changed.", path.display())]
    InUse { path: PathBuf },
    #[error("{} could not be written: {detail}. Check that its folder exists and that you may write in it.", path.display())]
    CannotWrite { path: PathBuf, detail: String },
    #[error(transparent)]
    App(#[from] AppError),
    #[error(transparent)]
    Import(#[from] ImportError),
}

impl From<StoreError> for DemonstrationError {
    fn from(error: StoreError) -> Self {
        Self::App(error.into())
    }
}

/// Builds the demonstration at `path`, as of `today`. An earlier
/// demonstration is replaced; the file is there whole or not at all.
///
/// # Errors
/// [`DemonstrationError`]; any other store at `path` is left as it is.
pub fn build_demonstration(path: &Path, today: NaiveDate, zone: Tz) -> Result<(), DemonstrationError> {
    may_become_demonstration(path)?;
    let cannot = |detail: String| DemonstrationError::CannotWrite { path: path.to_owned(), detail };
    let folder = match path.parent() {
        Some(folder) if !folder.as_os_str().is_empty() => folder,
        _ => Path::new("."),
    };
    // Built beside its place, so that no half of it is ever found there; SQLite's own files go with the folder.
    let workshop = tempfile::Builder::new().prefix(".bubblepoint-").tempdir_in(folder).map_err(|e| cannot(e.to_string()))?;
    let built = workshop.path().join("demonstration.db");
    build(Store::open(&built, OpenMode::Create)?, today, zone)?;
    std::fs::rename(&built, path).map_err(|e| cannot(e.to_string()))
}

/// A demonstration in memory, for trying things out.
///
/// # Errors
/// As [`build_demonstration`].
pub fn demonstration_in_memory(today: NaiveDate, zone: Tz) -> Result<App, DemonstrationError> {
    build(Store::in_memory()?, today, zone)
}

fn build(store: Store, today: NaiveDate, zone: Tz) -> Result<App, DemonstrationError> {
    let clock = SetClock::at(DateTime::<Utc>::default(), zone);
    let app = App::with(store, Box::new(clock.clone()), Box::new(NumberedIds::default()))?;
    let stage = Stage::new(&app, &clock, today, zone);
    stage.at(stage::OPENING_DAY, 7, 30);
    app.set(Setting::Demonstration, MARK)?;
    story::tell(&stage)?;
    stage.at(0, 0, 0);
    app.flush_drafts()?;
    Ok(app)
}

/// Whether a demonstration may be built at `path`: where there is no file yet,
/// or an earlier demonstration that nobody has open. Nothing is changed.
///
/// # Errors
/// [`DemonstrationError`]: any other file, also an empty one.
pub fn may_become_demonstration(path: &Path) -> Result<(), DemonstrationError> {
    if !path.exists() {
        return Ok(());
    }
    if Store::peek_setting(path, Setting::Demonstration.key())?.as_deref() != Some(MARK) {
        return Err(DemonstrationError::OtherStore { path: path.to_owned() });
    }
    // The last one to close a store clears its log away; one that is still
    // there after that belongs to someone who is at work.
    drop(Store::open(path, OpenMode::MustExist)?);
    let mut log = path.as_os_str().to_owned();
    log.push("-wal");
    if Path::new(&log).exists() {
        return Err(DemonstrationError::InUse { path: path.to_owned() });
    }
    Ok(())
}

/// UUIDs of version 7 whose random part is a number that counts up: the same
/// story on the same day has the same ids, and so the same records.
#[derive(Debug, Default)]
struct NumberedIds(AtomicU64);

impl IdSource for NumberedIds {
    fn fresh(&self, now: DateTime<Utc>) -> Uuid {
        let mut rest = [0; 10];
        rest[2..].copy_from_slice(&self.0.fetch_add(1, Ordering::Relaxed).to_be_bytes());
        uuid::Builder::from_unix_timestamp_millis(u64::try_from(now.timestamp_millis()).unwrap_or(0), &rest).into_uuid()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::gas::Weighting;
    use crate::ledger::{Content, Line, VisitState};
    use crate::rules::{Assessment, DutyState, Verdict, assess};
    use crate::store::VisitFilter;
    use std::collections::HashMap;

    fn told(today: &str) -> App {
        demonstration_in_memory(today.parse().unwrap(), chrono_tz::UTC).unwrap()
    }

    /// The state that a line of the assessment ends in, by appliance.
    fn with_assessments(app: &App, look: impl FnOnce(&HashMap<String, Assessment>)) {
        let registers = app.store().registers().unwrap();
        let lines: Vec<Vec<Line>> = registers.appliances.iter().map(|one| app.store().lines_of(one.id).unwrap()).collect();
        let assessments = registers.appliances.iter().zip(&lines).map(|(appliance, lines)| {
            let site = registers.site(appliance.site).unwrap();
            (appliance.name.clone(), assess(site, appliance, lines, app.today()).unwrap())
        });
        look(&assessments.collect());
    }

    #[test]
    fn it_shows_every_verdict_whatever_the_day() {
        for today in ["2026-12-01", "2027-02-28", "2027-07-15", "2028-02-29", "2029-01-01"] {
            with_assessments(&told(today), |of| {
                let rate = |name: &str, book: &str| {
                    let judgement = of[name].rulebooks.iter().find(|judgement| judgement.id == book).unwrap();
                    assert!(judgement.applies, "{today} {name} {book}");
                    judgement.rate().cloned()
                };
                let near = rate("FM-1", "us-84c").unwrap();
                assert_eq!(near.verdict, Verdict::Under, "{today}");
                assert!(near.error.unwrap().holds_trigger, "{today}: the rack is under its trigger by less than the weighing error");
                assert_eq!(rate("FM-2", "us-82f").unwrap().verdict, Verdict::Under, "{today}");
                assert_eq!(rate("FM-2", "us-84c").unwrap().verdict, Verdict::Under, "{today}");
                assert_eq!(rate("FM-3", "us-82f").unwrap().verdict, Verdict::At, "{today}");
                let over = rate("CA-1", "us-82f").unwrap();
                assert_eq!((over.verdict, over.error.unwrap().holds_trigger), (Verdict::Over, false), "{today}");
                assert!(rate("CA-2", "us-84c").is_none(), "{today}: charged at its installation alone");
                assert!(rate("IR-1", "us-84c").is_none(), "{today}: gas moved for the season only");
                assert!(!of["CA-3"].rulebooks.iter().any(|judgement| judgement.applies), "{today}: too small");
            });
        }
    }

    #[test]
    fn it_shows_what_is_to_be_done() {
        let app = told("2026-12-01");
        with_assessments(&app, |of| {
            let states = |name: &str, duty: &str| -> Vec<DutyState> {
                of[name].duties.iter().filter(|one| one.kind.name() == duty).map(|one| one.state(app.today())).collect()
            };
            assert_eq!(states("CA-1", "repair"), [DutyState::Met]);
            assert_eq!(states("CA-1", "initial verification test"), [DutyState::Open]);
            assert!(states("IR-2", "repair").contains(&DutyState::Suspended), "mothballing stops the clock");
            assert_eq!(states("FT-HP1", "repair of a found leak"), [DutyState::Open]);
            assert_eq!(states("FT-HP2", "re-check"), [DutyState::Open]);
            // The museum is clean: its next check has its day and nothing is late.
            assert_eq!(of["TM-1"].duties.iter().map(|duty| duty.state(app.today())).collect::<Vec<_>>(), [DutyState::Open]);
            // HCFC and HFC in one gas weigh in both accounts.
            let blend = &of["FM-2"].this_year;
            assert!(blend.odp_kg.unwrap() > 0.into() && blend.co2e_t.unwrap() > 0.into());
            assert_eq!(of["FM-2"].weights, Weighting::UnitedStates);
        });
    }

    #[test]
    fn cylinders_stand_where_they_should() {
        let app = told("2026-12-01");
        let cylinders: HashMap<String, _> =
            app.cylinders(app.today()).unwrap().into_iter().map(|one| (one.cylinder.name.clone(), one)).collect();
        assert!(cylinders.len() >= 8);
        // 40.9 lb is the limit of this cylinder for recovered R-22 of unknown oil content.
        let Content::Known(near) = cylinders["W-202"].balance.content else { panic!("not weighed") };
        assert!(near > crate::quantity::Mass::from_lb(38) && near < crate::quantity::Mass::from_lb(41), "{}", near.kg_text());
        assert!(cylinders["W-203"].facts.requalify_by.unwrap() < app.today());
        assert!(cylinders.values().all(|one| one.balance.content.mass().is_some_and(|mass| !mass.is_negative())));
    }

    #[test]
    fn visits_are_really_closed_and_one_is_left_open() {
        let app = told("2026-12-01");
        let visits = app.store().visits(&VisitFilter::default()).unwrap();
        let count = |state| visits.iter().filter(|visit| visit.state == state).count();
        assert_eq!(count(VisitState::Open), 1);
        assert!(count(VisitState::Closed) >= 12);
        assert!(app.store().check().unwrap().sound());
        assert!(visits.iter().all(|visit| visit.date < app.today()), "nothing lies in the future, whatever the hour");
        for visit in &visits {
            let record = app.service_record(visit.id).unwrap();
            assert!(record.demonstration);
        }
        let again = told("2026-12-01");
        let fingerprints = |app: &App| -> Vec<_> {
            app.store().visits(&VisitFilter::default()).unwrap().into_iter().map(|visit| (visit.id, visit.fingerprint)).collect()
        };
        assert_eq!(fingerprints(&app), fingerprints(&again), "the same day tells the same story");
    }

    #[test]
    fn another_store_is_never_touched() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("own.db");
        drop(Store::open(&path, OpenMode::Create).unwrap());
        let before = std::fs::read(&path).unwrap();
        let day = "2026-12-01".parse().unwrap();
        let refused = build_demonstration(&path, day, chrono_tz::UTC).unwrap_err();
        assert!(matches!(refused, DemonstrationError::OtherStore { .. }), "{refused}");
        assert_eq!(std::fs::read(&path).unwrap(), before);
        assert_eq!(std::fs::read_dir(folder.path()).unwrap().count(), 1, "nothing is left beside it");

        let path = folder.path().join("demonstration.db");
        build_demonstration(&path, day, chrono_tz::UTC).unwrap();
        build_demonstration(&path, day, chrono_tz::UTC).unwrap();
        let at_work = Store::open(&path, OpenMode::MustExist).unwrap();
        let refused = build_demonstration(&path, day, chrono_tz::UTC).unwrap_err();
        assert!(matches!(refused, DemonstrationError::InUse { .. }), "{refused}");
        assert_eq!(at_work.setting(Setting::Demonstration.key()).unwrap().as_deref(), Some("yes"));
    }
}
