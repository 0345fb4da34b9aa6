//! From marks to a PDF. The only file that names printpdf.
//!
//! - Fonts are cut to what the document uses before printpdf sees them: without
//!   its layout feature it embeds whole files.
//! - Ids that printpdf draws from a process-wide counter are replaced, so that
//!   the same pages give the same bytes.
//! - It writes an empty `GTS_PDFXVersion`, which makes viewers say PDF/X; the
//!   key is taken out. So are its dates of 1970.

use super::PrintError;
use super::fonts::{Face, Fonts};
use super::layout::Pages;
use super::sheet::{Ink, Mark};
use printpdf::{
    Color, FontId, Line, LineCapStyle, LineJoinStyle, LinePoint, Mm, Op, PaintMode, ParsedFont, PdfDocument, PdfFont, PdfFontHandle,
    PdfPage, PdfSaveOptions, Point, Pt, Rect, Rgb, TextItem, TextMatrix,
};
use std::collections::{BTreeMap, BTreeSet};

/// What the file says about itself.
pub(super) struct About {
    pub(super) title: String,
    pub(super) author: String,
    pub(super) subject: String,
    /// Program and version.
    pub(super) program: String,
    /// The same for every print of one record.
    pub(super) record_id: [u8; 16],
    /// The same only for equal content.
    pub(super) print_id: [u8; 16],
}

/// # Errors
/// [`PrintError::Font`] when a font cannot be cut, [`PrintError::Pdf`] when the file cannot be written.
pub(super) fn write(fonts: &Fonts, pages: &Pages, about: &About) -> Result<Vec<u8>, PrintError> {
    let mut pdf = PdfDocument::new(&about.title);
    let mut characters: BTreeMap<Face, BTreeSet<char>> = BTreeMap::new();
    for mark in pages.pages.iter().flatten() {
        if let Mark::Text { style, text, .. } = mark {
            characters.entry(style.face).or_default().extend(text.chars());
        }
    }
    for (face, characters) in &characters {
        let bytes = fonts.subset(*face, characters)?;
        let mut parsed = ParsedFont::from_bytes(&bytes, 0, &mut Vec::new())
            .ok_or_else(|| PrintError::Font(format!("{}: the cut font cannot be read", face.name())))?;
        if let Some(lost) = characters.iter().find(|c| parsed.lookup_glyph_index(u32::from(**c)).is_none()) {
            return Err(PrintError::Font(format!("{}: the cut font lacks \u{201c}{lost}\u{201d}", face.name())));
        }
        parsed.font_name = Some(format!("{}+{}", tag(characters), face.name()));
        pdf.resources.fonts.map.insert(font_id(*face), PdfFont::new(parsed));
    }
    let (width, height) = pages.paper.size();
    for page in &pages.pages {
        let mut written = PdfPage::new(Mm(0.0), Mm(0.0), operations(page, height));
        let sheet = Rect::from_wh(Pt(width), Pt(height));
        written.media_box = sheet.clone();
        written.trim_box = sheet.clone();
        written.crop_box = sheet;
        pdf.pages.push(written);
    }
    let info = &mut pdf.metadata.info;
    info.author.clone_from(&about.author);
    info.subject.clone_from(&about.subject);
    info.creator.clone_from(&about.program);
    info.producer.clone_from(&about.program);
    info.identifier = hex(&about.record_id);
    finish(&pdf, about)
}

fn finish(pdf: &PdfDocument, about: &About) -> Result<Vec<u8>, PrintError> {
    let failed = |why: &dyn std::fmt::Display| PrintError::Pdf(why.to_string());
    let options = PdfSaveOptions { optimize: true, subset_fonts: false, secure: true, image_optimization: None };
    let mut warnings = Vec::new();
    let mut file = pdf.to_lopdf_document(&options, &mut warnings);
    if let Some(warning) = warnings.iter().find(|warning| warning.severity == printpdf::PdfParseErrorSeverity::Error) {
        return Err(PrintError::Pdf(warning.msg.clone()));
    }
    let ids = file.trailer.get_mut(b"ID").and_then(|id| id.as_array_mut()).map_err(|why| failed(&why))?;
    for (id, bytes) in ids.iter_mut().zip([&about.record_id, &about.print_id]) {
        // Hex digits, so that the id survives any writer of strings.
        *id.as_str_mut().map_err(|why| failed(&why))? = hex(bytes).into_bytes();
    }
    let info = file.trailer.get(b"Info").and_then(|info| info.as_reference()).map_err(|why| failed(&why))?;
    let info = file.get_dictionary_mut(info).map_err(|why| failed(&why))?;
    // Screen readers ask for the language. The catalogue takes over a string
    // that is there, since printpdf does not hand on its string type.
    let mut language = info.get(b"Identifier").map_err(|why| failed(&why))?.clone();
    *language.as_str_mut().map_err(|why| failed(&why))? = b"en".to_vec();
    for key in ["GTS_PDFXVersion", "CreationDate", "ModDate", "Keywords", "Trapped"] {
        info.remove(key.as_bytes());
    }
    file.catalog_mut().map_err(|why| failed(&why))?.set("Lang", language);
    file.compress();
    let mut bytes = Vec::new();
    file.save_to(&mut bytes).map_err(|why| failed(&why))?;
    Ok(bytes)
}

