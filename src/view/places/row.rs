//! Rows of the places' lists, and the small bars in them.

use crate::view::shown::Verdict;

/// A row, or with `heading` the name of a group of rows.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Row {
    /// Empty: the row does not act.
    pub key: String,
    pub time: String,
    pub name: String,
    pub facts: String,
    pub state: String,
    pub aside: String,
    /// `None`: nothing was judged.
    pub verdict: Option<Verdict>,
    pub heading: bool,
    pub struck: bool,
    pub bar: Option<Bar>,
}

/// Places along a small bar, from 0 to 1.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Bar {
    Rate { fill: f32, notch: f32, error_from: f32, error_to: f32 },
    Mass { fill: f32, notch: f32 },
}

impl Row {
    pub fn new(key: impl Into<String>, name: impl Into<String>, facts: impl Into<String>) -> Self {
        Self { key: key.into(), name: name.into(), facts: facts.into(), ..Self::default() }
    }

    /// The name of a group; `state` counts or sums what stands below it.
    pub fn group(name: impl Into<String>, state: impl Into<String>) -> Self {
        Self { heading: true, name: name.into(), state: state.into(), ..Self::default() }
    }

    pub fn state(mut self, state: impl Into<String>, aside: impl Into<String>) -> Self {
        (self.state, self.aside) = (state.into(), aside.into());
        self
    }

    pub fn judged(mut self, verdict: Verdict) -> Self {
        self.verdict = Some(verdict);
        self
    }
}
