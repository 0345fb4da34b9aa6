//! What the places show, as finished strings.
