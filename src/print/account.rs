//! The annual account on paper.

use super::chart::plain_bar;
use super::fonts::Fonts;
use super::layout::{Flow, Running};
use super::mark::rising_bubbles;
use super::plate::{Cell, Column, Field, dashed, grid, heading, table};
use super::sheet::{Block, Paper, Style, paragraph, wrap};
use super::{PrintError, must_show, pdf, service::first_half, words};
use crate::quantity::{Mass, Ratio};
use crate::record::{AccountLine, AnnualAccount, DutyCounts, WeightedLoss};
use sha2::{Digest, Sha256};

const GAP: f32 = 10.0;
const COLUMNS: usize = 6;
const SIZE: f32 = 8.5;
const ODP: &str = "ODP-weighted\nkg";
const CO2E: &str = "CO\u{2082} equivalent\nt";

/// An annual account as PDF. The same account on the same paper gives the same bytes.
///
/// # Errors
/// [`PrintError::Character`] when a name or an address holds a character that
/// the font lacks; elsewhere such a character is printed as `[U+4E2D]`.
pub fn annual_account(account: &AnnualAccount, paper: Paper) -> Result<Vec<u8>, PrintError> {
    let fonts = Fonts::get()?;
    check_names(fonts, account)?;
    let mut flow = Flow::new(fonts, paper, running(fonts, account));
    title(&mut flow, fonts, account);
    summary(&mut flow, fonts, account);
    flow.space(GAP);
    gases(&mut flow, fonts, account);
    flow.space(GAP);
    appliances(&mut flow, fonts, account);
    flow.space(GAP);
    duties(&mut flow, fonts, account);
    flow.space(GAP);
    foot(&mut flow, fonts, account);
    let pages = flow.finish();
    pdf::write(fonts, &pages, &about(account, paper)?)
}

fn check_names(fonts: &Fonts, account: &AnnualAccount) -> Result<(), PrintError> {
    must_show(fonts, "the company\u{2019}s name", &account.company.name)?;
    must_show(fonts, "the company\u{2019}s address", &account.company.address)?;
    must_show(fonts, "the owner\u{2019}s name", account.owner.as_deref().unwrap_or_default())?;
    for appliance in &account.appliances {
        must_show(fonts, "an appliance\u{2019}s identification", &appliance.appliance)?;
        must_show(fonts, "a site\u{2019}s name", &appliance.site)?;
    }
    Ok(())
}

fn whose(account: &AnnualAccount) -> &str {
    account.owner.as_deref().unwrap_or("all owners")
}

fn running(fonts: &Fonts, account: &AnnualAccount) -> Running {
    let year = account.year.to_string();
    Running {
        head: [words::ANNUAL_ACCOUNT, &year, whose(account)].join(words::DOT),
        stamp: None,
        head_right: String::new(),
        foot: fonts.visible(&["annual account", &year, &account.program, whose(account)].join(words::DOT)),
        foot_notice: if account.demonstration { words::DEMONSTRATION.to_owned() } else { String::new() },
    }
}

fn title(flow: &mut Flow, fonts: &Fonts, account: &AnnualAccount) {
    let width = flow.width();
    let mut block = Block::empty(44.0);
    block.lay(rising_bubbles(34.0), 0.0, -6.0);
    block.text(44.0, 17.0, words::ANNUAL_ACCOUNT, Style::TITLE);
    block.text(44.5, 31.0, &format!("1 Jan to {}", words::day(account.to)), Style::BODY);
    block.text_right(fonts, width, 17.0, &account.year.to_string(), Style::TITLE);
    flow.put(block);
}

