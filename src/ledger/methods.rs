//! How leaks are looked for: the one list of methods. Direct methods show the
//! place of a leak, indirect ones only that gas is missing (Regulation (EC)
//! No 1516/2007 Art. 6 and 7; retained in Great Britain).

/// A method of looking for leaks.
#[derive(Debug, PartialEq, Eq)]
pub struct LeakMethod {
    pub name: &'static str,
    /// Shows the place; only such a method makes an inspection.
    pub direct: bool,
    /// Uses a detector, whose check day counts.
    pub detector: bool,
}

impl LeakMethod {
    /// In the order in which they are offered.
    pub const ALL: [Self; 6] = [
        Self { name: "electronic detector", direct: true, detector: true },
        Self { name: "bubbles", direct: true, detector: false },
        Self { name: "ultraviolet dye", direct: true, detector: false },
        Self { name: "tracer gas", direct: true, detector: true },
        Self { name: "pressure and temperature", direct: false, detector: false },
        Self { name: "sight glass", direct: false, detector: false },
    ];

    /// The method of this name, without regard to case; `None` for words of one's own.
    pub fn find(written: &str) -> Option<&'static Self> {
        const ALL: &[LeakMethod] = &LeakMethod::ALL;
        ALL.iter().find(|method| method.name.eq_ignore_ascii_case(written.trim()))
    }

    /// Whether it shows the place of a leak; words of one's own are told by
    /// what they speak of. `None` where they say neither.
    pub fn is_direct(written: &str) -> Option<bool> {
        if let Some(method) = Self::find(written) {
            return Some(method.direct);
        }
        let written = written.to_lowercase();
        let any = |words: &[&str]| words.iter().any(|word| written.contains(word));
        if any(&["detector", "soap", "bubble", "ultraviolet", "uv", "sniff", "tracer"]) {
            Some(true)
        } else if any(&["pressure", "vacuum", "indirect", "sight glass", "temperature", "current"]) {
            Some(false)
        } else {
            None
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn methods_are_told_apart_by_name_and_by_their_words() {
        assert!(LeakMethod::find(" Electronic Detector").is_some_and(|method| method.detector));
        assert_eq!(LeakMethod::find("by eye"), None);
        for (written, direct) in [
            ("Electronic detector", Some(true)),
            ("soap bubbles", Some(true)),
            ("pressure and temperature", Some(false)),
            (" Sight glass", Some(false)),
            ("tracer gas under pressure", Some(true)),
            ("by eye", None),
        ] {
            assert_eq!(LeakMethod::is_direct(written), direct, "{written}");
        }
        assert!(LeakMethod::ALL.iter().all(|method| method.direct || !method.detector), "a detector shows the place");
    }
}
