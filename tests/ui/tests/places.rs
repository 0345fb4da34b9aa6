//! The five places on real stores: a first start, search, settings, and every
//! page of the demonstration at every size.

use bubblepoint::view::places::{Go, Look};
use bubblepoint_ui::{AppWindow, AppearanceAdapter, Page, Shell, Theme};
use bubblepoint_ui_tests::{
    OFFICE_PAGES, PHONE, SIZES, TABLET, TABLET_UPRIGHT, acting, demonstration, empty, field, mark_demonstration, office, office_as, open,
    press, press_key, settle, sweep,
};
use slint::ComponentHandle;

pub const CHECKS: &[super::Check] = &[
    ("places::a_first_start_leads_to_the_first_visit", a_first_start_leads_to_the_first_visit),
    ("places::a_store_on_disk_is_looked_through_by_a_worker", a_store_on_disk_is_looked_through_by_a_worker),
    ("places::the_window_moves_between_visit_and_places", the_window_moves_between_visit_and_places),
    ("places::search_in_plant", search_in_plant),
    ("places::appearance_and_text_size_are_kept", appearance_and_text_size_are_kept),
    ("places::every_page_of_the_demonstration_is_whole", every_page_of_the_demonstration_is_whole),
];

fn shows(window: &AppWindow, start: &str) -> bool {
    acting(window).iter().any(|one| one.label.starts_with(start))
}

fn a_first_start_leads_to_the_first_visit() {
    let folder = tempfile::tempdir().expect("a folder");
    let app = empty();
    let opened = office(&app, TABLET_UPRIGHT, folder.path());
    let window = &opened.window;
    press(window, "Write down the company");
    field(window, "name", "Quill Cooling");
    press(window, "Save company");
    field(window, "name", "Ada Quill");
    press(window, "Save person");
    field(window, "site", "Fish market");
    press(window, "Add site");
    field(window, "identification, as on the appliance", "R-1");
    field(window, "gas", "r22");
    press(window, "Add appliance");
    field(window, "identification, as stamped", "S-204");
    field(window, "gas; empty for an empty recovery cylinder", "R-22");
    field(window, "tare as stamped, with unit", "12.7 kg");
    press(window, "Add cylinder");
    assert_eq!(window.global::<Shell>().get_page(), Page::Due);
    press(window, "Begin work here");
    assert_eq!(*opened.gone.borrow(), [Go::Begin { site: None, appliance: None }]);
    let registers = app.store().registers().expect("registers");
    assert_eq!((registers.appliances[0].name.as_str(), registers.cylinders[0].name.as_str()), ("R-1", "S-204"));
    assert_eq!(registers.appliances[0].versions.latest().refrigerant, "R-22");
}

fn a_store_on_disk_is_looked_through_by_a_worker() {
    use bubblepoint::app::App;
    use bubblepoint::store::OpenMode;
    let folder = tempfile::tempdir().expect("a folder");
    let app = std::rc::Rc::new(App::open(&folder.path().join("s.db"), OpenMode::Create).expect("a store"));
    let opened = office(&app, PHONE, folder.path());
    for _ in 0..200 {
        if opened.places.office().overview.is_some() {
            break;
        }
        std::thread::sleep(std::time::Duration::from_millis(10));
        settle();
    }
    assert!(opened.places.office().overview.is_some(), "the worker never came back");
    assert!(shows(&opened.window, "Write down the company"), "what the worker found is not shown");
}

