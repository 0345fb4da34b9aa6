//! The two faces of the paper: IBM Plex Sans Regular and SemiBold. Knows which
//! characters they have and how wide these are, and cuts the subset that a
//! document carries (20 KB instead of 380 KB).

use super::PrintError;
use allsorts::binary::read::ReadScope;
use allsorts::font_data::FontData;
use allsorts::subset::{CmapTarget, SubsetProfile, subset};
use allsorts::tables::cmap::Cmap;
use allsorts::tables::{FontTableProvider, HeadTable, HheaTable, HmtxTable, MaxpTable};
use allsorts::tag;
use std::collections::{BTreeSet, HashMap};
use std::sync::OnceLock;

#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub(super) enum Face {
    Regular,
    SemiBold,
}

const REGULAR: &[u8] = include_bytes!("../../ui/fonts/IBMPlexSans-Regular.ttf");
const SEMI_BOLD: &[u8] = include_bytes!("../../ui/fonts/IBMPlexSans-SemiBold.ttf");

impl Face {
    pub(super) const ALL: [Self; 2] = [Self::Regular, Self::SemiBold];

    const fn bytes(self) -> &'static [u8] {
        match self {
            Self::Regular => REGULAR,
            Self::SemiBold => SEMI_BOLD,
        }
    }

    pub(super) const fn name(self) -> &'static str {
        match self {
            Self::Regular => "IBMPlexSans",
            Self::SemiBold => "IBMPlexSans-SemiBold",
        }
    }
}

/// Glyph and advance width of every character of a face.
struct Glyphs {
    /// Character to glyph id and advance in thousandths of an em.
    of: HashMap<char, (u16, f32)>,
}

/// Both faces, read once.
pub(super) struct Fonts {
    regular: Glyphs,
    semi_bold: Glyphs,
}

impl Fonts {
    /// # Errors
    /// [`PrintError::Font`] when the program's own font cannot be read.
    pub(super) fn get() -> Result<&'static Self, PrintError> {
        static FONTS: OnceLock<Result<Fonts, String>> = OnceLock::new();
        FONTS
            .get_or_init(|| Ok(Self { regular: read(Face::Regular)?, semi_bold: read(Face::SemiBold)? }))
            .as_ref()
            .map_err(|why| PrintError::Font(why.clone()))
    }

    fn glyphs(&self, face: Face) -> &Glyphs {
        match face {
            Face::Regular => &self.regular,
            Face::SemiBold => &self.semi_bold,
        }
    }

    /// Whether both faces have the character.
    pub(super) fn has(&self, character: char) -> bool {
        Face::ALL.iter().all(|face| self.glyphs(*face).of.contains_key(&character))
    }

    /// Width in points at `size`.
    pub(super) fn width(&self, text: &str, face: Face, size: f32) -> f32 {
        let glyphs = self.glyphs(face);
        text.chars().filter_map(|c| glyphs.of.get(&c)).map(|(_, advance)| advance).sum::<f32>() * size / 1000.0
    }

    /// The text with every character that cannot be set written out as
    /// `[U+4E2D]`, so that none vanishes. Tabs become blanks; line breaks stay.
    pub(super) fn visible(&self, text: &str) -> String {
        let mut shown = String::with_capacity(text.len());
        for character in text.chars() {
            match character {
                '\n' => shown.push('\n'),
                '\r' => {}
                '\t' => shown.push(' '),
                c if self.has(c) => shown.push(c),
                c => shown.push_str(&format!("[U+{:04X}]", u32::from(c))),
            }
        }
        shown
    }

    /// A font program with no more than the glyphs of `characters`.
    ///
    /// # Errors
    /// [`PrintError::Font`] when the font cannot be cut.
    pub(super) fn subset(&self, face: Face, characters: &BTreeSet<char>) -> Result<Vec<u8>, PrintError> {
        let glyphs = self.glyphs(face);
        let mut ids: Vec<u16> = characters.iter().filter_map(|c| glyphs.of.get(c)).map(|(id, _)| *id).collect();
        ids.push(0);
        ids.sort_unstable();
        ids.dedup();
        let broken = |why: &dyn std::fmt::Display| PrintError::Font(format!("{}: {why}", face.name()));
        let file = ReadScope::new(face.bytes()).read::<FontData<'_>>().map_err(|why| broken(&why))?;
        let provider = file.table_provider(0).map_err(|why| broken(&why))?;
        subset(&provider, &ids, &SubsetProfile::Minimal, CmapTarget::Unicode).map_err(|why| broken(&why))
    }
}

