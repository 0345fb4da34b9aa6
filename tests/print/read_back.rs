//! Reads a PDF with another library than the one that wrote it: text through
//! each font's own ToUnicode map, and the drawing operators.

use lopdf::content::Content;
use lopdf::{Dictionary, Document, Object};
use std::collections::BTreeMap;

pub struct Paper {
    pub pages: Vec<Page>,
    pub document: Document,
}

pub struct Page {
    /// Every run of text, in order.
    pub runs: Vec<Run>,
    /// Point counts of all stroked paths.
    pub strokes: Vec<usize>,
    pub size: (f32, f32),
}

pub struct Run {
    pub text: String,
    pub x: f32,
    pub y: f32,
    pub size: f32,
    /// In points, from the widths the file itself gives.
    pub width: f32,
}

impl Paper {
    pub fn read(bytes: &[u8]) -> Self {
        let document = Document::load_mem(bytes).expect("a readable PDF");
        let pages = document.get_pages().values().map(|id| page(&document, *id)).collect();
        Self { pages, document }
    }

    /// All text, blanks and line breaks as single blanks.
    pub fn text(&self) -> String {
        self.pages.iter().map(Page::text).collect::<Vec<_>>().join(" ")
    }
}

impl Page {
    pub fn text(&self) -> String {
        let joined = self.runs.iter().map(|run| run.text.as_str()).collect::<Vec<_>>().join(" ");
        joined.split_whitespace().collect::<Vec<_>>().join(" ")
    }
}

fn number(object: &Object) -> f32 {
    object.as_float().expect("a number")
}

fn page(document: &Document, id: lopdf::ObjectId) -> Page {
    let fonts: BTreeMap<String, BTreeMap<u16, String>> = document
        .get_page_fonts(id)
        .expect("fonts")
        .into_iter()
        .map(|(name, font)| (String::from_utf8_lossy(&name).into_owned(), to_unicode(document, font)))
        .collect();
    let widths: BTreeMap<String, BTreeMap<u16, f32>> = document
        .get_page_fonts(id)
        .expect("fonts")
        .into_iter()
        .map(|(name, font)| (String::from_utf8_lossy(&name).into_owned(), glyph_widths(document, font)))
        .collect();
    let dictionary = document.get_dictionary(id).unwrap();
    let media = dictionary.get(b"MediaBox").and_then(Object::as_array).unwrap();
    let mut page = Page { runs: vec![], strokes: vec![], size: (number(&media[2]), number(&media[3])) };
    let content = Content::decode(&document.get_page_content(id)).expect("page content");
    let (mut font, mut size, mut at, mut points, mut in_text) = (String::new(), 0.0, (0.0, 0.0), 0, false);
    for operation in &content.operations {
        let operands = &operation.operands;
        match operation.operator.as_str() {
            "BT" => in_text = true,
            "ET" => in_text = false,
            "Tf" => {
                font = String::from_utf8_lossy(operands[0].as_name().unwrap()).into_owned();
                size = number(&operands[1]);
            }
            "Tm" => at = (number(&operands[4]), number(&operands[5])),
            "Tj" | "TJ" => {
                assert!(in_text, "text outside a text section is not shown by viewers");
                let mut bytes = Vec::new();
                for operand in operands {
                    match operand {
                        Object::String(part, _) => bytes.extend_from_slice(part),
                        Object::Array(parts) => parts.iter().filter_map(|part| part.as_str().ok()).for_each(|part| bytes.extend(part)),
                        _ => {}
                    }
                }
                let map = &fonts[&font];
                let codes: Vec<u16> = bytes.chunks(2).map(|pair| u16::from_be_bytes([pair[0], pair[1]])).collect();
                let text = codes.iter().map(|code| map.get(code).map_or("\u{FFFD}", String::as_str)).collect();
                let width = codes.iter().map(|code| widths[&font][code]).sum::<f32>() * size / 1000.0;
                page.runs.push(Run { text, x: at.0, y: at.1, size, width });
            }
            "m" => points = 1,
            "l" | "c" => points += 1,
            "S" => page.strokes.push(points),
            _ => {}
        }
    }
    page
}

