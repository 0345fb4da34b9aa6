//! Contrast of the three appearances, computed as WCAG 2.2 defines it (success
//! criteria 1.4.3 and 1.4.11: text 4.5 : 1, parts 3 : 1).

use bubblepoint_ui::{Appearance, Theme};
use bubblepoint_ui_tests::{PHONE, open};
use slint::{Color, ComponentHandle};

pub const CHECKS: &[super::Check] = &[("contrast::text_and_parts_can_be_told_apart", text_and_parts_can_be_told_apart)];

fn luminance(colour: Color) -> f64 {
    let part = |byte: u8| {
        let c = f64::from(byte) / 255.0;
        if c <= 0.04045 { c / 12.92 } else { ((c + 0.055) / 1.055).powf(2.4) }
    };
    0.2126 * part(colour.red()) + 0.7152 * part(colour.green()) + 0.0722 * part(colour.blue())
}

fn contrast(a: Color, b: Color) -> f64 {
    let (a, b) = (luminance(a), luminance(b));
    (a.max(b) + 0.05) / (a.min(b) + 0.05)
}

fn text_and_parts_can_be_told_apart() {
    let black_on_white = contrast(Color::from_rgb_u8(0, 0, 0), Color::from_rgb_u8(255, 255, 255));
    assert!((black_on_white - 21.0).abs() < 0.001, "the formula itself: {black_on_white}");
    for appearance in [Appearance::Light, Appearance::Dark, Appearance::Sunlight] {
        let window = open(PHONE, appearance, 1.0);
        let t = window.global::<Theme>();
        let grounds = [("paper", t.get_paper()), ("plate", t.get_plate())];
        let texts = [
            ("ink", t.get_ink()),
            ("soft", t.get_soft()),
            ("under", t.get_under()),
            ("at", t.get_at()),
            ("over", t.get_over()),
            ("none", t.get_none()),
            ("copper", t.get_copper()),
        ];
        for (ground_name, ground) in grounds {
            for (name, text) in texts {
                let found = contrast(text, ground);
                assert!(found >= 4.5, "{appearance:?}: {name} on {ground_name} is {found:.2} : 1");
            }
            let found = contrast(t.get_line(), ground);
            assert!(found >= 3.0, "{appearance:?}: line on {ground_name} is {found:.2} : 1");
        }
        let pairs = [
            ("on-strip on strip", t.get_on_strip(), t.get_strip()),
            ("on-copper on copper", t.get_on_copper(), t.get_copper()),
            ("caution on its ground", t.get_caution(), t.get_caution_ground()),
            ("plate on ink", t.get_plate(), t.get_ink()),
            ("plate on over", t.get_plate(), t.get_over()),
            ("signature on its ground", t.get_ink_stroke(), t.get_ink_ground()),
        ];
        for (name, text, ground) in pairs {
            let found = contrast(text, ground);
            assert!(found >= 4.5, "{appearance:?}: {name} is {found:.2} : 1");
        }
    }
}
