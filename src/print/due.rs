//! The list of what is due on paper.

use super::fonts::Fonts;
use super::layout::{Flow, Running};
use super::mark::rising_bubbles;
use super::plate::{Cell, Column, table};
use super::sheet::{Block, Paper, Style, paragraph};
use super::{PrintError, must_show, pdf, service::first_half, words};
use crate::record::{DueGroup, DueList};
use sha2::{Digest, Sha256};

const GAP: f32 = 10.0;
const SIZE: f32 = 8.5;

/// The list as PDF. The same list on the same paper gives the same bytes.
///
/// # Errors
/// As [`super::annual_account`].
pub fn due_list(list: &DueList, paper: Paper) -> Result<Vec<u8>, PrintError> {
    let fonts = Fonts::get()?;
    must_show(fonts, "the company\u{2019}s name", &list.company.name)?;
    for row in list.groups.iter().flat_map(|group| &group.rows) {
        must_show(fonts, "an appliance\u{2019}s identification", &row.appliance)?;
        must_show(fonts, "a site\u{2019}s name", &row.site)?;
    }
    let mut flow = Flow::new(fonts, paper, running(fonts, list));
    title(&mut flow, fonts, list);
    for part in &list.groups {
        group(&mut flow, fonts, part);
        flow.space(GAP);
    }
    if list.groups.is_empty() {
        flow.put(paragraph(fonts, "Nothing is due.", Style::BODY, flow.width()));
    }
    let pages = flow.finish();
    pdf::write(fonts, &pages, &about(list, paper)?)
}

fn running(fonts: &Fonts, list: &DueList) -> Running {
    let day = words::day(list.on);
    Running {
        head: [words::DUE_LIST, &day, &list.grouped].join(words::DOT),
        stamp: None,
        head_right: String::new(),
        foot: fonts.visible(&[&list.grouped, &day, &list.program, &list.company.name].map(String::as_str).join(words::DOT)),
        foot_notice: if list.demonstration { words::DEMONSTRATION.to_owned() } else { String::new() },
    }
}

fn title(flow: &mut Flow, fonts: &Fonts, list: &DueList) {
    let width = flow.width();
    let mut block = Block::empty(44.0);
    block.lay(rising_bubbles(34.0), 0.0, -6.0);
    block.text(44.0, 17.0, words::DUE_LIST, Style::TITLE);
    block.text(44.5, 31.0, &list.grouped, Style::BODY);
    block.text_right(fonts, width, 17.0, &words::day(list.on), Style::TITLE);
    flow.put(block);
}

fn group(flow: &mut Flow, fonts: &Fonts, group: &DueGroup) {
    let count: usize = group.rows.iter().map(|row| row.count).sum();
    flow.open_plate(&group.name, &count.to_string(), 40.0);
    let heads = [
        Column::left("duty", 1.6),
        Column::left("appliance", 1.2),
        Column::left("site", 1.8),
        Column::left("due", 1.2),
        Column::left("state", 1.2),
        Column::right("open", 0.5),
    ];
    let rows: Vec<Vec<Cell>> = group
        .rows
        .iter()
        .map(|row| {
            vec![
                Cell::strong(&row.what).with(&row.source),
                Cell::plain(&row.appliance),
                Cell::plain(&row.site),
                Cell::plain(&row.due),
                Cell::plain(&row.state),
                Cell::plain(row.count.to_string()),
            ]
        })
        .collect();
    let set = table(fonts, flow.inner(), &heads, &rows, SIZE);
    flow.put_table(None, set.head, set.rows);
    flow.close_plate();
}

fn about(list: &DueList, paper: Paper) -> Result<pdf::About, PrintError> {
    let text = serde_json::to_vec(list).map_err(|why| PrintError::Pdf(why.to_string()))?;
    let whole = Sha256::new().chain_update(&text).chain_update(format!("{paper:?}")).finalize();
    Ok(pdf::About {
        title: format!("{} {}", words::DUE_LIST, words::day(list.on)),
        author: list.company.name.clone(),
        subject: list.grouped.clone(),
        program: list.program.clone(),
        record_id: first_half(&Sha256::digest(&text)),
        print_id: first_half(&whole),
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::record::{DueRow, Party};

    fn list(rows: usize) -> DueList {
        let row = |number: usize| DueRow {
            what: "Inspection".to_owned(),
            count: 3,
            appliance: format!("R-{number}"),
            site: "Fish market".to_owned(),
            due: "27 Mar 2026".to_owned(),
            state: "5 days late".to_owned(),
            source: "40 CFR 82.157(g)".to_owned(),
        };
        DueList {
            on: "2026-04-01".parse().unwrap(),
            grouped: "by site".to_owned(),
            company: Party { name: "Quill Cooling".to_owned(), address: String::new(), certificate: String::new() },
            demonstration: false,
            program: "bubblepoint".to_owned(),
            groups: vec![DueGroup { name: "Fish market".to_owned(), rows: (0..rows).map(row).collect() }],
        }
    }

    #[test]
    fn a_list_is_printed_over_pages_and_the_same_again() {
        let bytes = due_list(&list(120), Paper::A4).unwrap();
        assert!(bytes.starts_with(b"%PDF-"));
        assert_eq!(bytes, due_list(&list(120), Paper::A4).unwrap());
        assert_ne!(bytes, due_list(&list(120), Paper::Letter).unwrap());
        let document = lopdf::Document::load_mem(&bytes).unwrap();
        assert!(document.get_pages().len() > 2, "{} pages", document.get_pages().len());
    }

    #[test]
    fn a_name_that_paper_cannot_show_is_refused() {
        let mut list = list(1);
        list.groups[0].rows[0].site = "\u{6e2f}".to_owned();
        assert!(matches!(due_list(&list, Paper::A4), Err(PrintError::Character { .. })));
    }
}
