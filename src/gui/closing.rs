//! One entry, the closing of a visit, and its record.

use super::Gui;
use super::rows::{self, text};
use crate::app::AppError;
use crate::view::visit::close::{self, InkMsg, Signer};
use crate::view::visit::{Panel, closed, entry};
use crate::view::{Desk, Msg, Page};
use bubblepoint_ui::{self as ui, AppWindow, CloseAdapter, EntryAdapter, EntryStep, VisitClosedAdapter};
use slint::ComponentHandle;
use std::rc::Rc;

pub fn connect(window: &AppWindow, gui: &Rc<Gui>) {
    let closes = window.global::<CloseAdapter>();
    on!(gui, closes.on_choose_counterpart(key) => Msg::Close(close::Msg::Counterpart(key.into())));
    let drawing = Rc::clone(gui);
    // The ink field draws its own points; the page is shown again when the pen is lifted.
    closes.on_point(move |who, x, y, first| {
        drawing.tell_silently(Msg::Close(close::Msg::Ink(signer(who), InkMsg::Point { x, y, first })));
    });
    on!(gui, closes.on_lifted(who) => Msg::Close(close::Msg::Ink(signer(who), InkMsg::Lifted)));
    on!(gui, closes.on_cleared(who) => Msg::Close(close::Msg::Ink(signer(who), InkMsg::Cleared)));
    on!(gui, closes.on_edited(field, typed) => Msg::Close(close::Msg::Edited(field.into(), typed.into())));
    on!(gui, closes.on_acknowledge(key) => Msg::Close(close::Msg::Acknowledge(key.into())));
    on!(gui, closes.on_close_visit() => Msg::Close(close::Msg::Close));
    on!(gui, closes.on_back() => Msg::Back);

    let entries = window.global::<EntryAdapter>();
    on!(gui, entries.on_edited(field, typed) => Msg::Entry(entry::Msg::Edited(field.into(), typed.into())));
    on!(gui, entries.on_set_never(never) => Msg::Entry(entry::Msg::Never(never)));
    on!(gui, entries.on_choose_result(key) => Msg::Entry(entry::Msg::Result(key.into())));
    on!(gui, entries.on_choose_answer(key) => Msg::Entry(entry::Msg::Answer(key.into())));
    on!(gui, entries.on_choose_counterpart(key) => Msg::Entry(entry::Msg::Counterpart(key.into())));
    let drawing = Rc::clone(gui);
    entries.on_point(move |who, x, y, first| {
        drawing.tell_silently(Msg::Entry(entry::Msg::Ink(signer(who), InkMsg::Point { x, y, first })));
    });
    on!(gui, entries.on_lifted(who) => Msg::Entry(entry::Msg::Ink(signer(who), InkMsg::Lifted)));
    on!(gui, entries.on_cleared(who) => Msg::Entry(entry::Msg::Ink(signer(who), InkMsg::Cleared)));
    on!(gui, entries.on_strike() => Msg::Entry(entry::Msg::Strike));
    on!(gui, entries.on_correct() => Msg::Entry(entry::Msg::Correct));
    on!(gui, entries.on_save_answer() => Msg::Entry(entry::Msg::SaveAnswer));
    on!(gui, entries.on_back() => Msg::Back);

    let record = window.global::<VisitClosedAdapter>();
    on!(gui, record.on_open_record() => Msg::Closed(closed::Msg::OpenRecord));
    on!(gui, record.on_open_folder() => Msg::Closed(closed::Msg::OpenFolder));
    on!(gui, record.on_choose_way(key) => Msg::Closed(closed::Msg::Way(key.into())));
    on!(gui, record.on_edited(typed) => Msg::Closed(closed::Msg::ToWhom(typed.into())));
    on!(gui, record.on_hand_over() => Msg::Closed(closed::Msg::HandOver));
    on!(gui, record.on_done() => Msg::Closed(closed::Msg::Done));
}

fn signer(who: ui::Signer) -> Signer {
    match who {
        ui::Signer::Technician => Signer::Technician,
        ui::Signer::Representative => Signer::Representative,
    }
}

fn step(step: EntryStep) -> entry::Step {
    match step {
        EntryStep::Read => entry::Step::Read,
        EntryStep::Strike => entry::Step::Strike,
        EntryStep::Correct => entry::Step::Correct,
        EntryStep::Answer => entry::Step::Answer,
    }
}

