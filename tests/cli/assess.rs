//! The sample of the contract, field by field.

use super::stocked;
use serde_json::{Value, json};

fn assessed() -> Value {
    let text = stocked().on_store(&["assess", "--on", "2026-06-30", "--format", "json"]).done();
    serde_json::from_str(&text).unwrap()
}

/// 10 lb added to 100 lb after 180 days, on a scale of 0.1 lb division.
#[test]
fn the_contract_s_sample_comes_out_as_printed() {
    let mut found = assessed();
    let duties = found["appliances"][0]["duties"].as_array_mut().unwrap();
    // The contract's sample leaves its inspection duty out.
    duties.retain(|duty| duty["duty"] != "leak inspection");
    let duty = |duty: &str, source: &str| {
        json!({ "duty": duty, "rulebook": "us-82f", "source": source, "from": "2026-03-03", "due": "2026-04-02", "met_on": null,
                "state": "late" })
    };
    let expected = json!({
        "on": "2026-06-30",
        "program": "bubblepoint 0.1.0",
        "appliances": [{
            "appliance": "R-1", "site": "Fish market cold store", "refrigerant": "R-22", "full_charge_kg": "45.359237",
            "rulebooks": [{
                "id": "us-82f", "applies": true, "why": "ozone-depleting refrigerant, full charge at least 50 lb (40 CFR 82.157(a))",
                "method": "annualizing",
                "rate": { "on": "2026-03-03", "percent": "20.28", "numerator": "365", "denominator": "18", "added_kg": "4.5359237",
                          "days": 180, "trigger_percent": "20", "verdict": "over trigger", "band_percent": "0.17",
                          "within_weighing_error": false }
            }],
            "duties": [
                duty("initial verification test", "40 CFR 82.157(e)(1)"),
                duty("repair", "40 CFR 82.157(d)"),
                duty("retrofit or retirement plan", "40 CFR 82.157(h)")
            ],
            "this_year": { "charged_kg": "4.5359237", "recovered_kg": "0", "lost_kg": "4.5359237", "odp_kg": "0.2494758035",
                           "co2e_t": "8.210021897", "gwp_set": "40 CFR 84.64, else IPCC AR4" }
        }]
    });
    assert_eq!(found, expected, "{found:#}");
}

#[test]
fn the_same_store_and_day_give_the_same_bytes() {
    let desk = stocked();
    for format in ["table", "json", "csv"] {
        let answer = || desk.on_store(&["assess", "--on", "2026-06-30", "--format", format]).done();
        let first = answer();
        assert!(first.contains("20.28"), "{first}");
        assert_eq!(first, answer());
    }
}

#[test]
fn a_site_or_appliance_that_is_not_there_is_named() {
    let desk = stocked();
    let error = desk.on_store(&["assess", "--site", "Nowhere"]).refused();
    assert!(error.contains("there is no site \u{201c}Nowhere\u{201d}"), "{error}");
    let error = desk.on_store(&["assess", "--appliance", "R-2"]).refused();
    assert!(error.contains("\u{201c}R-2\u{201d}"), "{error}");
    assert_eq!(desk.on_store(&["assess", "--on", "yesterday"]).status, 2);
}