/// The year at a glance: losses and duties in large figures.
fn summary(flow: &mut Flow, fonts: &Fonts, account: &AnnualAccount) {
    flow.open_plate(whose(account), "", 90.0);
    let inner = flow.inner();
    let lost: Mass = account.gases.iter().map(|gas| gas.line.lost).sum();
    let (odp, co2e) = account.weighted_loss();
    let counts = account.duty_counts();
    let unit = words::unit(account.unit);
    let figures = [
        (format!("lost, {unit}"), words::mass(lost, account.unit)),
        ("ODP-weighted loss, kg".to_owned(), words::weighted(odp, 3)),
        ("CO\u{2082} equivalent of it, t".to_owned(), words::weighted(co2e, 2)),
        ("duties kept in time".to_owned(), counts.in_time.to_string()),
        ("late".to_owned(), counts.late.to_string()),
        ("not done".to_owned(), counts.not_done.to_string()),
    ];
    let mut block = Block::empty(40.0);
    let shares = [1.25, 1.3, 1.3, 1.1, 0.6, 0.6];
    let whole: f32 = shares.iter().sum();
    let mut x = 0.0;
    for ((caption, figure), share) in figures.iter().zip(shares) {
        let column = inner * share / whole;
        block.text(x, Style::CAPTION.ascent(), caption, Style::CAPTION);
        let room = column - 8.0;
        let wanted = Style { size: 18.0, ..Style::FIGURE };
        let size = wanted.size * (room / fonts.width(figure, wanted.face, wanted.size)).min(1.0);
        block.text(x, 27.0, figure, Style { size, ..wanted });
        x += column;
    }
    flow.put(block);
    let mut fields = Vec::new();
    if flow.strip_cuts(whose(account), "") {
        fields.push(Field::required("owner", whose(account)).strong());
    }
    fields.extend([
        Field::required("account kept by", &account.company.name).strong(),
        Field::required("address", &account.company.address),
        Field::required("certificate", &account.company.certificate),
    ]);
    for (index, row) in grid(fonts, inner, COLUMNS, &fields).into_iter().enumerate() {
        flow.put(if index == 0 { Block::empty(5.0).below(0.0, row).parted(inner, 0.25) } else { row });
    }
    flow.close_plate();
}

fn maybe(account: &AnnualAccount, mass: Option<Mass>) -> String {
    mass.map_or_else(|| words::DASH.to_owned(), |mass| words::mass(mass, account.unit))
}

fn masses(account: &AnnualAccount, line: &AccountLine) -> Vec<Cell> {
    vec![
        Cell::plain(maybe(account, line.opening)),
        Cell::plain(maybe(account, line.bought)),
        Cell::plain(words::mass(line.charged, account.unit)),
        Cell::plain(words::mass(line.recovered, account.unit)),
        Cell::plain(maybe(account, line.sent_away)),
        Cell::plain(maybe(account, line.closing)),
        Cell::strong(words::mass(line.lost, account.unit)),
    ]
}

fn weights(loss: &WeightedLoss) -> Vec<Cell> {
    vec![Cell::plain(words::weighted(loss.odp_kg, 4)), Cell::plain(words::weighted(loss.co2e_t, 3))]
}

fn columns(first: Vec<Column>) -> Vec<Column> {
    let mut columns = first;
    for caption in ["opening", "bought", "charged", "recovered", "sent away", "closing", "lost"] {
        columns.push(Column::right(caption, 0.96));
    }
    columns.push(Column::right(ODP, 1.2));
    columns.push(Column::right(CO2E, 1.2));
    columns
}

fn gases(flow: &mut Flow, fonts: &Fonts, account: &AnnualAccount) {
    let unit = words::unit(account.unit);
    flow.open_plate("By gas", &format!("masses in {unit}"), 60.0);
    let inner = flow.inner();
    if account.gases.is_empty() {
        flow.put(paragraph(fonts, "No gas was kept or moved in this year.", Style::BODY, inner));
        flow.close_plate();
        return;
    }
    let rows: Vec<Vec<Cell>> = account
        .gases
        .iter()
        .map(|gas| {
            let mut row = vec![Cell::strong(&gas.refrigerant)];
            row.extend(masses(account, &gas.line));
            row.extend(weights(&gas.loss));
            row
        })
        .collect();
    let set = table(fonts, inner, &columns(vec![Column::left("gas", 1.5)]), &rows, SIZE);
    flow.put_table(None, set.head, set.rows);
    flow.space(4.0);
    let mut notes = vec![paragraph(
        fonts,
        "Opening to closing is what the cylinders held: opening + bought + recovered \u{2212} charged \u{2212} sent away = \
         closing, and what is told below of each gas. Lost is what appliances lost.",
        Style::CAPTION,
        inner,
    )];
    for gas in &account.gases {
        let told = [
            (gas.line.lost_from_cylinders.unwrap_or_default(), "lost from cylinders, with the reason written down"),
            (gas.line.past_cylinders, "charged, less recovered, without a cylinder of this store: no holding contains it"),
        ];
        for (mass, what) in told.into_iter().filter(|(mass, _)| !mass.is_zero()) {
            let text = format!("{}: {} {unit} {what}.", gas.refrigerant, words::mass(mass, account.unit));
            flow.put(paragraph(fonts, &text, Style::BODY, inner));
            flow.space(3.0);
        }
        if let Some(gap) = gas.line.unexplained().filter(|gap| !gap.is_zero()) {
            let side = if gap.is_negative() { "less" } else { "more" };
            let text = format!(
                "{} {}: closing is {} {unit} {side} than the movements explain.",
                gas.refrigerant,
                words::DOES_NOT_BALANCE,
                words::mass(gap.magnitude(), account.unit)
            );
            flow.put(paragraph(fonts, &text, Style::STRONG, inner));
            flow.space(3.0);
        }
    }
    let mut sources: Vec<String> = Vec::new();
    for loss in account.gases.iter().map(|gas| &gas.loss).chain(account.appliances.iter().map(|appliance| &appliance.loss)) {
        let line = format!("ODP from {}; GWP from {}", loss.odp_table, loss.gwp_table);
        if !loss.odp_table.is_empty() && !sources.contains(&line) {
            sources.push(line);
        }
    }
    notes.extend(sources.iter().map(|line| paragraph(fonts, line, Style::CAPTION, inner)));
    for note in notes {
        flow.put(note);
    }
    flow.space(4.0);
    flow.close_plate();
}

