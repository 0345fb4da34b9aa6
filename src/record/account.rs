//! The annual account: what came, went and was lost in one calendar year, per
//! gas and per appliance, and how its duties were kept.

use super::exact;
use super::service::{Notice, Party};
use crate::quantity::{Mass, MassUnit, Ratio};
use chrono::NaiveDate;
use serde::{Deserialize, Serialize};

/// The account of one calendar year.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct AnnualAccount {
    pub year: i32,
    /// Last day counted: 31 December, or an earlier day while the year runs.
    pub to: NaiveDate,
    /// `None`: all owners.
    pub owner: Option<String>,
    /// Who keeps the account.
    pub company: Party,
    /// Made by the demonstration: said on every page.
    pub demonstration: bool,
    /// Program and version.
    pub program: String,
    /// Unit in which paper shows masses; files are always in kg.
    pub unit: MassUnit,
    /// One per gas, sorted by designation.
    pub gases: Vec<GasAccount>,
    /// One per appliance, sorted by site, then identification.
    pub appliances: Vec<ApplianceAccount>,
    /// Duties that fell due in the year.
    pub duties: Vec<DutyTally>,
    /// What the figures do not say by themselves, as visits still open.
    pub remarks: Vec<Notice>,
}

/// One line of masses. `None` where a column has no meaning for the line, or
/// where the figure is not known; paper prints a dash.
///
/// For a gas the line is that of the cylinders:
/// opening + bought + recovered − charged + past cylinders − sent away − lost
/// from cylinders = closing, and `lost` is what appliances lost. For an appliance opening and closing are the full
/// charge on the first and last day; nothing is bought or sent away.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct AccountLine {
    pub opening: Option<Mass>,
    pub bought: Option<Mass>,
    pub charged: Mass,
    pub recovered: Mass,
    /// To reclaimers and for destruction, and the heels of cylinders that were returned.
    pub sent_away: Option<Mass>,
    pub lost: Mass,
    pub closing: Option<Mass>,
    /// Leaked or vented from cylinders, as written down.
    #[serde(default)]
    pub lost_from_cylinders: Option<Mass>,
    /// Charged less recovered without a cylinder of this store: factory charges, history.
    #[serde(default)]
    pub past_cylinders: Mass,
}

impl AccountLine {
    /// Of a gas's line, what closing is more than the movements explain;
    /// `None` when a part is not known. Anything but zero is printed.
    pub fn unexplained(&self) -> Option<Mass> {
        let explained = self.opening? + self.bought? + self.recovered - self.charged + self.past_cylinders;
        Some(self.closing? - (explained - self.sent_away? - self.lost_from_cylinders.unwrap_or_default()))
    }

    /// Adds another line column by column; what is not known in one stays not known.
    pub fn plus(&self, other: &Self) -> Self {
        let both = |a: Option<Mass>, b: Option<Mass>| a.zip(b).map(|(a, b)| a + b);
        Self {
            opening: both(self.opening, other.opening),
            bought: both(self.bought, other.bought),
            charged: self.charged + other.charged,
            recovered: self.recovered + other.recovered,
            sent_away: both(self.sent_away, other.sent_away),
            lost: self.lost + other.lost,
            closing: both(self.closing, other.closing),
            lost_from_cylinders: both(self.lost_from_cylinders, other.lost_from_cylinders),
            past_cylinders: self.past_cylinders + other.past_cylinders,
        }
    }
}

/// The loss of a line, weighted.
#[derive(Debug, Clone, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct WeightedLoss {
    /// ODP-weighted, in kg; `None`: the table lacks a part.
    #[serde(with = "exact::option")]
    pub odp_kg: Option<Ratio>,
    /// CO₂ equivalent, in t; `None`: the table lacks a part.
    #[serde(with = "exact::option")]
    pub co2e_t: Option<Ratio>,
    pub odp_table: String,
    pub gwp_table: String,
}

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct GasAccount {
    /// Designation, as `R-448A`.
    pub refrigerant: String,
    #[serde(flatten)]
    pub line: AccountLine,
    #[serde(flatten)]
    pub loss: WeightedLoss,
}

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct ApplianceAccount {
    pub site: String,
    pub appliance: String,
    /// Owner on the last day.
    pub owner: String,
    pub refrigerant: String,
    #[serde(flatten)]
    pub line: AccountLine,
    #[serde(flatten)]
    pub loss: WeightedLoss,
    /// What was assumed or stands out, as `assumed full at retirement`; or empty.
    pub remark: String,
}

/// How often one duty of one rulebook was kept.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct DutyTally {
    /// As `initial verification test`.
    pub duty: String,
    /// As `us-82f`.
    pub rulebook: String,
    #[serde(flatten)]
    pub counts: DutyCounts,
}