fn hex(bytes: &[u8]) -> String {
    bytes.iter().map(|byte| format!("{byte:02x}")).collect()
}

/// Six capitals that mark a font as cut (ISO 32000-1, 9.6.4), from the
/// characters it has left.
fn tag(characters: &BTreeSet<char>) -> String {
    let mut sum: u32 = 17;
    for character in characters {
        sum = sum.wrapping_mul(31).wrapping_add(u32::from(*character));
    }
    (0..6).map(|place| char::from(b'A' + (sum / 26_u32.pow(place) % 26) as u8)).collect()
}

fn font_id(face: Face) -> FontId {
    FontId(match face {
        Face::Regular => "F_regular".to_owned(),
        Face::SemiBold => "F_semibold".to_owned(),
    })
}

fn colour(ink: Ink) -> Color {
    let (r, g, b) = match ink {
        Ink::Black => (0.0, 0.0, 0.0),
        Ink::White => (1.0, 1.0, 1.0),
        // The theme's copper, #8F4318.
        Ink::Copper => (0.561, 0.263, 0.094),
    };
    Color::Rgb(Rgb { r, g, b, icc_profile: None })
}

/// To a hundredth of a point: finer than any printer, and short in the file.
fn pt(value: f32) -> Pt {
    Pt((value * 100.0).round() / 100.0)
}

/// A page's marks as operations. Text stands between its own begin and end, or
/// viewers show a blank page.
fn operations(marks: &[Mark], height: f32) -> Vec<Op> {
    let mut ops = vec![Op::SetLineCapStyle { cap: LineCapStyle::Round }, Op::SetLineJoinStyle { join: LineJoinStyle::Miter }];
    let point = |x: f32, y: f32| Point { x: pt(x), y: pt(height - y) };
    let (mut fill, mut stroke, mut thickness): (Option<Ink>, Option<Ink>, Option<f32>) = (None, None, None);
    for mark in marks {
        match mark {
            Mark::Text { x, y, style, ink, text } => {
                if fill != Some(*ink) {
                    ops.push(Op::SetFillColor { col: colour(*ink) });
                    fill = Some(*ink);
                }
                let at = point(*x, *y);
                ops.push(Op::StartTextSection);
                ops.push(Op::SetFont { font: PdfFontHandle::External(font_id(style.face)), size: Pt(style.size) });
                ops.push(Op::SetTextMatrix { matrix: TextMatrix::Translate(at.x, at.y) });
                ops.push(Op::ShowText { items: vec![TextItem::Text(text.clone())] });
                ops.push(Op::EndTextSection);
            }
            Mark::Rect { x, y, width, height: tall, ink } => {
                if fill != Some(*ink) {
                    ops.push(Op::SetFillColor { col: colour(*ink) });
                    fill = Some(*ink);
                }
                let at = point(*x, y + tall);
                let mut rectangle = Rect::from_xywh(at.x, at.y, pt(*width), pt(*tall));
                rectangle.mode = Some(PaintMode::Fill);
                ops.push(Op::DrawRectangle { rectangle });
            }
            Mark::Path { width, ink, .. } | Mark::Circle { width, ink, .. } => {
                if stroke != Some(*ink) {
                    ops.push(Op::SetOutlineColor { col: colour(*ink) });
                    stroke = Some(*ink);
                }
                if thickness != Some(*width) {
                    ops.push(Op::SetOutlineThickness { pt: Pt(*width) });
                    thickness = Some(*width);
                }
                let line = match mark {
                    Mark::Path { points, closed, .. } => Line {
                        points: points.iter().map(|(x, y)| LinePoint { p: point(*x, *y), bezier: false }).collect(),
                        is_closed: *closed,
                    },
                    Mark::Circle { x, y, radius, .. } => circle(*x, *y, *radius, point),
                    _ => continue,
                };
                ops.push(Op::DrawLine { line });
            }
        }
    }
    ops
}

/// Four cubic arcs; 0.5523 is the usual distance of their handles.
fn circle(x: f32, y: f32, radius: f32, point: impl Fn(f32, f32) -> Point) -> Line {
    let handle = radius * 0.5523;
    let mut points = vec![LinePoint { p: point(x + radius, y), bezier: false }];
    for (dx, dy) in [(1.0_f32, 0.0_f32), (0.0, 1.0), (-1.0, 0.0), (0.0, -1.0)] {
        // The quarter from (dx, dy) to (-dy, dx).
        let (ex, ey) = (-dy, dx);
        let first = (x + dx * radius + ex * handle, y + dy * radius + ey * handle);
        let second = (x + ex * radius + dx * handle, y + ey * radius + dy * handle);
        points.push(LinePoint { p: point(first.0, first.1), bezier: true });
        points.push(LinePoint { p: point(second.0, second.1), bezier: true });
        points.push(LinePoint { p: point(x + ex * radius, y + ey * radius), bezier: false });
    }
    Line { points, is_closed: true }
}
