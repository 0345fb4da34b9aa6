use super::{Desk, pdfs, stocked};

fn demonstration() -> Desk {
    let desk = Desk::new();
    desk.on_store(&["demo", "--no-window", "--into", "demo"]).done();
    desk
}

#[test]
fn all_visits_are_printed_each_under_its_own_name() {
    let desk = demonstration();
    let told = desk.on_store(&["record", "--all", "--into", "papers/all"]).done();
    let files = pdfs(&desk.path("papers/all"));
    let visits = desk.on_store(&["visits", "--format", "csv"]).done();
    assert_eq!(files.len(), visits.lines().count() - 1);
    assert_eq!(told.lines().count(), files.len());
    let marked = |mark: &str| told.lines().filter(|line| line.contains(mark)).count();
    assert_eq!((marked(" open "), marked(" imported ")), (1, visits.matches(",imported,").count()));

    let before: Vec<_> = files.iter().map(|file| std::fs::read(file).unwrap()).collect();
    desk.on_store(&["record", "--all", "--into", "papers/all"]).done();
    let after: Vec<_> = pdfs(&desk.path("papers/all")).iter().map(|file| std::fs::read(file).unwrap()).collect();
    assert_eq!(before, after, "the same store gives the same bytes");
}

#[test]
fn one_visit_by_its_id_its_fingerprint_or_its_appliance_and_day() {
    let desk = demonstration();
    let visits: serde_json::Value =
        serde_json::from_str(&desk.on_store(&["visits", "--appliance", "FM-1", "--format", "json"]).done()).unwrap();
    let visit = visits.as_array().unwrap().iter().find(|visit| visit["state"] == "closed").unwrap();
    let text = |field: &str| visit[field].as_str().unwrap();
    let by_id = desk.on_store(&["record", text("visit")]).done();
    let short = &text("fingerprint")[..8];
    assert_eq!(by_id, format!("./{} FM-1 {short}.pdf\n", text("date")));
    assert_eq!(desk.on_store(&["record", &format!("{} {}", &short[..4], &short[4..])]).done(), by_id);
    assert_eq!(desk.on_store(&["record", "--appliance", "FM-1", "--on", text("date")]).done(), by_id);

    let error = desk.on_store(&["record", "0f0f0f0f"]).refused();
    assert!(error.contains("there is no visit \u{201c}0f0f0f0f\u{201d}"), "{error}");
    let error = desk.on_store(&["record", "--appliance", "FM-1", "--on", "2001-01-01"]).refused();
    assert!(error.contains("nothing was entered for \u{201c}FM-1\u{201d} on 2001-01-01"), "{error}");
}

#[test]
fn history_prints_without_a_signature() {
    let desk = stocked();
    let told = desk.on_store(&["record", "--appliance", "R-1", "--on", "2026-03-03", "--into", "out"]).done();
    assert!(told.starts_with("out/2026-03-03 R-1 imported "), "{told}");
    assert_eq!(pdfs(&desk.path("out")).len(), 1);
}

#[test]
fn a_saved_record_is_checked_against_the_store() {
    let desk = demonstration();
    let store = desk.on_store(&["check"]).done();
    assert!(store.contains("0 with a fault; the store is sound"), "{store}");

    let visits: serde_json::Value = serde_json::from_str(&desk.on_store(&["visits", "--format", "json"]).done()).unwrap();
    let closed = visits.as_array().unwrap().iter().find(|visit| visit["state"] == "closed").unwrap();
    let id = closed["visit"].as_str().unwrap();
    for paper in ["a4", "letter"] {
        let file = desk.on_store(&["record", id, "--into", paper, "--paper", paper]).done();
        let verdict = desk.on_store(&["check", file.trim_end()]).done();
        assert!(verdict.contains("sound; byte for byte what this store prints for record "), "{verdict}");
    }

    let file = desk.on_store(&["record", id, "--into", "changed"]).done();
    let path = desk.path(file.trim_end());
    let mut bytes = std::fs::read(&path).unwrap();
    let middle = bytes.len() / 2;
    bytes[middle] ^= 1;
    std::fs::write(&path, bytes).unwrap();
    let changed = desk.on_store(&["check", file.trim_end()]);
    assert_eq!(changed.status, 1, "{}", changed.out);
    assert!(changed.out.contains("NOT verified"), "{}", changed.out);

    desk.write("letter.pdf", "%PDF-1.3 of someone else");
    let foreign = desk.on_store(&["check", "letter.pdf"]);
    assert_eq!(foreign.status, 1);
    assert!(foreign.out.contains("no closed record of this store"), "{}", foreign.out);
}
