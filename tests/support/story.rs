//! A small notation for an appliance's history, so that a test reads like a log:
//!
//! ```text
//! 2026-05-12 J1 leak inspection: leak found
//! 2026-05-12 J1 recover 92.0 lb
//! 2026-05-14 J1 charge 220.0 lb replacement
//! ```
//!
//! A line is: date, an optional job that begins with `J`, what was done, then
//! mass, purpose, result or scope as the act has them.

use bubblepoint::ledger::{
    Act, Appliance, ApplianceFacts, ApplianceId, Category, ChargePurpose, EntryId, Line, Moment, RateMethod, RecoveryPurpose, Scope, Site,
    SiteFacts, SiteId, TestKind, TestResult, Transfer, Versions,
};
use bubblepoint::quantity::{Mass, MassUnit, Ratio, Weighing};
use bubblepoint::rules::{Assessment, DutyState, LeakRate, assess};
use chrono::NaiveDate;
use std::sync::Arc;
use uuid::Uuid;

/// An appliance, its site and its log.
pub struct Story {
    pub site: Site,
    pub appliance: Appliance,
    pub lines: Vec<Line>,
}

pub fn day(text: &str) -> NaiveDate {
    text.parse().unwrap()
}

pub fn mass(text: &str) -> Mass {
    let (number, unit) = text.split_once(' ').unwrap();
    Mass::parse(number, MassUnit::from_name(unit).unwrap()).unwrap()
}

impl Story {
    /// An appliance under `rulebooks`, annualizing.
    pub fn new(rulebooks: &str, category: Category, refrigerant: &str, full_charge: &str) -> Self {
        let site = SiteFacts::under(rulebooks.split_whitespace().map(str::to_owned).collect());
        let facts = ApplianceFacts {
            full_charge: (!full_charge.is_empty()).then(|| mass(full_charge)),
            ..ApplianceFacts::new(category, refrigerant)
        };
        Self {
            site: Site { id: SiteId(Uuid::nil()), name: "Site".to_owned(), versions: Versions::always(site) },
            appliance: Appliance {
                id: ApplianceId(Uuid::nil()),
                site: SiteId(Uuid::nil()),
                name: "R-1".to_owned(),
                versions: Versions::always(facts),
            },
            lines: Vec::new(),
        }
    }

    pub fn with(mut self, change: impl FnOnce(&mut ApplianceFacts)) -> Self {
        let mut facts = self.appliance.versions.latest().clone();
        change(&mut facts);
        self.appliance.versions = Versions::always(facts);
        self
    }

    pub fn installed(self, on: &str) -> Self {
        let on = day(on);
        self.with(|facts| facts.installed_on = Some(on))
    }

    pub fn rolling(mut self) -> Self {
        let mut facts = self.site.versions.latest().clone();
        facts.rate_method = RateMethod::RollingAverage;
        self.site.versions = Versions::always(facts);
        self
    }

    /// Adds the lines of a log in the notation above.
    pub fn log(mut self, text: &str) -> Self {
        for line in text.lines().map(str::trim).filter(|line| !line.is_empty()) {
            let position = i64::try_from(self.lines.len()).unwrap() + 1;
            self.lines.push(read(line, position));
        }
        self
    }

    pub fn on(&self, on: &str) -> Assessment<'_> {
        assess(&self.site, &self.appliance, &self.lines, day(on)).unwrap()
    }
}

fn read(text: &str, position: i64) -> Line {
    let (date, rest) = text.split_once(' ').unwrap();
    let (job, rest) = match rest.split_once(' ') {
        Some((job, rest)) if job.starts_with('J') => (Some(Arc::from(job)), rest),
        _ => (None, rest),
    };
    Line {
        entry: EntryId(Uuid::from_u128(u128::try_from(position).unwrap())),
        appliance: ApplianceId(Uuid::nil()),
        at: Moment { date: day(date), minute: None },
        position,
        job,
        act: act(rest),
    }
}

fn act(text: &str) -> Act {
    if let Some(rest) = text.strip_prefix("charge ") {
        let (transfer, purpose) = transfer(rest);
        let purpose = if purpose.is_empty() { ChargePurpose::Leak } else { ChargePurpose::from_name(&purpose).unwrap() };
        return Act::Charge { purpose, transfer };
    }
    if let Some(rest) = text.strip_prefix("recover ") {
        let (transfer, purpose) = transfer(rest);
        let purpose = if purpose.is_empty() { RecoveryPurpose::Repair } else { RecoveryPurpose::from_name(&purpose).unwrap() };
        return Act::Recover { purpose, transfer };
    }
    let (what, told) = text.split_once(": ").unwrap_or((text, ""));
    match what {
        "repair" => Act::Repair { temporary: told == "temporary" },
        "normal operation" => Act::NormalOperation,
        "mothball" => Act::Mothball,
        "retire" => Act::Retire,
        "note" => Act::Note,
        "plan made" => Act::PlanMade,
        "detection system check" => Act::DetectionSystemCheck,
        kind => {
            let mut words = told.split(", ").filter(|word| !word.is_empty()).peekable();
            let result = words.next_if(|word| TestResult::from_name(word).is_ok()).map(|word| TestResult::from_name(word).unwrap());
            let scope = words.next_if(|word| Scope::from_name(word).is_ok()).map(|word| Scope::from_name(word).unwrap());
            let partial = words.next_if_eq(&"partial").is_some();
            let running_hundredths = words.next().map(|word| word.strip_suffix(" h").unwrap().parse::<i64>().unwrap() * 100);
            Act::Test { kind: TestKind::from_name(kind).unwrap(), result, scope, partial, running_hundredths }
        }
    }
}

/// `92.0 lb seasonal`: the division is the last digit written.
fn transfer(text: &str) -> (Transfer, String) {
    let mut words = text.splitn(3, ' ');
    let written = Weighing::new(words.next().unwrap(), MassUnit::from_name(words.next().unwrap()).unwrap());
    let transfer = Transfer { mass: written.mass().unwrap(), cylinder: None, division: Some(written.last_digit()), hoses: Mass::ZERO };
    (transfer, words.next().unwrap_or_default().to_owned())
}

/// The latest rate under a rulebook.
pub fn rate<'a>(assessment: &'a Assessment, rulebook: &str) -> Option<&'a LeakRate> {
    assessment.rulebooks.iter().find(|judgement| judgement.id == rulebook).and_then(|judgement| judgement.rate())
}

/// One duty as text: `us-82f repair 2026-05-14 due 2026-06-13 met 2026-05-13`.
pub fn told(assessment: &Assessment) -> Vec<String> {
    assessment
        .duties
        .iter()
        .map(|duty| {
            let due = duty.due.map_or_else(|| "none".to_owned(), |due| due.to_string());
            let state = match duty.state(assessment.on) {
                DutyState::Met | DutyState::MetLate => format!("{} {}", duty.state(assessment.on).name(), duty.met_on.unwrap()),
                other => other.name().to_owned(),
            };
            format!("{} {} {} due {due} {state}", duty.rulebook, duty.kind.name(), duty.from)
        })
        .collect()
}

pub fn ratio(text: &str) -> Ratio {
    let (numer, denom) = text.split_once('/').unwrap_or((text, "1"));
    Ratio::new(numer.parse().unwrap(), denom.parse().unwrap())
}
