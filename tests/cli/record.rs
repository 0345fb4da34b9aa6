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

#[test]
fn a_further_copy_is_counted_and_the_original_stays() {
    let desk = demonstration();
    let visits: serde_json::Value = serde_json::from_str(&desk.on_store(&["visits", "--format", "json"]).done()).unwrap();
    let of = |state: &str| {
        let visit = visits.as_array().unwrap().iter().find(|visit| visit["state"] == state).unwrap();
        visit["visit"].as_str().unwrap().to_owned()
    };
    let id = of("closed");
    let original = desk.on_store(&["record", &id]).done();
    let bytes = std::fs::read(desk.path(original.trim_end())).unwrap();
    let second = desk.on_store(&["record", &id, "--new-copy"]).done();
    assert!(second.ends_with(" copy 2.pdf\n"), "{second}");
    assert!(desk.on_store(&["record", &id, "--new-copy"]).done().ends_with(" copy 3.pdf\n"));
    let copy = std::fs::read(desk.path(second.trim_end())).unwrap();
    assert_eq!(desk.on_store(&["record", &id, "--copy", "2"]).done(), second);
    assert_eq!(std::fs::read(desk.path(second.trim_end())).unwrap(), copy);
    assert_eq!(desk.on_store(&["record", &id]).done(), original);
    assert_eq!(std::fs::read(desk.path(original.trim_end())).unwrap(), bytes);
    let verdict = desk.on_store(&["check", second.trim_end()]).done();
    assert!(verdict.contains(" as copy 2"), "{verdict}");

    // What fails is told on standard error; what could be printed is there.
    let came = desk.on_store(&["record", &id, &of("open"), "--new-copy"]);
    assert_eq!(came.status, 1);
    assert!(came.out.ends_with(" copy 4.pdf\n") && came.out.lines().count() == 1, "{}", came.out);
    assert!(came.err.contains(&of("open")) && came.err.contains("was not printed: "), "{}", came.err);
}

#[test]
fn a_file_that_cannot_be_written_or_read_is_told_on_standard_error() {
    let desk = demonstration();
    let told = desk.on_store(&["record", "--all", "--into", "papers"]).done();
    let first = told.lines().next().unwrap();
    std::fs::remove_file(desk.path(first)).unwrap();
    // A folder stands where the first file belongs.
    std::fs::create_dir(desk.path(first)).unwrap();
    let came = desk.on_store(&["record", "--all", "--into", "papers"]);
    assert_eq!((came.status, came.out.lines().count()), (1, told.lines().count() - 1), "{}", came.err);
    assert!(came.err.contains("was not printed: ") && came.err.contains("could not be written"), "{}", came.err);

    let came = desk.on_store(&["check", "missing.pdf", told.lines().last().unwrap()]);
    assert_eq!(came.status, 1);
    assert!(came.err.contains("missing.pdf cannot be read") && came.out.lines().count() == 1, "{}{}", came.out, came.err);
}
