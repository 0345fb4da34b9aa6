//! Lines of a log.

use super::table::Fields;
use crate::ledger::{ChargePurpose, Moment, RecoveryPurpose, Scope, TestKind, TestResult, UnknownWord};
use crate::quantity::{Mass, MassUnit, Weighing};
use chrono::NaiveDate;

/// One line of a log, read but not yet tied to the registers.
#[derive(Debug)]
pub struct LogRow {
    pub file: String,
    pub line: u64,
    /// Day and act could be read: it has its place in the appliance's history.
    /// What else could not be read has a stand-in.
    pub placed: bool,
    pub at: Moment,
    pub appliance: String,
    /// Empty where the identification occurs at one site only.
    pub site: String,
    pub job: String,
    pub what: LogWhat,
    /// Empty in history that does not say.
    pub cylinder: String,
    pub method: String,
    pub place: String,
    pub running_hours: String,
    pub person: String,
    pub note: String,
}

/// What a line says was done.
#[derive(Debug)]
pub enum LogWhat {
    Charge {
        purpose: ChargePurpose,
        mass: Mass,
        written: Weighing,
    },
    Recover {
        purpose: RecoveryPurpose,
        mass: Mass,
        written: Weighing,
    },
    Recycle,
    Test {
        kind: TestKind,
        result: Option<TestResult>,
        scope: Option<Scope>,
        running_hundredths: Option<i64>,
    },
    Repair {
        temporary: bool,
    },
    NormalOperation,
    DetectionSystemCheck,
    Mothball,
    /// What is not named stays as it was.
    Retrofit {
        refrigerant: Option<String>,
        full_charge: Option<(Mass, Weighing)>,
    },
    Retire,
    PlanMade,
    ReportSent,
    Note,
}

const TEMPORARY: &str = "temporary";
const WHATS: &str = "charge, recover, recycle, leak test, leak inspection, repair, initial verification test, \
    follow-up verification test, normal operation, detection system check, mothball, retrofit, retire, plan made, report sent, note";

pub(super) fn log_row(fields: &mut Fields) -> LogRow {
    let date = fields.day("date");
    let minute = fields.minute("time");
    let what = what(fields);
    if let Some(what) = &what {
        check_unused(fields, what);
    }
    LogRow {
        file: fields.file().to_owned(),
        line: fields.line(),
        placed: date.is_some() && what.is_some(),
        at: Moment { date: date.unwrap_or(NaiveDate::MIN), minute },
        appliance: fields.text("appliance").to_owned(),
        site: fields.text("site").to_owned(),
        job: fields.text("job").to_owned(),
        what: what.unwrap_or(LogWhat::Note),
        cylinder: fields.text("cylinder").to_owned(),
        method: fields.text("method").to_owned(),
        place: fields.text("place").to_owned(),
        running_hours: fields.text("running_hours").to_owned(),
        person: fields.text("person").to_owned(),
        note: fields.text("note").to_owned(),
    }
}

fn what(fields: &mut Fields) -> Option<LogWhat> {
    let word = fields.text("what").to_owned();
    let what = match word.as_str() {
        "" => return None,
        "charge" => {
            let purpose = fields.word("purpose", ChargePurpose::from_name).unwrap_or(ChargePurpose::Leak);
            let (mass, written) = amount(fields);
            LogWhat::Charge { purpose, mass, written }
        }
        "recover" => {
            let purpose = fields.word("purpose", RecoveryPurpose::from_name).unwrap_or(RecoveryPurpose::Repair);
            let (mass, written) = amount(fields);
            LogWhat::Recover { purpose, mass, written }
        }
        "recycle" => LogWhat::Recycle,
        "repair" => {
            fields.word("result", result_or_temporary);
            LogWhat::Repair { temporary: fields.text("result") == TEMPORARY }
        }
        "normal operation" => LogWhat::NormalOperation,
        "detection system check" => LogWhat::DetectionSystemCheck,
        "mothball" => LogWhat::Mothball,
        "retrofit" => LogWhat::Retrofit {
            refrigerant: fields.gas("new_refrigerant"),
            full_charge: fields.positive_mass("new_full_charge", "new_unit"),
        },
        "retire" => LogWhat::Retire,
        "plan made" => LogWhat::PlanMade,
        "report sent" => LogWhat::ReportSent,
        "note" => LogWhat::Note,
        other => match TestKind::from_name(other) {
            Ok(kind) => test(fields, kind),
            Err(_) => {
                fields.fault("what", format!("\u{201c}{other}\u{201d} is not something a log can say; known are {WHATS}"));
                return None;
            }
        },
    };
    Some(what)
}

/// Words, units and gases must be known also where the act has no use for them.
fn check_unused(fields: &mut Fields, what: &LogWhat) {
    if !matches!(what, LogWhat::Charge { .. } | LogWhat::Recover { .. }) {
        fields.word("purpose", any_purpose);
        fields.unit("unit");
    }
    if !matches!(what, LogWhat::Test { .. }) {
        fields.word("result", result_or_temporary);
        fields.word("scope", Scope::from_name);
    }
    if !matches!(what, LogWhat::Retrofit { .. }) {
        fields.gas("new_refrigerant");
    }
    fields.unit("new_unit");
}

/// A result, or `temporary`: a repair that is not for good.
fn result_or_temporary(word: &str) -> Result<(), UnknownWord> {
    if word == TEMPORARY {
        return Ok(());
    }
    TestResult::from_name(word).map(drop).map_err(|unknown| UnknownWord { known: format!("{}, {TEMPORARY}", unknown.known), ..unknown })
}

fn any_purpose(word: &str) -> Result<(), UnknownWord> {
    let Err(charge) = ChargePurpose::from_name(word) else { return Ok(()) };
    let Err(recovery) = RecoveryPurpose::from_name(word) else { return Ok(()) };
    let known = format!("{} (of a charge), {} (of a recovery)", charge.known, recovery.known);
    Err(UnknownWord { what: "purpose", found: word.to_owned(), known })
}

fn test(fields: &mut Fields, kind: TestKind) -> LogWhat {
    let result = fields.word("result", TestResult::from_name);
    let scope = fields.word("scope", Scope::from_name);
    let running_hundredths = fields.hundredths_of_hours("running_hours");
    LogWhat::Test { kind, result, scope, running_hundredths }
}

fn amount(fields: &mut Fields) -> (Mass, Weighing) {
    if fields.text("amount").is_empty() {
        fields.fault("amount", "is empty; a charge or recovery needs its mass".to_owned());
    }
    fields.positive_mass("amount", "unit").unwrap_or((Mass::ZERO, Weighing::new("", MassUnit::Kilogram)))
}
