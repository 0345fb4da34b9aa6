//! Paper: page layout and charts.