#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct DutyCounts {
    /// Met by the due day.
    pub in_time: u32,
    /// Met after it.
    pub late: u32,
    /// Due day past and not met.
    pub not_done: u32,
    /// Not met, due day not past or none.
    pub open: u32,
}

impl AnnualAccount {
    /// All duties together.
    pub fn duty_counts(&self) -> DutyCounts {
        self.duties.iter().fold(DutyCounts::default(), |sum, tally| DutyCounts {
            in_time: sum.in_time + tally.counts.in_time,
            late: sum.late + tally.counts.late,
            not_done: sum.not_done + tally.counts.not_done,
            open: sum.open + tally.counts.open,
        })
    }

    /// ODP-weighted and CO₂-equivalent loss of all gases; `None` where one gas's is not known.
    pub fn weighted_loss(&self) -> (Option<Ratio>, Option<Ratio>) {
        let zero = Ratio::from_integer(0);
        let sum = |part: fn(&WeightedLoss) -> Option<Ratio>| {
            self.gases.iter().map(|gas| part(&gas.loss)).try_fold(zero, |sum, value| value.map(|value| sum + value))
        };
        (sum(|loss| loss.odp_kg), sum(|loss| loss.co2e_t))
    }
}

const COLUMNS: [&str; 28] = [
    "line",
    "year",
    "to",
    "owner",
    "site",
    "appliance",
    "refrigerant",
    "opening_kg",
    "bought_kg",
    "charged_kg",
    "recovered_kg",
    "sent_away_kg",
    "lost_kg",
    "closing_kg",
    "odp_kg",
    "odp_table",
    "co2e_t",
    "gwp_table",
    "duty",
    "rulebook",
    "in_time",
    "late",
    "not_done",
    "open",
    "remark",
    "lost_from_cylinders_kg",
    "past_cylinders_kg",
    "unexplained_kg",
];

/// The account as CSV, UTF-8 with commas: one line a gas (`line` is `gas`), an
/// appliance (`appliance`), a duty (`duty`) and a remark (`remark`). Masses are
/// exact decimals in kg; empty where not known.
pub fn account_csv(account: &AnnualAccount) -> String {
    let mut rows: Vec<[String; COLUMNS.len()]> = Vec::new();
    let all = account.owner.clone().unwrap_or_default();
    let blank = |kind: &str, owner: &str| {
        let mut row: [String; COLUMNS.len()] = Default::default();
        row[0] = kind.to_owned();
        row[1] = account.year.to_string();
        row[2] = account.to.to_string();
        row[3] = owner.to_owned();
        row
    };
    for gas in &account.gases {
        let mut row = blank("gas", &all);
        row[6].clone_from(&gas.refrigerant);
        fill(&mut row, &gas.line, &gas.loss);
        rows.push(row);
    }
    for appliance in &account.appliances {
        let mut row = blank("appliance", &appliance.owner);
        row[4].clone_from(&appliance.site);
        row[5].clone_from(&appliance.appliance);
        row[6].clone_from(&appliance.refrigerant);
        fill(&mut row, &appliance.line, &appliance.loss);
        row[24].clone_from(&appliance.remark);
        rows.push(row);
    }
    for tally in &account.duties {
        let mut row = blank("duty", &all);
        row[18].clone_from(&tally.duty);
        row[19].clone_from(&tally.rulebook);
        let counts = tally.counts;
        for (cell, count) in row[20..24].iter_mut().zip([counts.in_time, counts.late, counts.not_done, counts.open]) {
            *cell = count.to_string();
        }
        rows.push(row);
    }
    for remark in &account.remarks {
        let mut row = blank("remark", &all);
        row[24] = if remark.source.is_empty() { remark.text.clone() } else { format!("{} ({})", remark.text, remark.source) };
        rows.push(row);
    }
    let mut text = line_of(COLUMNS.iter().copied());
    for row in &rows {
        text.push_str(&line_of(row.iter().map(String::as_str)));
    }
    text
}

fn fill(row: &mut [String; COLUMNS.len()], line: &AccountLine, loss: &WeightedLoss) {
    let maybe = |mass: Option<Mass>| mass.map(Mass::kg_text).unwrap_or_default();
    row[7] = maybe(line.opening);
    row[8] = maybe(line.bought);
    row[9] = line.charged.kg_text();
    row[10] = line.recovered.kg_text();
    row[11] = maybe(line.sent_away);
    row[12] = line.lost.kg_text();
    row[13] = maybe(line.closing);
    row[14] = loss.odp_kg.map(exact::text).unwrap_or_default();
    row[15].clone_from(&loss.odp_table);
    row[16] = loss.co2e_t.map(exact::text).unwrap_or_default();
    row[17].clone_from(&loss.gwp_table);
    row[25] = maybe(line.lost_from_cylinders);
    row[26] = line.past_cylinders.kg_text();
    row[27] = maybe(line.unexplained());
}

