//! The refrigerant catalogue.
