//! Lines of a log.

use super::table::Fields;
use crate::ledger::{ChargePurpose, Moment, RecoveryPurpose, Scope, TestKind, TestResult};
use crate::quantity::{Mass, MassUnit, Ratio, Weighing};
use chrono::NaiveDate;

/// One line of a log, read but not yet tied to the registers.
#[derive(Debug)]
pub struct LogRow {
    pub file: String,
    pub line: u64,
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

const WHATS: &str = "charge, recover, recycle, leak test, leak inspection, repair, initial verification test, \
    follow-up verification test, normal operation, detection system check, mothball, retrofit, retire, plan made, report sent, note";

pub(super) fn log_row(fields: &mut Fields) -> LogRow {
    let date = fields.day("date").unwrap_or(NaiveDate::MIN);
    let minute = fields.minute("time");
    let what = what(fields);
    LogRow {
        file: fields.file().to_owned(),
        line: fields.line(),
        at: Moment { date, minute },
        appliance: fields.text("appliance").to_owned(),
        site: fields.text("site").to_owned(),
        job: fields.text("job").to_owned(),
        what,
        cylinder: fields.text("cylinder").to_owned(),
        method: fields.text("method").to_owned(),
        place: fields.text("place").to_owned(),
        running_hours: fields.text("running_hours").to_owned(),
        person: fields.text("person").to_owned(),
        note: fields.text("note").to_owned(),
    }
}

fn what(fields: &mut Fields) -> LogWhat {
    let word = fields.text("what").to_owned();
    match word.as_str() {
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
            let temporary = fields.text("result") == "temporary";
            if !temporary {
                fields.word("result", TestResult::from_name);
            }
            LogWhat::Repair { temporary }
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
                LogWhat::Note
            }
        },
    }
}

fn test(fields: &mut Fields, kind: TestKind) -> LogWhat {
    let result = fields.word("result", TestResult::from_name);
    let scope = fields.word("scope", Scope::from_name);
    // Rounded down: a duty that asks for 24 hours is not met by 23.999.
    let running_hundredths =
        fields.decimal("running_hours").and_then(|hours| i64::try_from((hours * Ratio::from_integer(100)).floor().to_integer()).ok());
    LogWhat::Test { kind, result, scope, running_hundredths }
}

fn amount(fields: &mut Fields) -> (Mass, Weighing) {
    if fields.text("amount").is_empty() {
        fields.fault("amount", "is empty; a charge or recovery needs its mass".to_owned());
    }
    fields.positive_mass("amount", "unit").unwrap_or((Mass::ZERO, Weighing::new("", MassUnit::Kilogram)))
}