fn appliances(flow: &mut Flow, fonts: &Fonts, account: &AnnualAccount) {
    flow.open_plate("By appliance", &format!("masses in {}", words::unit(account.unit)), 60.0);
    let inner = flow.inner();
    if account.appliances.is_empty() {
        flow.put(paragraph(fonts, "No appliance was kept in this year.", Style::BODY, inner));
        flow.close_plate();
        return;
    }
    let heads = [
        Column::left("appliance", 1.8),
        Column::left("gas", 1.4),
        Column::right("full charge\nfirst day", 1.0),
        Column::right("charged", 1.0),
        Column::right("recovered", 1.0),
        Column::right("full charge\nlast day", 1.0),
        Column::right("lost", 1.0),
        Column::right(ODP, 1.15),
        Column::right(CO2E, 1.15),
    ];
    let mut set = table(fonts, inner, &heads, &[], SIZE);
    let sites = by_site(account);
    for (site, lines) in sites {
        let rows: Vec<Vec<Cell>> = lines
            .iter()
            .map(|line| {
                let mut row = vec![
                    Cell::plain(&line.appliance).with(&line.remark),
                    Cell::plain(&line.refrigerant),
                    Cell::plain(maybe(account, line.line.opening)),
                ];
                row.push(Cell::plain(words::mass(line.line.charged, account.unit)));
                row.push(Cell::plain(words::mass(line.line.recovered, account.unit)));
                row.push(Cell::plain(maybe(account, line.line.closing)));
                row.push(Cell::strong(words::mass(line.line.lost, account.unit)));
                row.extend(weights(&line.loss));
                row
            })
            .collect();
        let owner = lines.first().map(|line| line.owner.as_str()).unwrap_or_default();
        let mut rows = table(fonts, inner, &heads, &rows, SIZE).rows.into_iter();
        // The site stands over its first appliance and is never parted from it.
        set.rows.extend(rows.next().map(|first| site_head(fonts, inner, site, owner).below(0.0, first)));
        set.rows.extend(rows);
    }
    flow.put_table(None, set.head, set.rows);
    flow.space(9.0);
    losses(flow, fonts, account);
    flow.close_plate();
}

fn site_head(fonts: &Fonts, width: f32, site: &str, owner: &str) -> Block {
    let name = paragraph(fonts, site, Style::STRONG, width * 0.55);
    let owners = wrap(fonts, &fonts.visible(owner), Style::CAPTION, width * 0.4);
    let mut block = Block::empty(4.8 + name.height.max(Style::CAPTION.leading() * owners.len() as f32)).parted(width, 0.5);
    block.lay(name, 0.0, 4.8);
    for (row, line) in owners.iter().enumerate() {
        block.text_right(fonts, width, 13.5 + Style::CAPTION.leading() * row as f32, line, Style::CAPTION);
    }
    block
}

fn by_site(account: &AnnualAccount) -> Vec<(&str, Vec<&crate::record::ApplianceAccount>)> {
    let mut sites: Vec<(&str, Vec<&crate::record::ApplianceAccount>)> = Vec::new();
    for line in &account.appliances {
        match sites.iter_mut().find(|(site, _)| *site == line.site) {
            Some((_, lines)) => lines.push(line),
            None => sites.push((&line.site, vec![line])),
        }
    }
    sites
}

