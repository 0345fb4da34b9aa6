//! Captions of facts: plain lower-case words that stand above or beside a value.

pub const NET: &str = "net";
pub const SCALE: &str = "scale";
pub const CYLINDER: &str = "cylinder";
pub const GAS_FROM: &str = "gas from";
pub const PURPOSE: &str = "purpose";
pub const CHARGED_AS: &str = "charged as";
pub const AFTERWARDS: &str = "afterwards";
pub const RESULT: &str = "result";
pub const LOOKED_AT: &str = "looked at";
pub const GAS_FROM_THEN_ON: &str = "gas from then on";
pub const METHOD: &str = "method";
pub const INSTRUMENT: &str = "instrument";
pub const LEAK: &str = "leak";
pub const PLACE: &str = "place";
pub const PARTS: &str = "parts";
pub const HOURS_IT_RAN: &str = "hours it ran";
pub const LEVEL_OR_READINGS: &str = "level or readings";
pub const WHY_IT_WEIGHED_OTHERWISE: &str = "why it weighed otherwise";
pub const REASON: &str = "reason";
pub const JOB: &str = "job";
pub const READ_FROM: &str = "read from";
pub const FINGERPRINT: &str = "fingerprint";
pub const TECHNICIAN: &str = "technician";
pub const REPRESENTATIVE: &str = "representative";
