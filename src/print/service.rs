//! The service record on paper.

use super::fonts::Fonts;
use super::layout::{Flow, Running, SHORT, Stamp};
use super::mark::rising_bubbles;
use super::plate::{Cell, Column, Field, dashed, grid, table};
use super::sheet::{Block, Paper, Style, paragraph};
use super::{PrintError, must_show, part, pdf, signing, words};
use crate::record::{Counterparty, RecordState, ServiceRecord};
use sha2::{Digest, Sha256};

/// A service record as PDF. The same record on the same paper gives the same bytes.
///
/// # Errors
/// [`PrintError::Character`] when a name or an address holds a character that
/// the font lacks; elsewhere such a character is printed as `[U+4E2D]`.
pub fn service_record(record: &ServiceRecord, paper: Paper) -> Result<Vec<u8>, PrintError> {
    let fonts = Fonts::get()?;
    check_names(fonts, record)?;
    let mut flow = Flow::new(fonts, paper, running(fonts, record));
    title(&mut flow, fonts, record);
    visit(&mut flow, fonts, record);
    if record.appliances.is_empty() {
        flow.space(GAP);
        flow.put(paragraph(fonts, words::NO_APPLIANCES, Style::BODY, flow.width()));
    }
    for one in &record.appliances {
        flow.space(GAP);
        part::appliance(&mut flow, fonts, record, one);
    }
    flow.space(GAP);
    cautions(&mut flow, fonts, record);
    flow.space(GAP);
    let last = foot(flow.width(), fonts, record);
    signing::signatures(&mut flow, fonts, record, last.iter().map(|line| line.height).sum());
    flow.space(GAP);
    flow.put_together(last);
    let pages = flow.finish();
    pdf::write(fonts, &pages, &about(record, paper)?)
}

/// The second id in the trailer of this record's print on this paper: its own
/// among all prints, known without laying it out.
///
/// # Errors
/// As [`service_record`].
pub fn print_id(record: &ServiceRecord, paper: Paper) -> Result<[u8; 16], PrintError> {
    Ok(about(record, paper)?.print_id)
}

/// Between two plates.
const GAP: f32 = 8.0;
/// Columns of the grid in a plate.
pub(super) const COLUMNS: usize = 6;

fn check_names(fonts: &Fonts, record: &ServiceRecord) -> Result<(), PrintError> {
    let check = |field: &str, text: &str| must_show(fonts, field, text);
    check("the company\u{2019}s name", &record.company.name)?;
    check("the company\u{2019}s address", &record.company.address)?;
    check("the company\u{2019}s certificate", &record.company.certificate)?;
    check("the site\u{2019}s name", &record.site.name)?;
    check("the site\u{2019}s address", &record.site.address)?;
    check("the owner\u{2019}s name", &record.site.owner)?;
    check("the operator\u{2019}s name", &record.site.operator)?;
    for person in &record.people {
        check("a technician\u{2019}s name", &person.name)?;
        check("a technician\u{2019}s certificate", &person.certificate)?;
        check("a technician\u{2019}s company", &person.company)?;
        check("a technician\u{2019}s company certificate", &person.company_certificate)?;
    }
    for part in &record.appliances {
        check("an appliance\u{2019}s identification", &part.appliance.name)?;
        check("an appliance\u{2019}s place", &part.appliance.place)?;
        for entry in &part.entries {
            check("the name of who made an entry", &entry.person)?;
        }
    }
    if let Some(signed) = &record.technician {
        check("the signing technician\u{2019}s name", &signed.name)?;
    }
    match &record.counterparty {
        Some(Counterparty::Signed { signed }) => check("the name of the owner\u{2019}s or operator\u{2019}s representative", &signed.name),
        Some(Counterparty::Refused { name, .. } | Counterparty::SignsLater { name }) => {
            check("the name of the owner\u{2019}s or operator\u{2019}s representative", name)
        }
        Some(Counterparty::NobodyPresent) | None => Ok(()),
    }
}

fn short_fingerprint(record: &ServiceRecord) -> String {
    record.fingerprint.as_ref().map(|fingerprint| fingerprint.short()).unwrap_or_default()
}