fn the_window_moves_between_visit_and_places() {
    use bubblepoint::app::App;
    use bubblepoint::gui::{Gui, desk_options};
    use bubblepoint::store::Store;
    use bubblepoint::view::Desk;
    let folder = tempfile::tempdir().expect("a folder");
    let clock = bubblepoint::app::testing::SetClock::at("2026-04-01T13:00:00Z".parse().expect("an instant"), chrono_tz::Tz::UTC);
    let ids = bubblepoint::app::testing::CountedIds::after(1);
    let app = App::with(Store::in_memory().expect("a store"), Box::new(clock), Box::new(ids)).expect("use cases");
    let window = open(PHONE, bubblepoint_ui::Appearance::Light, 1.0);
    let desk = Desk::new(app, desk_options(Some(folder.path().to_path_buf()))).expect("a desk");
    let _gui = Gui::attach(&window, desk);
    settle();
    let shell = window.global::<Shell>();
    assert_eq!(shell.get_page(), Page::Visit, "an empty store asks where work begins");
    press_key(&window, slint::platform::Key::Escape);
    assert_eq!(shell.get_page(), Page::Due);
    press(&window, "Write down the company");
    assert_eq!((shell.get_page(), shell.get_place()), (Page::Setup, bubblepoint_ui::Place::Setup));
    field(&window, "name", "Quill Cooling");
    press(&window, "Save company");
    field(&window, "name", "Ada Quill");
    press(&window, "Save person");
    assert_eq!((shell.get_page(), shell.get_place()), (Page::Plant, bubblepoint_ui::Place::Plant));
    field(&window, "site", "Fish market");
    press(&window, "Add site");
    press_key(&window, slint::platform::Key::Escape);
    press(&window, "Due");
    assert_eq!(shell.get_page(), Page::Due);
    press(&window, "Begin work here");
    assert_eq!(shell.get_page(), Page::Visit);
    let site = acting(&window).into_iter().find(|one| one.label.starts_with("Fish market")).expect("the new site can be chosen");
    press(&window, &site.label);
    for _ in 0..4 {
        if shell.get_page() == Page::Visit {
            press_key(&window, slint::platform::Key::Escape);
        }
    }
    assert_eq!(shell.get_page(), Page::Due, "back leads out of the visit");
    assert!(shows(&window, "Fish market, since"), "the visit just begun stands on top of Due");
}

fn search_in_plant() {
    let folder = tempfile::tempdir().expect("a folder");
    let opened = office(&demonstration(), TABLET, folder.path());
    press(&opened.window, "Plant");
    let (name, site) = {
        let office = opened.places.office();
        let judged = &office.overview.as_ref().expect("looked through").appliances[0];
        (judged.appliance.name.clone(), judged.site.name.clone())
    };
    field(&opened.window, "search", &name);
    assert!(shows(&opened.window, &format!("{name}, ")) && shows(&opened.window, &format!("{site}, ")));
    field(&opened.window, "search", "zzzz");
    assert!(!shows(&opened.window, &format!("{name}, ")), "{name} is shown though nothing fits");
}

fn appearance_and_text_size_are_kept() {
    let folder = tempfile::tempdir().expect("a folder");
    let app = empty();
    let opened = office(&app, TABLET, folder.path());
    press(&opened.window, "Setup");
    let row = acting(&opened.window).into_iter().find(|one| one.label.starts_with("Appearance, ")).expect("a row");
    press(&opened.window, &row.label);
    press(&opened.window, "sunlight");
    press(&opened.window, "130 %");
    assert_eq!(Look::read(&app).expect("settings"), Look { appearance: bubblepoint::app::Appearance::Sunlight, text_size: 130 });
    let theme = opened.window.global::<Theme>();
    assert_eq!((theme.get_appearance(), theme.get_text_factor()), (bubblepoint_ui::Appearance::Sunlight, 1.3));
    assert!(shows(&opened.window, "Appearance, sunlight, text 130 %"));
    // The next start looks the same.
    let again = office(&app, PHONE, folder.path());
    let theme = again.window.global::<Theme>();
    assert_eq!((theme.get_appearance(), theme.get_text_factor()), (bubblepoint_ui::Appearance::Sunlight, 1.3));
    again.window.global::<AppearanceAdapter>().invoke_changed_text_factor(1.0);
    assert_eq!(Look::read(&app).expect("settings").text_size, 100);
}

fn every_page_of_the_demonstration_is_whole() {
    let folder = tempfile::tempdir().expect("a folder");
    let app = demonstration();
    let mut faults = Vec::new();
    let mut looked_at = 0;
    for size in SIZES {
        for text_size in [100, 150] {
            for page in OFFICE_PAGES {
                let look = Look { appearance: bubblepoint::app::Appearance::Light, text_size };
                let opened = office_as(&app, size, look, folder.path());
                mark_demonstration(&opened.window);
                (page.reach)(&opened);
                settle();
                looked_at += acting(&opened.window).len();
                if let Some(message) = opened.places.office().message.as_ref() {
                    faults.push(format!("{} on a {}: it says {}", page.name, size.name, message.text));
                }
                for fault in sweep(&opened.window) {
                    faults.push(format!("{} on a {} at {text_size} %: {fault}", page.name, size.name));
                }
            }
        }
    }
    assert!(looked_at > 60 * OFFICE_PAGES.len(), "only {looked_at} elements that act were found");
    assert!(faults.is_empty(), "{} faults:\n{}", faults.len(), faults.join("\n"));
}