/// Largest losses as bars, by CO₂ equivalent where all are known, else by mass.
fn losses(flow: &mut Flow, fonts: &Fonts, account: &AnnualAccount) {
    let inner = flow.inner();
    let mut lossy: Vec<_> = account.appliances.iter().filter(|line| line.line.lost.is_positive()).collect();
    if lossy.is_empty() {
        flow.put_together(vec![
            heading(fonts, inner, "Losses", ""),
            paragraph(fonts, "No appliance lost refrigerant in this year.", Style::STRONG, inner),
        ]);
        return;
    }
    lossy.sort_by(|a, b| b.line.lost.cmp(&a.line.lost).then(a.site.cmp(&b.site)).then(a.appliance.cmp(&b.appliance)));
    let most = lossy[0].line.lost;
    let label = inner * 0.34;
    let bars: Vec<Block> = lossy
        .iter()
        .map(|line| {
            let mut block = Block::empty(15.0);
            let name = super::layout::fit(fonts, &format!("{}, {}", line.appliance, line.site), Style::BODY, label - 10.0);
            block.text(0.0, 10.0, &name, Style { size: SIZE, ..Style::BODY });
            let share = Ratio::new(line.line.lost.units() * 1000 / most.units(), 1000);
            let figure = words::mass(line.line.lost, account.unit);
            block.lay(plain_bar(inner - label - 60.0, *share.numer() as f32 / *share.denom() as f32), label, 4.0);
            block.text_right(fonts, inner, 10.5, &figure, Style { size: SIZE, ..Style::STRONG });
            block
        })
        .collect();
    // A few bars are compared on one page; of many the heading goes with them over each page.
    flow.put_table(None, heading(fonts, inner, "Losses by appliance", words::unit(account.unit)), bars);
}

fn duties(flow: &mut Flow, fonts: &Fonts, account: &AnnualAccount) {
    let inner = flow.inner();
    if account.duties.is_empty() {
        flow.open_plate("Duties that fell due", "", 20.0);
        flow.put(paragraph(fonts, "None fell due in this year.", Style::BODY, inner));
        flow.close_plate();
        return;
    }
    let heads = [
        Column::left("duty", 2.4),
        Column::left("law", 2.4),
        Column::right("in time", 0.8),
        Column::right("late", 0.8),
        Column::right("not done", 0.8),
        Column::right("still open", 0.8),
    ];
    let counted = |name: Cell, book: String, counts: DutyCounts| {
        let mut row = vec![name, Cell::plain(book)];
        row.extend([counts.in_time, counts.late, counts.not_done, counts.open].map(|count| Cell::plain(count.to_string())));
        row
    };
    let mut rows: Vec<Vec<Cell>> =
        account.duties.iter().map(|tally| counted(Cell::plain(&tally.duty), law(&tally.rulebook), tally.counts)).collect();
    let mut all = counted(Cell::strong("all"), String::new(), account.duty_counts());
    all = all.into_iter().map(Cell::bold).collect();
    rows.push(all);
    let set = table(fonts, inner, &heads, &rows, Style::BODY.size);
    let height: f32 = set.rows.iter().map(|row| row.height).sum();
    flow.open_plate("Duties that fell due", "", (set.head.height + height).min(250.0));
    flow.put_table(None, set.head, set.rows);
    flow.close_plate();
}

/// The name of a legal text; a book that this program does not have keeps its id.
fn law(rulebook: &str) -> String {
    crate::rules::rulebook(rulebook).map_or_else(|| rulebook.to_owned(), |book| book.title.clone())
}

fn foot(flow: &mut Flow, fonts: &Fonts, account: &AnnualAccount) {
    let width = flow.width();
    let mut lines: Vec<Block> = Vec::new();
    for remark in &account.remarks {
        let text = if remark.source.is_empty() { remark.text.clone() } else { format!("{} ({})", remark.text, remark.source) };
        lines.push(dashed(fonts, width, &text));
    }
    lines.push(paragraph(
        fonts,
        "Masses are exact and rounded once, here, half up; the CSV and JSON forms of this account carry them in full.",
        Style::CAPTION,
        width,
    ));
    for line in lines {
        flow.put(line);
    }
}

fn about(account: &AnnualAccount, paper: Paper) -> Result<pdf::About, PrintError> {
    let text = serde_json::to_vec(account).map_err(|why| PrintError::Pdf(why.to_string()))?;
    let whole = Sha256::new().chain_update(&text).chain_update(format!("{paper:?}")).finalize();
    Ok(pdf::About {
        title: format!("{} {}, {}", words::ANNUAL_ACCOUNT, account.year, whose(account)),
        author: account.company.name.clone(),
        subject: format!("1 Jan to {}", words::day(account.to)),
        program: account.program.clone(),
        record_id: first_half(&Sha256::digest(&text)),
        print_id: first_half(&whole),
    })
}
