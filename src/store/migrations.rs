//! The schema's history. A line that has been released is never changed.

/// The SQL that leads from one schema to the next; the first makes schema 1.
pub(super) const MIGRATIONS: &[&str] = &[
    include_str!("../../migrations/0001_beginning.sql"),
    include_str!("../../migrations/0002_weighings.sql"),
    include_str!("../../migrations/0003_cautions_drafts_copies.sql"),
    include_str!("../../migrations/0004_cylinder_entries.sql"),
];
