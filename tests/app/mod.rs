//! What a person does, from the first entry to the closed record.

mod books;
mod complete;
mod corrections;
mod cylinders;
mod import;
mod installation;
mod paper;
mod readings;
mod refusals;
mod visits;
