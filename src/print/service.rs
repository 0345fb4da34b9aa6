//! The service record on paper.

use super::chart::leak_rate_bar;
use super::fonts::Fonts;
use super::layout::{Flow, Running, SHORT, Stamp};
use super::mark::rising_bubbles;
use super::plate::{Cell, Column, Field, dashed, grid, heading, statement, table};
use super::sheet::{Block, Paper, Style, paragraph};
use super::{PrintError, entry, must_show, pdf, signing, words};
use crate::record::{AppliancePart, Counterparty, LeakRate, RecordState, ServiceRecord, Verdict};
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
    for part in &record.appliances {
        flow.space(GAP);
        appliance(&mut flow, fonts, record, part);
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
const COLUMNS: usize = 6;

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

fn appliance(flow: &mut Flow, fonts: &Fonts, record: &ServiceRecord, part: &AppliancePart) {
    let facts = &part.appliance;
    let strip: Vec<&str> =
        [&facts.name, &facts.refrigerant, &facts.full_charge].into_iter().map(String::as_str).filter(|text| !text.is_empty()).collect();
    let mut strip = strip.join(words::DOT);
    let inner = flow.inner();
    let mut fields = Vec::new();
    if flow.strip_cuts(&strip, words::finding(part.finding)) {
        // Gas and charge give way, and where the strip must cut even the name, it stands in full below.
        strip.clone_from(&facts.name);
        fields.push(Field::required("appliance", &facts.name).strong());
    }
    fields.extend([
        Field::required("refrigerant", &facts.refrigerant).strong(),
        Field::required("full charge", &facts.full_charge).strong(),
        Field::required("how determined", &facts.full_charge_method),
        Field::required("place", &facts.place),
        Field::required("category", &facts.category),
    ]);
    fields.extend(Field::known("equipment", &facts.equipment));
    fields.extend(Field::known("serial", &facts.serial));
    fields.extend(Field::known("assembly", &facts.assembly));
    // 84.106(l)(2)(ii).
    fields.push(Field::required("installed", &facts.installed_on.map(words::day).unwrap_or_default()));
    fields.extend(Field::known("charged at installation", &facts.charged_at_installation));
    fields.extend(Field::known("description", &facts.description));
    fields.extend(Field::known("refrigerant facts", &facts.refrigerant_facts));
    fields.extend(Field::known("declared", &facts.declared.join(", ")));
    let rows = grid(fonts, inner, COLUMNS, &fields);
    flow.open_plate(&strip, words::finding(part.finding), rows.iter().map(|row| row.height).sum::<f32>() + 30.0);
    for row in rows {
        flow.put(row);
    }
    // What came out first, then what was done: as on the screens.
    for rate in &part.leak_rates {
        leak_rate(flow, fonts, rate, record.first_day);
    }
    no_rates(flow, fonts, part);
    open_leaks(flow, fonts, part);
    duties(flow, fonts, part);
    amounts(flow, fonts, part);
    entry::entries(flow, fonts, part, &record.jobs);
    readings(flow, fonts, part);
    flow.close_plate();
}

/// A rate of an addition before `first_day` is the latest there is, and not of this visit.
fn leak_rate(flow: &mut Flow, fonts: &Fonts, rate: &LeakRate, first_day: chrono::NaiveDate) {
    let inner = flow.inner();
    let name = if rate.on < first_day { words::LATEST_LEAK_RATE } else { words::LEAK_RATE };
    let mut head = heading(fonts, inner, name, &format!("{}, {} method", rate.source, rate.method));
    let mut figures = Block::empty(34.0);
    let half = inner / COLUMNS as f32;
    let top = Style::CAPTION.ascent();
    figures.text(0.0, top, words::rate_caption(rate.method), Style::CAPTION);
    figures.text(0.0, 28.0, &words::percent(rate.percent), Style::FIGURE);
    let at = half * 2.0;
    figures.text(at, top, "trigger", Style::CAPTION);
    figures.text(at, 28.0, &words::trigger(rate.trigger), Style { size: 14.0, ..Style::LEAD });
    let at = half * 3.0;
    figures.text(at, top, "verdict", Style::CAPTION);
    figures.text(at, 28.0, rate.verdict.words(), Style { size: 14.0, ..Style::LEAD });
    let error = rate.band.map_or_else(|| "unknown".to_owned(), |band| format!("\u{b1} {}", words::percent(band)));
    let at = half * 5.0;
    figures.text(at, top, "weighing error", Style::CAPTION);
    figures.text(at, 28.0, &error, Style::BODY);
    head = head.below(0.0, figures).below(3.0, leak_rate_bar(fonts, inner, rate));
    head.height += 5.0;
    let mut rows = vec![head];
    if rate.within_weighing_error {
        let text = match rate.verdict {
            Verdict::Over => words::OVER_WITHIN_ERROR,
            Verdict::At => words::AT_WITHIN_ERROR,
            Verdict::Under => words::UNDER_WITHIN_ERROR,
        };
        rows.push(paragraph(fonts, text, Style::STRONG, inner));
    }
    if rate.band.is_none() {
        rows.push(paragraph(fonts, words::BAND_UNKNOWN, Style::BODY, inner));
    }
    flow.put_together(rows);
    flow.space(3.0);
    let mut inputs: Vec<Field> = vec![Field::required("addition of", &words::day(rate.on))];
    for input in &rate.inputs {
        let value = if input.from.is_empty() { input.value.clone() } else { format!("{}, {}", input.value, input.from) };
        inputs.push(Field::required(&input.caption, &value));
    }
    inputs.extend(Field::known("worked out", &rate.working));
    for row in grid(fonts, inner, COLUMNS, &inputs) {
        flow.put(row);
    }
    let because: Vec<&str> = [rate.applies_because.as_str(), rate.trigger_source.as_str()].into_iter().filter(|t| !t.is_empty()).collect();
    if !because.is_empty() {
        flow.put(paragraph(fonts, &because.join("; trigger: "), Style::CAPTION, inner));
    }
    flow.space(7.0);
}

fn no_rates(flow: &mut Flow, fonts: &Fonts, part: &AppliancePart) {
    let inner = flow.inner();
    for (index, none) in part.no_rates.iter().enumerate() {
        let text = format!("{} on {}: {}", none.amount, words::day(none.on), none.because);
        let line = statement(fonts, inner, &text, &none.source);
        if index == 0 {
            flow.put_together(vec![heading(fonts, inner, "No rate due", ""), line]);
        } else {
            flow.put(line);
        }
    }
    if !part.no_rates.is_empty() {
        flow.space(4.0);
    }
}

fn open_leaks(flow: &mut Flow, fonts: &Fonts, part: &AppliancePart) {
    if part.open_leaks.is_empty() {
        return;
    }
    let inner = flow.inner();
    let columns = [Column::left("place", 4.0), Column::left("open since", 1.2), Column::left("state", 2.0)];
    let rows: Vec<Vec<Cell>> = part
        .open_leaks
        .iter()
        .map(|leak| {
            let state = if leak.state.is_empty() { "not isolated" } else { &leak.state };
            vec![Cell::strong(&leak.place), Cell::plain(words::day(leak.since)), Cell::plain(state)]
        })
        .collect();
    let set = table(fonts, inner, &columns, &rows, Style::BODY.size);
    flow.put_table(Some(heading(fonts, inner, "Open leaks", "")), set.head, set.rows);
    flow.space(5.0);
}

fn duties(flow: &mut Flow, fonts: &Fonts, part: &AppliancePart) {
    if part.duties.is_empty() {
        return;
    }
    let inner = flow.inner();
    let columns = [
        Column::left("duty", 2.35),
        Column::left("this visit", 0.9),
        Column::left("from", 1.1),
        Column::left("due", 1.1),
        Column::left("state", 1.7),
        Column::left("article", 1.85),
    ];
    let rows: Vec<Vec<Cell>> = part
        .duties
        .iter()
        .map(|duty| {
            let due = duty.due.map_or_else(|| duty.due_words.clone(), words::day);
            // The next column but one says it.
            let due = if due == duty.state { String::new() } else { due };
            let state = duty.met_on.map_or_else(|| duty.state.clone(), |day| format!("{} {}", duty.state, words::day(day)));
            vec![
                Cell::strong(&duty.duty),
                Cell::plain(words::step(duty.step)),
                Cell::plain(words::day(duty.from)),
                Cell::strong(if due.is_empty() { words::DASH.to_owned() } else { due }),
                Cell::plain(state),
                Cell::plain(&duty.source),
            ]
        })
        .collect();
    let set = table(fonts, inner, &columns, &rows, 8.5);
    flow.put_table(Some(heading(fonts, inner, "Duties", "")), set.head, set.rows);
    flow.space(5.0);
}

fn amounts(flow: &mut Flow, fonts: &Fonts, part: &AppliancePart) {
    if part.amounts.is_empty() {
        return;
    }
    let inner = flow.inner();
    let columns = [
        Column::left("amount", 3.0),
        Column::right("mass", 1.3),
        Column::right("ODP-weighted, kg", 1.4),
        Column::right("CO\u{2082} equivalent, t", 1.6),
    ];
    let rows: Vec<Vec<Cell>> = part
        .amounts
        .iter()
        .map(|amount| {
            vec![
                Cell::strong(&amount.what),
                Cell::plain(&amount.mass_written),
                Cell::plain(words::weighted(amount.odp_kg, 4)),
                Cell::plain(words::weighted(amount.co2e_t, 3)),
            ]
        })
        .collect();
    let mut set = table(fonts, inner, &columns, &rows, Style::BODY.size);
    let mut tables: Vec<String> = Vec::new();
    for amount in &part.amounts {
        let line = format!("ODP from {}; GWP from {}", or_dash(&amount.odp_table), or_dash(&amount.gwp_table));
        if !tables.contains(&line) {
            tables.push(line);
        }
    }
    // The tables named stay with the last figure.
    if let Some(last) = set.rows.last_mut() {
        for line in &tables {
            *last = std::mem::take(last).below(2.0, paragraph(fonts, line, Style::CAPTION, inner));
        }
    }
    flow.put_table(Some(heading(fonts, inner, "Weighted amounts", "")), set.head, set.rows);
    flow.space(5.0);
}

fn or_dash(text: &str) -> &str {
    if text.is_empty() { words::DASH } else { text }
}

fn readings(flow: &mut Flow, fonts: &Fonts, part: &AppliancePart) {
    let inner = flow.inner();
    for (index, reading) in part.readings.iter().enumerate() {
        let line = statement(fonts, inner, &reading.text, &reading.source);
        if index == 0 {
            flow.put_together(vec![heading(fonts, inner, "The law, as it is read here", ""), line]);
        } else {
            flow.put(line);
        }
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
