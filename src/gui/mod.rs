//! The window: maps view models to the generated Slint types.