fn running(fonts: &Fonts, record: &ServiceRecord) -> Running {
    let when = words::days(record.first_day, record.last_day);
    let stamp = |word: &str, below: &str| Some(Stamp { word: word.to_owned(), below: below.to_owned() });
    let short = short_fingerprint(record);
    let mut foot = vec![words::SERVICE_RECORD.to_lowercase()];
    if !short.is_empty() {
        foot.push(format!("fingerprint {short}"));
        foot.push(words::copy(record.copy));
    }
    foot.push(fonts.visible(&record.program));
    foot.push(fonts.visible(&record.site.name));
    Running {
        head: [words::SERVICE_RECORD, &record.site.name, &when].join(words::DOT),
        stamp: match &record.state {
            RecordState::Open => stamp(words::DRAFT, words::DRAFT_BELOW),
            RecordState::Imported { .. } => stamp(words::IMPORTED, words::IMPORTED_BELOW),
            RecordState::Closed { .. } => None,
        },
        head_right: if short.is_empty() { String::new() } else { format!("{short}{}{}", words::DOT, words::copy(record.copy)) },
        foot: foot.join(words::DOT),
        foot_notice: if record.demonstration { words::DEMONSTRATION.to_owned() } else { String::new() },
    }
}

fn title(flow: &mut Flow, fonts: &Fonts, record: &ServiceRecord) {
    let width = flow.width();
    let mut block = Block::empty(44.0);
    block.lay(rising_bubbles(34.0), 0.0, -6.0);
    block.text(44.0, 17.0, words::SERVICE_RECORD, Style::TITLE);
    block.text(44.5, 31.0, &subtitle(fonts, record).0, Style::BODY);
    if let Some(fingerprint) = &record.fingerprint {
        block.text_right(fonts, width, 3.0, "fingerprint", Style::CAPTION);
        block.text_right(fonts, width, 18.0, &fingerprint.short(), Style { size: 15.0, ..Style::LEAD });
        block.text_right(fonts, width, 31.0, &words::copy(record.copy), Style::BODY);
    }
    flow.put(block);
}

/// The line under the title: days, jobs and zone; where they are too long, the
/// days alone, and whether jobs and zone are still to be said.
fn subtitle(fonts: &Fonts, record: &ServiceRecord) -> (String, bool) {
    let when = words::days(record.first_day, record.last_day);
    let mut parts = vec![when.clone()];
    if !record.jobs.is_empty() {
        parts.push(format!("job {}", record.jobs.join(", ")));
    }
    if !record.site.time_zone.is_empty() {
        parts.push(format!("times local to {}", record.site.time_zone));
    }
    let whole = fonts.visible(&parts.join(words::DOT));
    let fits = fonts.width(&whole, Style::BODY.face, Style::BODY.size) < 360.0;
    if fits { (whole, false) } else { (when, true) }
}

fn visit(flow: &mut Flow, fonts: &Fonts, record: &ServiceRecord) {
    let state = match &record.state {
        RecordState::Open => "open".to_owned(),
        RecordState::Closed { on, at } => format!("closed {}, {at}", words::day(*on)),
        RecordState::Imported { .. } => words::IMPORTED.to_owned(),
    };
    flow.open_plate(&record.site.name, &state, 60.0);
    let inner = flow.inner();
    let site = &record.site;
    let mut fields = Vec::new();
    if flow.strip_cuts(&site.name, &state) {
        fields.push(Field::required("site", &site.name).strong());
    }
    fields.extend([
        Field::required("site address", &site.address),
        Field::required("owner", &site.owner),
        Field::required("operator", &site.operator),
    ]);
    if subtitle(fonts, record).1 {
        fields.extend(Field::known("job", &record.jobs.join(", ")));
        fields.extend(Field::known("times are local to", &site.time_zone));
    }
    if let RecordState::Imported { from } = &record.state {
        fields.extend(Field::known("read from", from));
    }
    for row in grid(fonts, inner, COLUMNS, &fields) {
        flow.put(row);
    }
    // Whoever reads the first page alone must know that the record was corrected.
    if !record.remarks.is_empty() {
        let mut rows = vec![Block::empty(1.0)];
        rows.extend(record.remarks.iter().map(|remark| dashed(fonts, inner, remark)));
        rows.push(Block::empty(4.0));
        flow.put_together(parted(inner, rows));
    }
    let company = [
        Field::required("service company", &record.company.name).strong(),
        Field::required("company address", &record.company.address),
        Field::required("company certificate", &record.company.certificate),
    ];
    flow.put_together(parted(inner, grid(fonts, inner, COLUMNS, &company)));
    people(flow, fonts, record);
    flow.close_plate();
}

