//! Windows beyond a limit gathered into places: overlapping windows are one place.

/// A window held against the limit for its length; positions in samples.
#[derive(Clone, Copy, Debug)]
pub(super) struct Candidate {
    /// First and last node of the signal inside.
    pub(super) nodes: (usize, usize),
    /// Begin and end.
    pub(super) ends: (f64, f64),
    /// Length, s.
    pub(super) duration_s: f64,
    /// The level the signal stays at or above.
    pub(super) level: f64,
    /// The limit for its length.
    pub(super) limit: f64,
    /// Level over limit.
    pub(super) utilisation: f64,
}

impl Candidate {
    /// Whether this one governs before another: larger, or equal and earlier.
    pub(super) fn governs_over(&self, other: &Self) -> bool {
        self.utilisation > other.utilisation
            || (self.utilisation == other.utilisation && self.ends.0 < other.ends.0)
    }
}

/// A union of overlapping windows.
#[derive(Clone, Copy, Debug)]
pub(super) struct Union {
    /// Its outermost window.
    pub(super) outer: Candidate,
    /// Its worst window.
    pub(super) worst: Candidate,
}

/// Unions in order of time.
///
/// Windows must come innermost first, as the pass over the spells gives them. Two windows are apart
/// or one holds the other, so that the outermost window of a union is the union.
#[derive(Debug, Default)]
pub(super) struct Unions(Vec<Union>);

impl Unions {
    /// Adds a window; the unions it holds become part of it.
    pub(super) fn add(&mut self, window: Candidate) {
        let mut worst = window;
        while let Some(held) = self.pop_held_by(&window) {
            if held.worst.governs_over(&worst) {
                worst = held.worst;
            }
        }
        self.0.push(Union {
            outer: window,
            worst,
        });
    }

    /// Drops the unions that a window holds.
    pub(super) fn drop_held_by(&mut self, window: &Candidate) {
        while self.pop_held_by(window).is_some() {}
    }

    /// The unions.
    pub(super) fn iter(&self) -> impl Iterator<Item = &Union> {
        self.0.iter()
    }

    /// Nodes decide, not interpolated ends: they hold no rounding.
    fn pop_held_by(&mut self, window: &Candidate) -> Option<Union> {
        self.0.pop_if(|held| held.outer.nodes.0 >= window.nodes.0)
    }
}