/// From the summary to the signatures, from reading an entry to striking it, the pages go by themselves.
pub fn take_over(window: &AppWindow, desk: &mut Desk) {
    match (desk.page(), desk.panel()) {
        (Page::Visit, Panel::Close) => desk.take_over_signing(window.global::<CloseAdapter>().get_signing()),
        (Page::Visit, Panel::Entry) => {
            let entry = window.global::<EntryAdapter>();
            desk.update(Msg::Entry(entry::Msg::Step(step(entry.get_step()))));
            desk.update(Msg::Entry(entry::Msg::Signing(entry.get_signing())));
        }
        (Page::Closed, _) => desk.take_over_handing(window.global::<VisitClosedAdapter>().get_handing_over()),
        _ => {}
    }
}

pub fn show_close(window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
    let shown = desk.close_shown()?;
    let closes = window.global::<CloseAdapter>();
    closes.set_site(text(&shown.site));
    let parts = shown.parts.iter().map(|part| ui::ClosingPart {
        name: text(&part.name),
        state: text(&part.state),
        facts: rows::inner(rows::facts(&part.facts)),
    });
    list!(closes.get_parts, set_parts, parts.collect());
    list!(closes.get_missing, set_missing, shown.missing.iter().map(|missing| text(missing)).collect());
    list!(closes.get_cautions, set_cautions, rows::cautions(&shown.cautions));
    closes.set_signing(shown.signing);
    closes.set_technician(text(&shown.technician));
    closes.set_technician_strokes(text(&shown.technician_strokes));
    closes.set_counterpart(text(&shown.counterpart));
    closes.set_representative(text(&shown.representative));
    closes.set_representative_strokes(text(&shown.representative_strokes));
    closes.set_refusal_reason(text(&shown.refusal_reason));
    closes.set_onward(shown.onward.ready);
    closes.set_not_onward(text(&shown.onward.why_not));
    closes.set_ready(shown.ready.ready);
    closes.set_why_not(text(&shown.ready.why_not));
    Ok(())
}

pub fn show_entry(window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
    let shown = desk.entry_shown()?;
    let entries = window.global::<EntryAdapter>();
    entries.set_title(text(&shown.title));
    entries.set_facts(text(&shown.facts));
    list!(entries.get_lines, set_lines, rows::facts(&shown.lines));
    entries.set_note(text(&shown.note));
    entries.set_struck_words(text(&shown.struck_words));
    entries.set_can_strike(shown.can_strike);
    entries.set_can_correct(shown.can_correct);
    entries.set_step(match shown.step {
        entry::Step::Read => EntryStep::Read,
        entry::Step::Strike => EntryStep::Strike,
        entry::Step::Correct => EntryStep::Correct,
        entry::Step::Answer => EntryStep::Answer,
    });
    entries.set_can_answer(shown.can_answer);
    let correcting = &shown.correcting;
    entries.set_never(correcting.never);
    entries.set_can_replace(correcting.can_replace);
    entries.set_why_only_out(text(&correcting.why_only_out));
    entries.set_instead_caption(text(&correcting.caption));
    entries.set_instead(text(&correcting.instead));
    entries.set_instead_error(text(&correcting.error));
    list!(entries.get_results, set_results, rows::choices(&correcting.results));
    entries.set_result(text(&correcting.result));
    entries.set_asks_place(correcting.asks_place);
    entries.set_place(text(&correcting.place));
    entries.set_reason(text(&shown.reason));
    list!(entries.get_answers, set_answers, rows::choices(&shown.answers));
    entries.set_answer(text(&shown.answer));
    entries.set_signing(shown.signing);
    entries.set_technician(text(&shown.technician));
    entries.set_strokes(text(&shown.strokes));
    entries.set_counterpart(text(&shown.counterpart));
    entries.set_representative(text(&shown.representative));
    entries.set_representative_strokes(text(&shown.representative_strokes));
    entries.set_refusal_reason(text(&shown.refusal_reason));
    entries.set_said(shown.said.ready);
    entries.set_not_said(text(&shown.said.why_not));
    entries.set_ready(shown.ready.ready);
    entries.set_why_not(text(&shown.ready.why_not));
    Ok(())
}

pub fn show_closed(window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
    let shown = desk.closed_shown()?;
    let record = window.global::<VisitClosedAdapter>();
    record.set_site(text(&shown.site));
    record.set_closed(text(&shown.closed));
    record.set_file(text(&shown.file));
    record.set_folder(text(&shown.folder));
    list!(record.get_facts, set_facts, rows::facts(&shown.facts));
    list!(record.get_handed_over, set_handed_over, rows::facts(&shown.handed_over));
    record.set_handing_over(shown.handing_over);
    record.set_to_whom(text(&shown.to_whom));
    list!(record.get_ways, set_ways, rows::choices(&shown.ways));
    record.set_way(text(&shown.way));
    record.set_ready(shown.ready.ready);
    record.set_why_not(text(&shown.ready.why_not));
    Ok(())
}