/// The same rows, parted by a hairline from what stands above.
fn parted(width: f32, mut rows: Vec<Block>) -> Vec<Block> {
    if let Some(first) = rows.first_mut() {
        *first = Block::empty(5.0).below(0.0, std::mem::take(first)).parted(width, 0.25);
    }
    rows
}

fn people(flow: &mut Flow, fonts: &Fonts, record: &ServiceRecord) {
    let inner = flow.inner();
    if record.people.is_empty() {
        flow.put_together(parted(inner, grid(fonts, inner, COLUMNS, &[Field::required("work done by", "")])));
    }
    for person in &record.people {
        let mut fields = vec![Field::required("work done by", &person.name).strong(), Field::required("certificate", &person.certificate)];
        fields.extend(Field::known("kind", &person.certificate_kind));
        fields.extend(Field::known("valid", &person.certificate_validity));
        fields.extend(Field::known("company", &person.company));
        fields.extend(Field::known("company certificate", &person.company_certificate));
        flow.put_together(parted(inner, grid(fonts, inner, COLUMNS, &fields)));
    }
}

fn cautions(flow: &mut Flow, fonts: &Fonts, record: &ServiceRecord) {
    const TITLE: &str = "Cautions acknowledged";
    let inner = flow.inner();
    if record.cautions.is_empty() {
        flow.open_plate(TITLE, "", 30.0);
        flow.put(paragraph(fonts, words::NO_CAUTIONS, Style::BODY, inner));
        flow.close_plate();
        return;
    }
    let columns = [Column::left("caution", 4.4), Column::left("basis", 1.9), Column::left("when, by whom", 1.7)];
    let rows: Vec<Vec<Cell>> = record
        .cautions
        .iter()
        .map(|caution| {
            let who = [caution.at.as_str(), caution.person.as_str()].into_iter().filter(|t| !t.is_empty()).collect::<Vec<_>>();
            vec![Cell::plain(&caution.text), Cell::plain(&caution.basis), Cell::plain(who.join("\n"))]
        })
        .collect();
    let set = table(fonts, inner, &columns, &rows, 8.0);
    // The strip never stands alone: a few cautions go with it, of many the first.
    let rows: f32 = set.rows.iter().map(|row| row.height).sum();
    let first = set.rows.first().map_or(0.0, |row| row.height);
    flow.open_plate(TITLE, "", set.head.height + if rows <= SHORT { rows } else { first });
    flow.put_table(None, set.head, set.rows);
    flow.close_plate();
}

/// Fingerprint, rulebooks, and where local codes come first.
fn foot(width: f32, fonts: &Fonts, record: &ServiceRecord) -> Vec<Block> {
    let mut lines: Vec<Block> = Vec::new();
    if let Some(fingerprint) = &record.fingerprint {
        let text = format!("Fingerprint (SHA-256 of the closed record): {}", fingerprint.full);
        lines.push(paragraph(fonts, &text, Style::CAPTION, width));
    }
    let books: Vec<String> = record.rulebooks.iter().map(|book| format!("{} ({}, version {})", book.name, book.id, book.version)).collect();
    if !books.is_empty() {
        lines.push(paragraph(fonts, &format!("Judged by {}.", books.join("; ")), Style::CAPTION, width));
    }
    lines.push(paragraph(fonts, &format!("{} {}", words::LOCAL_CODES, words::CORRECTIONS), Style::CAPTION, width));
    lines
}

fn about(record: &ServiceRecord, paper: Paper) -> Result<pdf::About, PrintError> {
    let text = serde_json::to_vec(record).map_err(|why| PrintError::Pdf(why.to_string()))?;
    let whole = Sha256::new().chain_update(&text).chain_update(format!("{paper:?}")).finalize();
    let named = match &record.fingerprint {
        Some(fingerprint) => Sha256::digest(fingerprint.full.as_bytes()),
        None => Sha256::digest(&text),
    };
    Ok(pdf::About {
        title: format!("{}, {}, {}", words::SERVICE_RECORD, record.site.name, words::days(record.first_day, record.last_day)),
        author: record.company.name.clone(),
        subject: record.appliances.iter().map(|part| part.appliance.name.as_str()).collect::<Vec<_>>().join(", "),
        program: record.program.clone(),
        record_id: first_half(&named),
        print_id: first_half(&whole),
    })
}

/// The first 16 bytes of a digest.
pub(super) fn first_half(digest: &[u8]) -> [u8; 16] {
    let mut id = [0; 16];
    for (to, from) in id.iter_mut().zip(digest) {
        *to = *from;
    }
    id
}
