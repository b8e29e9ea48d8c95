//! How much of a record a rule is held against.

/// How much of a record a rule is held against.
#[derive(Clone, Debug, PartialEq)]
pub enum Scope {
    /// All of it.
    Whole,
    /// Stretches of it, whose borders cut what lies across them.
    Part {
        /// In order and apart: what touches is one stretch.
        stretches: Vec<Stretch>,
        /// What else the rule is about and the record does not hold: it can then not be inside.
        missing: Option<String>,
    },
    /// The rule is about other seats or scenarios: there is no judgement.
    Elsewhere,
}

/// A stretch of a record; positions count samples from 0 and may lie between them.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Stretch {
    /// Its begin.
    pub from: f64,
    /// Its end, not before its begin.
    pub to: f64,
}

/// What a rule is held against, worked out.
pub(super) struct Held {
    pub(super) stretches: Vec<Stretch>,
    pub(super) missing: Option<String>,
}

impl Scope {
    /// The stretches of a record of `count` samples, cut to it; `None` where there is no judgement.
    pub(super) fn held(&self, count: usize) -> Option<Held> {
        let Some(last) = count.checked_sub(1).map(|last| last as f64) else {
            let none = Held {
                stretches: Vec::new(),
                missing: None,
            };
            return (*self != Self::Elsewhere).then_some(none);
        };
        match self {
            Self::Whole => Some(Held {
                stretches: vec![Stretch {
                    from: 0.0,
                    to: last,
                }],
                missing: None,
            }),
            Self::Part { stretches, missing } => Some(Held {
                stretches: stretches.iter().filter_map(|s| s.within(last)).collect(),
                missing: missing.clone(),
            }),
            Self::Elsewhere => None,
        }
    }
}

impl Stretch {
    /// The part of it within 0 and `last`; one without a begin or an end is none.
    fn within(self, last: f64) -> Option<Self> {
        let (from, to) = (self.from.max(0.0), self.to.min(last));
        let whole = !self.from.is_nan() && !self.to.is_nan();
        (whole && from <= to).then_some(Self { from, to })
    }
}

/// A series read straight between its samples, at a position within it.
pub(super) fn value_at(values: &[f64], position: f64) -> f64 {
    let before = position.floor() as usize;
    let after = position.ceil() as usize;
    values[before] + (values[after] - values[before]) * (position - before as f64)
}
