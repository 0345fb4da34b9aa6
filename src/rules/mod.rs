//! Rulebooks, leak rates, scope and duties.