fn read(face: Face) -> Result<Glyphs, String> {
    let failed = |what: &str| format!("{}: {what} cannot be read", face.name());
    let file = ReadScope::new(face.bytes()).read::<FontData<'_>>().map_err(|_| failed("file"))?;
    let provider = file.table_provider(0).map_err(|_| failed("table directory"))?;
    let table = |tag: u32, what: &str| provider.read_table_data(tag).map_err(|_| failed(what));
    let (head, maxp, hhea) = (table(tag::HEAD, "head")?, table(tag::MAXP, "maxp")?, table(tag::HHEA, "hhea")?);
    let (hmtx, cmap) = (table(tag::HMTX, "hmtx")?, table(tag::CMAP, "cmap")?);
    let head = ReadScope::new(&head).read::<HeadTable>().map_err(|_| failed("head"))?;
    let maxp = ReadScope::new(&maxp).read::<MaxpTable>().map_err(|_| failed("maxp"))?;
    let hhea = ReadScope::new(&hhea).read::<HheaTable>().map_err(|_| failed("hhea"))?;
    let counts = (usize::from(maxp.num_glyphs), usize::from(hhea.num_h_metrics));
    let hmtx = ReadScope::new(&hmtx).read_dep::<HmtxTable<'_>>(counts).map_err(|_| failed("hmtx"))?;
    let cmap = ReadScope::new(&cmap).read::<Cmap<'_>>().map_err(|_| failed("cmap"))?;
    let subtable = allsorts::font::read_cmap_subtable(&cmap).ok().flatten().ok_or_else(|| failed("cmap"))?.1;
    let mut of = HashMap::new();
    let units = f32::from(head.units_per_em);
    let mapped = subtable.mappings_fn(|code, glyph| {
        if let (Some(character), Ok(advance)) = (char::from_u32(code), hmtx.horizontal_advance(glyph))
            && glyph != 0
            && !character.is_control()
        {
            of.insert(character, (glyph, f32::from(advance) * 1000.0 / units));
        }
    });
    mapped.map_err(|_| failed("cmap"))?;
    Ok(Glyphs { of })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn figures_are_tabular() {
        let fonts = Fonts::get().unwrap();
        for face in Face::ALL {
            let one = fonts.width("1", face, 10.0);
            assert!(one > 0.0);
            for digit in "0123456789".chars() {
                assert!((fonts.width(&digit.to_string(), face, 10.0) - one).abs() < 1e-4, "{digit}");
            }
        }
    }

    #[test]
    fn the_trade_and_its_people_can_be_written() {
        let fonts = Fonts::get().unwrap();
        for text in
            ["Żółć Łukasz Gąsiorek", "Ελένη Παπαδοπούλου", "Ђорђе Щербак Ївга", "Nguyễn Thị Ánh Đặng", "≤ ≥ → ✓ ₂ ° ± × ÷ − – ’ “ ”"]
        {
            for character in text.chars() {
                assert!(fonts.has(character), "{character}");
            }
        }
    }

    #[test]
    fn nothing_vanishes() {
        let fonts = Fonts::get().unwrap();
        assert_eq!(fonts.visible("valve \u{4E2D}\u{1F527}\u{7}"), "valve [U+4E2D][U+1F527][U+0007]");
        assert_eq!(fonts.visible("a\tb\r\nc"), "a b\nc");
    }

    #[test]
    fn a_subset_is_small() {
        let fonts = Fonts::get().unwrap();
        let characters: BTreeSet<char> = "The quick brown fox 0123456789".chars().collect();
        let bytes = fonts.subset(Face::Regular, &characters).unwrap();
        assert!(bytes.len() < 20_000, "{} bytes", bytes.len());
        assert!(bytes.len() * 5 < REGULAR.len());
    }
}
