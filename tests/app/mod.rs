//! What a person does, from the first entry to the closed record.

mod corrections;
mod refusals;
mod visits;
