//! View models that several screens share: finished strings, and places along
//! a bar from 0 to 1.

/// The outcome of a comparison with a trigger.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Verdict {
    #[default]
    None,
    Under,
    At,
    Over,
}

/// What the program has to say, until it is put away.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Message {
    pub text: String,
    /// Something went wrong.
    pub grave: bool,
}

impl Message {
    pub fn told(text: impl Into<String>) -> Self {
        Self { text: text.into(), grave: false }
    }

    pub fn grave(text: impl Into<String>) -> Self {
        Self { text: text.into(), grave: true }
    }
}

/// A row of a list, or with `heading` the name of a group of rows.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Line {
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

/// Places along the small bar of a row, from 0 to 1.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Bar {
    Rate { fill: f32, notch: f32, error_from: f32, error_to: f32 },
    Mass { fill: f32, notch: f32 },
}

impl Line {
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

/// A caption and what it says.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Fact {
    pub caption: String,
    pub value: String,
}

impl Fact {
    pub fn new(caption: impl Into<String>, value: impl Into<String>) -> Self {
        Self { caption: caption.into(), value: value.into() }
    }
}

/// One of several things to choose from.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Choice {
    pub key: String,
    pub name: String,
    pub facts: String,
    /// Why it cannot be chosen; empty where it can.
    pub refused: String,
}

impl Choice {
    /// Key and name are the same word.
    pub fn word(word: &str) -> Self {
        Self { key: word.to_owned(), name: word.to_owned(), ..Self::default() }
    }

    pub fn new(key: impl Into<String>, name: impl Into<String>, facts: impl Into<String>) -> Self {
        Self { key: key.into(), name: name.into(), facts: facts.into(), refused: String::new() }
    }
}

/// The leak-rate bar.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Rate {
    pub rulebook: String,
    /// `leak rate, annualizing method`.
    pub caption: String,
    /// Empty where no rate is due.
    pub figure: String,
    pub unit: String,
    pub trigger: String,
    pub verdict: Verdict,
    pub word: String,
    pub consequence: String,
    pub rate_at: f32,
    pub trigger_at: f32,
    pub error_from: f32,
    pub error_to: f32,
    /// The rate lies beyond the end of the scale.
    pub broken: bool,
}

/// The mass bar of a cylinder: from empty (0) to full of water (1).
#[derive(Debug, Clone, Default, PartialEq)]
pub struct MassBar {
    pub heel: f32,
    pub content: f32,
    pub limits: Vec<MassLimit>,
    pub words: String,
    pub binding: String,
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct MassLimit {
    pub name: String,
    pub at: f32,
    pub binding: bool,
}

/// A figure that is typed on the number pad.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Reading {
    pub key: String,
    pub caption: String,
    pub text: String,
    pub unit: String,
    /// What was last known, beside the field, never in it.
    pub last: String,
    pub wrong: bool,
}

#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Caution {
    pub key: String,
    pub text: String,
    pub basis: String,
    pub acknowledge: String,
    pub acknowledged: bool,
}

/// What stands in the way of an entry.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Refusal {
    /// Empty: nothing does.
    pub title: String,
    pub text: String,
    /// A reason, which is printed, lets it pass.
    pub with_reason: bool,
}

/// One verdict explained.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Reason {
    pub title: String,
    pub text: String,
    pub inputs: Vec<Fact>,
    pub source: String,
}

/// Whether the next step can be taken, and if not, why.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Ready {
    pub ready: bool,
    pub why_not: String,
}

impl Ready {
    pub fn yes() -> Self {
        Self { ready: true, why_not: String::new() }
    }

    pub fn not(why: impl Into<String>) -> Self {
        Self { ready: false, why_not: why.into() }
    }
}