fn resolved<'a>(document: &'a Document, dictionary: &'a Dictionary, key: &[u8]) -> &'a Object {
    let object = dictionary.get(key).unwrap_or_else(|_| panic!("no {}", String::from_utf8_lossy(key)));
    object.as_reference().map_or(object, |id| document.get_object(id).unwrap())
}

fn descendant<'a>(document: &'a Document, font: &'a Dictionary) -> &'a Dictionary {
    match &resolved(document, font, b"DescendantFonts").as_array().unwrap()[0] {
        Object::Reference(id) => document.get_dictionary(*id).unwrap(),
        other => other.as_dict().unwrap(),
    }
}

/// ISO 32000-1, 9.7.4.3: `c [w …]` and `first last w`.
fn glyph_widths(document: &Document, font: &Dictionary) -> BTreeMap<u16, f32> {
    let list = resolved(document, descendant(document, font), b"W").as_array().unwrap();
    let mut widths = BTreeMap::new();
    let mut at = 0;
    let code = |object: &Object| u16::try_from(object.as_i64().unwrap()).unwrap();
    while at < list.len() {
        if let Ok(run) = list[at + 1].as_array() {
            for (step, width) in run.iter().enumerate() {
                widths.insert(code(&list[at]) + u16::try_from(step).unwrap(), number(width));
            }
            at += 2;
        } else {
            for glyph in code(&list[at])..=code(&list[at + 1]) {
                widths.insert(glyph, number(&list[at + 2]));
            }
            at += 3;
        }
    }
    widths
}

fn to_unicode(document: &Document, font: &Dictionary) -> BTreeMap<u16, String> {
    let stream = resolved(document, font, b"ToUnicode").as_stream().unwrap();
    let text = String::from_utf8(stream.get_plain_content().unwrap()).unwrap();
    let hex = |word: &str| word.trim_matches(['<', '>']).to_owned();
    let mut map = BTreeMap::new();
    let (mut chars, mut ranges) = (false, false);
    for line in text.lines() {
        let words: Vec<&str> = line.split_whitespace().collect();
        chars = (chars || line.ends_with("beginbfchar")) && !line.starts_with("endbfchar");
        ranges = (ranges || line.ends_with("beginbfrange")) && !line.starts_with("endbfrange");
        let code = |word: &str| u16::from_str_radix(&hex(word), 16).unwrap();
        let units = |word: &str| -> Vec<u16> {
            let digits = hex(word);
            (0..digits.len() / 4).map(|index| u16::from_str_radix(&digits[index * 4..index * 4 + 4], 16).unwrap()).collect()
        };
        if chars && words.len() == 2 && words[0].starts_with('<') {
            map.insert(code(words[0]), String::from_utf16(&units(words[1])).unwrap());
        } else if ranges && words.len() == 3 && words[2].starts_with('<') {
            let start = units(words[2]);
            for (step, glyph) in (code(words[0])..=code(words[1])).enumerate() {
                let mut target = start.clone();
                *target.last_mut().unwrap() += u16::try_from(step).unwrap();
                map.insert(glyph, String::from_utf16(&target).unwrap());
            }
        }
    }
    map
}

/// The embedded font programs, by the name of their font.
pub fn font_programs(document: &Document) -> BTreeMap<String, Vec<u8>> {
    let mut programs = BTreeMap::new();
    for (_, id) in document.get_pages() {
        for font in document.get_page_fonts(id).unwrap().values() {
            let descriptor = resolved(document, descendant(document, font), b"FontDescriptor").as_dict().unwrap();
            let name = String::from_utf8_lossy(descriptor.get(b"FontName").unwrap().as_name().unwrap()).into_owned();
            let file = resolved(document, descriptor, b"FontFile2").as_stream().unwrap();
            programs.insert(name, file.get_plain_content().unwrap());
        }
    }
    programs
}
