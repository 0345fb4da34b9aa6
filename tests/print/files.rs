//! What holds for every file: fonts, bytes, size, pages.

use super::fixtures;
use super::read_back::{Paper as Read, font_programs};
use bubblepoint::print::{Paper, annual_account, service_record};
use bubblepoint::record::ServiceRecord;

/// Every invented record with its name.
fn records() -> Vec<(&'static str, ServiceRecord)> {
    vec![
        ("over trigger", fixtures::over_trigger()),
        ("clean", fixtures::clean()),
        ("nobody present", fixtures::nobody_present()),
        ("refused", fixtures::refused()),
        ("signs later", fixtures::signs_later()),
        ("draft", fixtures::draft()),
        ("imported", fixtures::imported()),
        ("large", fixtures::large()),
        ("many tongues", fixtures::many_tongues()),
        ("long words", fixtures::long_words()),
    ]
}

fn all() -> Vec<(String, Paper, Vec<u8>)> {
    let mut files = Vec::new();
    for paper in [Paper::A4, Paper::Letter] {
        for (name, record) in records() {
            files.push((name.to_owned(), paper, service_record(&record, paper).unwrap()));
        }
        files.push(("account".to_owned(), paper, annual_account(&fixtures::account(), paper).unwrap()));
    }
    // To be looked at: BUBBLEPOINT_PAPERS names a folder.
    if let Some(folder) = std::env::var_os("BUBBLEPOINT_PAPERS") {
        for (name, paper, bytes) in &files {
            std::fs::write(std::path::Path::new(&folder).join(format!("{name} {paper:?}.pdf")), bytes).unwrap();
        }
    }
    files
}

#[test]
fn fonts_are_embedded_cut_and_parse() {
    for (name, _, bytes) in all() {
        let programs = font_programs(&Read::read(&bytes).document);
        assert_eq!(programs.len(), 2, "{name}: {:?}", programs.keys());
        for (font, program) in programs {
            assert!(font.contains("+IBMPlexSans"), "{font}");
            assert!(program.len() > 1_000 && program.len() < 60_000, "{name}, {font}: {} bytes", program.len());
            let parsed = glyph_count(&program);
            assert!(parsed > 20, "{name}, {font}: only {parsed} glyphs");
        }
    }
}

/// Glyphs of a TrueType program, from its table directory and `maxp`.
fn glyph_count(program: &[u8]) -> u16 {
    let u16_at = |at: usize| u16::from_be_bytes([program[at], program[at + 1]]);
    let u32_at = |at: usize| u32::from_be_bytes([program[at], program[at + 1], program[at + 2], program[at + 3]]) as usize;
    assert_eq!(u32_at(0), 0x0001_0000, "a TrueType program");
    let mut glyphs = 0;
    let mut tables = Vec::new();
    for index in 0..usize::from(u16_at(4)) {
        let record = 12 + 16 * index;
        let (tag, offset, length) = (&program[record..record + 4], u32_at(record + 8), u32_at(record + 12));
        assert!(offset + length <= program.len(), "table runs past the file");
        tables.push(String::from_utf8_lossy(tag).into_owned());
        if tag == b"maxp" {
            glyphs = u16_at(offset + 4);
        }
    }
    for needed in ["glyf", "loca", "head", "hhea", "hmtx", "maxp"] {
        assert!(tables.iter().any(|tag| tag == needed), "no {needed} in {tables:?}");
    }
    glyphs
}

#[test]
fn same_record_same_bytes() {
    for paper in [Paper::A4, Paper::Letter] {
        for (name, record) in records() {
            let (first, second) = (service_record(&record, paper).unwrap(), service_record(&record, paper).unwrap());
            assert!(first == second, "{name} differs between two prints");
        }
        let account = fixtures::account();
        assert!(annual_account(&account, paper).unwrap() == annual_account(&account, paper).unwrap());
    }
}

#[test]
fn the_document_id_follows_the_record() {
    let id = |record: &ServiceRecord| {
        let document = Read::read(&service_record(record, Paper::A4).unwrap()).document;
        let id = document.trailer.get(b"ID").unwrap().as_array().unwrap().clone();
        (id[0].as_str().unwrap().to_vec(), id[1].as_str().unwrap().to_vec())
    };
    let first = id(&fixtures::over_trigger());
    let reprint = id(&ServiceRecord { copy: 2, ..fixtures::over_trigger() });
    assert_eq!(first.0, reprint.0, "one record");
    assert_ne!(first.1, reprint.1, "two prints");
    let mut other = fixtures::over_trigger();
    other.fingerprint.as_mut().unwrap().full = fixtures::FULL.replace('3', "4");
    assert_ne!(first.0, id(&other).0);
}

#[test]
fn files_claim_nothing_they_are_not() {
    for (name, _, bytes) in all() {
        let document = Read::read(&bytes).document;
        let info = document.trailer.get(b"Info").unwrap().as_reference().unwrap();
        let info = document.get_dictionary(info).unwrap();
        for key in ["GTS_PDFXVersion", "CreationDate", "ModDate"] {
            assert!(!info.has(key.as_bytes()), "{name}: {key}");
        }
        assert!(info.has(b"Title"));
        let catalogue = document.catalog().unwrap();
        assert_eq!(catalogue.get(b"Lang").unwrap().as_str().unwrap(), b"en");
    }
}

#[test]
fn files_are_small() {
    for (name, _, bytes) in all() {
        assert!(bytes.len() <= 60_000, "{name}: {} bytes", bytes.len());
    }
}

#[test]
fn pages_are_numbered_and_of_the_paper_asked_for() {
    for (name, paper, bytes) in all() {
        let read = Read::read(&bytes);
        let count = read.pages.len();
        let size = if paper == Paper::A4 { (595.28, 841.89) } else { (612.0, 792.0) };
        for (index, page) in read.pages.iter().enumerate() {
            assert!((page.size.0 - size.0).abs() < 0.1 && (page.size.1 - size.1).abs() < 0.1, "{name}: {:?}", page.size);
            assert!(page.text().contains(&format!("page {} of {count}", index + 1)), "{name}, page {}", index + 1);
        }
    }
}

/// Nothing may stand outside the margins, or below the foot.
#[test]
fn no_text_leaves_the_page() {
    for (name, _, bytes) in all() {
        let read = Read::read(&bytes);
        for (number, page) in read.pages.iter().enumerate() {
            for run in &page.runs {
                let inside = run.x >= 41.5 && run.x + run.width <= page.size.0 - 41.5 && run.y > 12.0 && run.y < page.size.1 - 20.0;
                assert!(inside, "{name}, page {}: \u{201c}{}\u{201d} at {}, {}", number + 1, run.text, run.x, run.y);
            }
        }
    }
}

/// Two runs of text must not lie over each other.
#[test]
fn no_text_covers_another() {
    for (name, paper, bytes) in all() {
        let read = Read::read(&bytes);
        for (number, page) in read.pages.iter().enumerate() {
            for (index, a) in page.runs.iter().enumerate() {
                for b in &page.runs[index + 1..] {
                    // Capitals are 0.7 em high, and some room belongs above them.
                    let apart_y = (a.y - b.y).abs() >= 0.9 * if a.y < b.y { a.size } else { b.size };
                    let apart_x = a.x + a.width <= b.x || b.x + b.width <= a.x;
                    assert!(
                        apart_y || apart_x,
                        "{name} on {paper:?}, page {}: \u{201c}{}\u{201d} over \u{201c}{}\u{201d}",
                        number + 1,
                        a.text,
                        b.text
                    );
                }
            }
        }
    }
}
