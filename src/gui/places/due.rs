//! Due.

use super::Send;
use crate::gui::rows;
use crate::view::places::due::Msg as Due;
use crate::view::places::{Msg, Office};
use bubblepoint_ui::{AppWindow, DueAdapter, DueItem};
use slint::ComponentHandle;

pub fn connect(window: &AppWindow, send: &Send) {
    let a = window.global::<DueAdapter>();
    on!(a, send, on_choose_horizon, |key| Msg::Due(Due::Horizon(key.into())));
    on!(a, send, on_open, |key| Msg::Due(Due::Open(key.into())));
    on!(a, send, on_open_visit, |key| Msg::Due(Due::OpenVisit(key.into())));
    on!(a, send, on_begin, || Msg::Due(Due::Begin));
    on!(a, send, on_show_appliance, || Msg::Due(Due::ShowAppliance));
}

pub fn show(window: &AppWindow, office: &Office) {
    let a = window.global::<DueAdapter>();
    let page = office.due_page();
    a.set_today(page.today.into());
    a.set_summary(page.summary.into());
    list!(a.get_visits, set_visits, rows::lines(&page.visits));
    list!(a.get_horizons, set_horizons, rows::choices(&page.horizons));
    a.set_horizon(page.horizon.into());
    list!(a.get_lines, set_lines, rows::lines(&page.lines));
    a.set_empty_words(page.empty_words.into());
    a.set_begin_words(page.begin_words.into());
    a.set_item_open(page.item.is_some());
    a.set_item_key(page.item_key.into());
    if let Some(item) = page.item {
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
