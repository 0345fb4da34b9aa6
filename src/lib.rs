//! Bubblepoint: leak rates, duties, service records and refrigerant accounts.
//!
//! The layers, lowest first; each may use only those before it (`tests/architecture.rs` holds them to it):
//!
//! - [`quantity`]: exact masses and ratios, pressures, temperatures, days
//! - [`gas`]: the refrigerant catalogue
//! - [`ledger`]: appliances, cylinders, visits, entries and the fold from entries to balances
//! - [`rules`]: rulebooks, leak rates, scope, duties
//! - [`measure`]: weighing error, cylinder limits and the other field calculations
//! - [`record`]: what a service record and an annual account contain
//! - [`store`]: the SQLite file
//! - [`print`]: records on paper
//! - [`exchange`]: CSV, calendars, exchange files
//! - [`app`]: use cases, one function per thing a person does
//! - [`view`]: what the places show, as finished strings
//! - [`cli`]: the commands
//! - `gui`: the window (feature `gui`)

pub mod app;
pub mod cli;
pub mod exchange;
pub mod gas;
#[cfg(feature = "gui")]
pub mod gui;
pub mod ledger;
pub mod measure;
pub mod print;
pub mod quantity;
pub mod record;
pub mod rules;
pub mod store;
pub mod view;
