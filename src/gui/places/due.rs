//! Due.

use super::Send;
use crate::gui::rows;
use crate::view::places::due::Msg as Due;
use crate::view::places::{Msg, Office};
use bubblepoint_ui::{AppWindow, DueAdapter, DueItem};
use slint::ComponentHandle;

pub fn connect(window: &AppWindow, send: &Send) {
    let a = window.global::<DueAdapter>();
    on!(a, send, on_choose_grouping, |key| Msg::Due(Due::Grouping(key.into())));
    on!(a, send, on_print_list, || Msg::Due(Due::PrintList));
    on!(a, send, on_write_calendar, || Msg::Due(Due::WriteCalendar));
    on!(a, send, on_choose_horizon, |key| Msg::Due(Due::Horizon(key.into())));
    on!(a, send, on_open, |key| Msg::Due(Due::Open(key.into())));
    on!(a, send, on_open_visit, |key| Msg::Due(Due::OpenVisit(key.into())));
    on!(a, send, on_begin, || Msg::Due(Due::Begin));
    on!(a, send, on_show_appliance, || Msg::Due(Due::ShowAppliance));
}

/// Whether the choices about the list lay over it.
pub fn stop_choosing(window: &AppWindow) -> bool {
    let a = window.global::<DueAdapter>();
    let choosing = a.get_choosing();
    a.set_choosing(false);
    choosing
}

pub fn show(window: &AppWindow, office: &Office) {
    let a = window.global::<DueAdapter>();
    let page = office.due_page();
    a.set_today(page.today.into());
    a.set_summary(page.summary.into());
    list!(a.get_visits, set_visits, rows::lines(&page.visits));
    list!(a.get_horizons, set_horizons, rows::choices(&page.horizons));
    a.set_horizon(page.horizon.into());
    list!(a.get_groupings, set_groupings, rows::choices(&page.groupings));
    a.set_grouping(page.grouping.into());
    a.set_list_words(page.list_words.into());
    a.set_written_words(page.written.into());
    a.set_written_grave(page.written_grave);
    list!(a.get_lines, set_lines, rows::lines(&page.lines));
    a.set_empty_words(page.empty_words.into());
    a.set_begin_words(page.begin_words.into());
    a.set_item_open(page.item.is_some());
    a.set_item_key(page.item_key.into());
    if let Some(item) = page.item {
        list!(a.get_item_reasons, set_item_reasons, rows::reasons(&item.reasons));
        a.set_item(DueItem {
            name: item.name.into(),
            subject: item.subject.into(),
            verdict: rows::verdict(item.verdict),
            word: item.word.into(),
            facts: rows::inner(rows::facts(&item.facts)),
            text: item.text.into(),
            source: item.source.into(),
        });
    }
}