/// RFC 4180, with a plain line feed.
fn line_of<'a>(cells: impl Iterator<Item = &'a str>) -> String {
    let quoted: Vec<String> = cells
        .map(|cell| if cell.contains([',', '"', '\n', '\r']) { format!("\"{}\"", cell.replace('"', "\"\"")) } else { cell.to_owned() })
        .collect();
    quoted.join(",") + "\n"
}

/// The account as JSON, indented, masses as exact decimal strings in kg.
///
/// # Errors
/// None is known to occur; a failing writer would be reported.
pub fn account_json(account: &AnnualAccount) -> Result<String, serde_json::Error> {
    serde_json::to_string_pretty(account).map(|text| text + "\n")
}

#[cfg(test)]
mod tests {
    use super::*;

    fn kg(text: &str) -> Mass {
        Mass::parse(text, MassUnit::Kilogram).unwrap()
    }

    fn account() -> AnnualAccount {
        let line = AccountLine {
            opening: Some(kg("20")),
            bought: Some(kg("30")),
            charged: kg("12.5"),
            recovered: kg("4"),
            sent_away: Some(kg("4")),
            lost: kg("4.5359237"),
            closing: Some(kg("37.4")),
            lost_from_cylinders: Some(kg("0.25")),
            past_cylinders: kg("0.5"),
        };
        let loss = WeightedLoss {
            odp_kg: Some(Ratio::new(1, 4)),
            co2e_t: None,
            odp_table: "40 CFR 82, appendix A".into(),
            gwp_table: "40 CFR 84.64".into(),
        };
        AnnualAccount {
            year: 2026,
            to: NaiveDate::from_ymd_opt(2026, 12, 31).unwrap(),
            owner: None,
            company: Party::default(),
            demonstration: false,
            program: "bubblepoint 0.1.0".into(),
            unit: MassUnit::Kilogram,
            gases: vec![GasAccount { refrigerant: "R-22".into(), line, loss: loss.clone() }],
            appliances: vec![ApplianceAccount {
                site: "Fish market, hall \"B\"".into(),
                appliance: "R-1".into(),
                owner: "Harbour Estates".into(),
                refrigerant: "R-22".into(),
                line: AccountLine { opening: None, bought: None, sent_away: None, closing: None, ..line },
                loss,
                remark: String::new(),
            }],
            duties: vec![DutyTally {
                duty: "repair".into(),
                rulebook: "us-82f".into(),
                counts: DutyCounts { in_time: 2, late: 1, not_done: 0, open: 3 },
            }],
            remarks: vec![],
        }
    }

    #[test]
    fn what_movements_do_not_explain_is_told() {
        // 20 + 30 + 4 − 12.5 + 0.5 − 4 − 0.25 = 37.75.
        assert_eq!(account().gases[0].line.unexplained(), Some(kg("-0.35")));
        assert_eq!(account().appliances[0].line.unexplained(), None);
    }

    #[test]
    fn csv_reads_back() {
        let text = account_csv(&account());
        let mut reader = csv::Reader::from_reader(text.as_bytes());
        assert_eq!(reader.headers().unwrap(), COLUMNS.as_slice());
        let rows: Vec<csv::StringRecord> = reader.records().map(Result::unwrap).collect();
        assert_eq!(rows.len(), 3);
        assert_eq!(&rows[0][12], "4.5359237");
        assert_eq!(&rows[0][16], "", "a figure that is not known is empty, never zero");
        assert_eq!(&rows[1][4], "Fish market, hall \"B\"");
        assert_eq!(&rows[1][7], "");
        assert_eq!(rows[2].iter().skip(20).take(4).collect::<Vec<_>>(), ["2", "1", "0", "3"]);
    }

    #[test]
    fn json_reads_back() {
        let text = account_json(&account()).unwrap();
        assert!(text.contains("\"lost\": \"4.5359237\""), "{text}");
        assert!(text.contains("\"co2e_t\": null"));
        assert_eq!(serde_json::from_str::<AnnualAccount>(&text).unwrap(), account());
    }

    #[test]
    fn unknown_stays_unknown_in_sums() {
        let account = account();
        assert_eq!(account.weighted_loss(), (Some(Ratio::new(1, 4)), None));
        let sum = account.gases[0].line.plus(&account.appliances[0].line);
        assert_eq!((sum.opening, sum.charged), (None, kg("25")));
    }
}
