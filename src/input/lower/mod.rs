//! From what was written to what is run: meanings checked while places are known.

mod air;
mod curve;
pub(super) mod envelope;
mod grid;
mod holds;
pub(super) mod operation;
mod scenario;
mod speed;
pub(super) mod track;
pub(super) mod train;
mod zone;

use std::collections::BTreeMap;
use std::sync::Arc;

use crate::diagnostic::{Diagnostic, Place, Source};
use crate::input::decode::{listed, nearest};
use crate::input::dimension::Dimension;
use crate::input::field::{At, Field, Located, Text};
use crate::input::quantity::Quantity;
use crate::input::written::Later;

/// One file being lowered, and what was found wrong in it.
#[derive(Debug)]
pub(super) struct Lower {
    pub(super) source: Arc<Source>,
    pub(super) found: Vec<Diagnostic>,
}

impl Lower {
    /// The place of something written.
    pub(super) fn place(&self, at: &At) -> Place {
        Place {
            source: Arc::clone(&self.source),
            span: at.span.clone(),
        }
    }

    /// The words of something written.
    pub(super) fn text(&self, at: &At) -> &str {
        self.source.text.get(at.span.clone()).unwrap_or("").trim()
    }

    /// A mistake at a place, to be completed and pushed.
    pub(super) fn mistake(&self, at: &At, message: impl Into<String>) -> Diagnostic {
        let diagnostic = Diagnostic::error(message).at(&self.place(at));
        match at.key.as_str() {
            "" => diagnostic,
            key => diagnostic.key(key),
        }
    }

    /// Records a mistake.
    pub(super) fn error(&mut self, at: &At, message: impl Into<String>) {
        let mistake = self.mistake(at, message);
        self.found.push(mistake);
    }

    /// Records a mistake with its way out.
    pub(super) fn error_with_hint(
        &mut self,
        at: &At,
        message: impl Into<String>,
        hint: impl Into<String>,
    ) {
        let mistake = self.mistake(at, message).hint(hint);
        self.found.push(mistake);
    }

    /// The value of a key that must be there.
    pub(super) fn require<T>(&mut self, field: Field<T>, of: &At, key: &str) -> Option<Located<T>> {
        if matches!(field, Field::Missing) {
            self.missing(of, key);
        }
        field.given()
    }

    /// Records that a key is not there.
    pub(super) fn missing(&mut self, of: &At, key: &str) {
        let mistake = self.mistake(of, format!("missing key `{key}`"));
        let path = match of.key.as_str() {
            "" => key.to_owned(),
            parent => format!("{parent}.{key}"),
        };
        self.found.push(mistake.key(path));
    }

    /// The items of a list that has at least one, and at most `most`.
    pub(super) fn items<T>(
        &mut self,
        list: Located<Vec<Field<T>>>,
        most: usize,
        what: &str,
    ) -> Vec<Located<T>> {
        self.count(&list.at, list.value.len(), most, what);
        let items = list.value.into_iter().take(most);
        items.filter_map(Field::given).collect()
    }

    /// Checks how many of something are given: at least one, at most `most`.
    pub(super) fn count(&mut self, at: &At, count: usize, most: usize, what: &str) {
        if count == 0 {
            self.error(at, format!("found no {what}, expected at least one"));
        } else if count > most {
            self.error(at, format!("found {count} {what}, expected at most {most}"));
        }
    }

    /// Records that a key's meaning is fixed but not built.
    pub(super) fn later(&mut self, field: Option<Field<Later>>) {
        if let Some(later) = field.and_then(Field::given) {
            let key = later.at.key.rsplit('.').next().unwrap_or("").to_owned();
            self.error(&later.at, format!("`{key}` is not built yet"));
        }
    }

    /// Records that a word's meaning is fixed but not built.
    pub(super) fn later_word(&mut self, at: &At) {
        let key = at.key.rsplit('.').next().unwrap_or("").to_owned();
        let word = self.text(at).to_owned();
        self.error(at, format!("`{key}: {word}` is not built yet"));
    }

