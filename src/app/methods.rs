//! How leaks are looked for.

/// Methods that show the place of a leak (Regulation (EC) No 1516/2007 Art. 6);
/// those that only show its effects are indirect (Art. 7). `None` where the
/// words say neither.
pub(super) fn is_direct(method: &str) -> Option<bool> {
    let method = method.to_lowercase();
    let any = |words: &[&str]| words.iter().any(|word| method.contains(word));
    if any(&["detector", "soap", "bubble", "ultraviolet", "uv", "sniff", "tracer"]) {
        Some(true)
    } else if any(&["pressure", "vacuum", "indirect", "sight glass", "temperature", "current"]) {
        Some(false)
    } else {
        None
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn methods_are_told_apart_by_their_words() {
        assert_eq!(is_direct("Electronic detector"), Some(true));
        assert_eq!(is_direct("pressure and temperature"), Some(false));
        assert_eq!(is_direct("tracer gas under pressure"), Some(true));
        assert_eq!(is_direct("by eye"), None);
    }
}
