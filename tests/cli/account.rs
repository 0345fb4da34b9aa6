use super::stocked;

#[test]
fn every_format_says_the_same_year() {
    let desk = stocked();
    let csv = desk.on_store(&["account", "2026", "--format", "csv"]).done();
    let mut reader = csv::Reader::from_reader(csv.as_bytes());
    let column = |name: &str, headers: &csv::StringRecord| headers.iter().position(|header| header == name).unwrap();
    let headers = reader.headers().unwrap().clone();
    let rows: Vec<csv::StringRecord> = reader.records().map(Result::unwrap).collect();
    let of = |kind: &str| rows.iter().find(|row| &row[0] == kind).unwrap();
    assert_eq!(&of("appliance")[column("lost_kg", &headers)], "4.5359237");
    assert_eq!(&of("appliance")[column("odp_kg", &headers)], "0.2494758035");
    // 50 lb on the day of import, after 10 lb had been charged this year.
    assert_eq!(&of("gas")[column("opening_kg", &headers)], "27.2155422");
    assert_eq!(&of("gas")[column("closing_kg", &headers)], "22.6796185");
    assert_eq!(&of("gas")[column("bought_kg", &headers)], "", "not known is empty, never zero");

    let json: serde_json::Value = serde_json::from_str(&desk.on_store(&["account", "2026", "--format", "json"]).done()).unwrap();
    assert_eq!(json["appliances"][0]["lost"], "4.5359237");
    let table = desk.on_store(&["account", "2026", "--format", "table"]).done();
    assert!(table.contains("4.536"), "{table}");

    let told = desk.on_store(&["account", "2026"]).done();
    assert_eq!(told, "account 2026.pdf\n");
    let first = std::fs::read(desk.path("account 2026.pdf")).unwrap();
    assert!(first.starts_with(b"%PDF-"));
    desk.on_store(&["account", "2026", "--into", "again.pdf"]).done();
    assert_eq!(std::fs::read(desk.path("again.pdf")).unwrap(), first, "the same account gives the same bytes");
}

#[test]
fn one_owner_and_none_that_is_unknown() {
    let desk = stocked();
    let told = desk.on_store(&["account", "2026", "--owner", "Harbour Trust"]).done();
    assert_eq!(told, "account 2026 Harbour Trust.pdf\n");
    let error = desk.on_store(&["account", "2026", "--owner", "Harbor Trust"]).refused();
    assert!(error.contains("Owners here are: Harbour Trust."), "{error}");
    let error = desk.on_store(&["account", "2999"]).refused();
    assert!(error.contains("2999 has not begun"), "{error}");
    assert_eq!(desk.on_store(&["account", "last year"]).status, 2);
}