    /// The version of the file format.
    pub(super) fn version(&mut self, field: Field<u64>, root: &At) {
        if matches!(field, Field::Missing) {
            let mistake = self
                .mistake(root, "missing key `crestfall`")
                .key("crestfall");
            self.found
                .push(mistake.hint("write `crestfall: 1` at the top"));
        }
        if let Some(version) = field.given()
            && version.value != 1
        {
            let message = format!("found file format {}, expected 1", version.value);
            self.error(&version.at, message);
        }
    }

    /// A quantity in SI that must be above 0.
    pub(super) fn above_zero<D: Dimension>(&mut self, quantity: &Located<Quantity<D>>) -> f64 {
        if quantity.value.si <= 0.0 {
            let found = self.text(&quantity.at).to_owned();
            self.error(
                &quantity.at,
                format!(
                    "found `{found}`, expected {} above 0 {}",
                    D::ARTICLE_NAME,
                    D::UNITS[0].name
                ),
            );
        }
        quantity.value.si
    }

    /// A quantity in SI that must not be below 0.
    pub(super) fn not_negative<D: Dimension>(&mut self, quantity: &Located<Quantity<D>>) -> f64 {
        if quantity.value.si < 0.0 {
            let found = self.text(&quantity.at).to_owned();
            self.error(
                &quantity.at,
                format!(
                    "found `{found}`, expected {} of 0 {} or above",
                    D::ARTICLE_NAME,
                    D::UNITS[0].name
                ),
            );
        }
        quantity.value.si
    }

    /// A quantity in SI within bounds, which `range` says in words.
    pub(super) fn within<D: Dimension>(
        &mut self,
        quantity: &Located<Quantity<D>>,
        bounds: std::ops::RangeInclusive<f64>,
        range: &str,
    ) -> f64 {
        if !bounds.contains(&quantity.value.si) {
            let found = self.text(&quantity.at).to_owned();
            let expected = D::ARTICLE_NAME;
            self.error(
                &quantity.at,
                format!("found `{found}`, expected {expected} {range}"),
            );
        }
        quantity.value.si
    }

    /// A coefficient, which must not be below 0.
    pub(super) fn coefficient(&mut self, number: &Located<f64>) -> f64 {
        if number.value < 0.0 {
            let message = format!(
                "found `{}`, expected a coefficient of 0 or above",
                number.value
            );
            self.error(&number.at, message);
        }
        number.value
    }

    /// Records that a name is not among those there are.
    pub(super) fn unknown(&mut self, at: &At, what: &str, name: &str, names: &[&str]) {
        let hint = match (nearest(name, names.iter().copied()), names) {
            (Some(near), _) => format!("did you mean `{near}`?"),
            (None, []) => format!("there is no {what} here"),
            (None, _) => format!("there is {}", listed(names.iter().copied())),
        };
        self.error_with_hint(at, format!("unknown {what} `{name}`"), hint);
    }
}

/// Names that must differ.
#[derive(Debug)]
pub(super) struct Names {
    what: &'static str,
    seen: BTreeMap<String, At>,
}

impl Names {
    /// None yet.
    pub(super) fn of(what: &'static str) -> Self {
        Self {
            what,
            seen: BTreeMap::new(),
        }
    }

    /// Takes a name down; records a mistake where it was there before.
    pub(super) fn add(&mut self, name: &Located<Text>, lower: &mut Lower) {
        self.add_text(&name.value.0, &name.at, lower);
    }

    /// The same for a name made up of others; whether it is new.
    pub(super) fn add_text(&mut self, name: &str, at: &At, lower: &mut Lower) -> bool {
        match self.seen.get(name) {
            Some(first) => {
                let message = format!("the {} `{name}` is given twice", self.what);
                let first = lower.place(first);
                let mistake = lower.mistake(at, message).also(&first, "first given here");
                lower.found.push(mistake);
                false
            }
            None => {
                self.seen.insert(name.to_owned(), at.clone());
                true
            }
        }
    }
}
