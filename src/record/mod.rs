//! What a service record and an annual account contain, as data, without layout.
