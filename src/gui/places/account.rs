//! Account.

use super::Send;
use crate::gui::rows::{self, inner};
use crate::view::places::account::Msg as Account;
use crate::view::places::{Msg, Office, account};
use bubblepoint_ui::{AccountAdapter, AccountFigure, AppWindow, GasPlate, Share, Tally};
use slint::{ComponentHandle, SharedString};

pub fn connect(window: &AppWindow, send: &Send) {
    let a = window.global::<AccountAdapter>();
    on!(a, send, on_step_year, |by| Msg::Account(Account::StepYear(by)));
    on!(a, send, on_choose_owner, |key| Msg::Account(Account::Owner(key.into())));
    on!(a, send, on_choose_gas, |key| Msg::Account(Account::Gas(key.into())));
    on!(a, send, on_open_appliance, |key| Msg::Account(Account::OpenAppliance(key.into())));
    on!(a, send, on_export, |format| Msg::Account(Account::Export(format.into())));
    on!(a, send, on_begin, || Msg::Account(Account::Begin));
}

/// Whether the choice of owner and gas lay over the account.
pub fn stop_choosing(window: &AppWindow) -> bool {
    let a = window.global::<AccountAdapter>();
    let choosing = a.get_choosing();
    a.set_choosing(false);
    choosing
}

pub fn show(window: &AppWindow, office: &Office) {
    let a = window.global::<AccountAdapter>();
    let page = office.account_page();
    a.set_year(page.year.into());
    a.set_has_earlier(page.has_earlier);
    a.set_has_later(page.has_later);
    a.set_extent(page.extent.into());
    list!(a.get_owners, set_owners, rows::choices(&page.owners));
    a.set_owner(page.owner.into());
    list!(a.get_gases, set_gases, rows::choices(&page.gases));
    a.set_gas(page.gas.into());
    a.set_choice_words(page.choice_words.into());
    a.set_lost(page.lost.into());
    a.set_lost_unit(page.lost_unit.into());
    a.set_co2e(page.co2e.into());
    a.set_odp(page.odp.into());
    a.set_tables(page.tables.into());
    let plate = |plate: account::Plate| {
        let figure = |(caption, value, sum): (String, String, bool)| AccountFigure { caption: caption.into(), value: value.into(), sum };
        GasPlate {
            gas: plate.gas.into(),
            unit: plate.unit.into(),
            figures: inner(plate.figures.into_iter().map(figure).collect()),
            weighted: inner(rows::facts(&plate.weighted)),
        }
    };
    list!(a.get_plates, set_plates, page.plates.into_iter().map(plate).collect());
    let share = |share: account::Share| Share {
        key: share.key.into(),
        name: share.name.into(),
        facts: share.facts.into(),
        value: share.value.into(),
        share: share.share,
    };
    list!(a.get_losses, set_losses, page.losses.into_iter().map(share).collect());
    let tally = |tally: account::Tally| Tally {
        name: tally.name.into(),
        source: tally.source.into(),
        in_time: tally.in_time.into(),
        late: tally.late.into(),
        not_done: tally.not_done.into(),
        in_time_share: tally.shares[0],
        late_share: tally.shares[1],
        not_done_share: tally.shares[2],
    };
    list!(a.get_duties, set_duties, page.duties.into_iter().map(tally).collect());
    list!(a.get_remarks, set_remarks, page.remarks.into_iter().map(SharedString::from).collect());
    a.set_export_words(page.export_words.into());
    a.set_export_grave(page.export_grave);
    a.set_empty_words(page.empty_words.into());
}
