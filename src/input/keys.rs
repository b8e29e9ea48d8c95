//! What a document's scalars mean, and keys that our files do not have.

use std::collections::BTreeMap;
use std::ops::Range;
use std::sync::Arc;

use crate::diagnostic::{Diagnostic, Source};
use crate::input::document::{Kind, Meaning, Node, join, place};
use crate::input::shape::Shape;

/// Takes each scalar's meaning from `serde_yaml`'s reading of the same text.
pub(super) fn give_meaning(
    node: &mut Node,
    shape: Shape,
    source: &Arc<Source>,
) -> Result<(), Diagnostic> {
    let differ = Diagnostic::error("this YAML can be read in two ways, expected a plainer form")
        .at(&place(source, node.span.clone()))
        .hint("put text in quotes and write values on one line");
    match (&mut node.kind, shape) {
        (Kind::Scalar(_, meaning), Shape::Nothing) => *meaning = Meaning::Nothing,
        (Kind::Scalar(_, meaning), Shape::Truth) => *meaning = Meaning::Truth,
        (Kind::Scalar(_, meaning), Shape::Number(value)) => *meaning = Meaning::Number(value),
        (Kind::Scalar(text, _), Shape::Text(other)) if *text == other => {}
        (Kind::List(items), Shape::List(shapes)) if items.len() == shapes.len() => {
            for (item, shape) in items.iter_mut().zip(shapes) {
                give_meaning(item, shape, source)?;
            }
        }
        (Kind::Map(entries), Shape::Map(shapes)) if entries.len() == shapes.len() => {
            for ((key, value), (key_shape, value_shape)) in entries.iter_mut().zip(shapes) {
                give_meaning(key, key_shape, source)?;
                give_meaning(value, value_shape, source)?;
            }
        }
        _ => return Err(differ),
    }
    Ok(())
}

/// Reports and takes out keys that are given twice, merge keys and keys that are no words.
pub(super) fn refuse_keys(
    node: &mut Node,
    path: &str,
    source: &Arc<Source>,
    found: &mut Vec<Diagnostic>,
) {
    match &mut node.kind {
        Kind::Scalar(..) => {}
        Kind::List(items) => {
            for (index, item) in items.iter_mut().enumerate() {
                refuse_keys(item, &format!("{path}[{index}]"), source, found);
            }
        }
        Kind::Map(entries) => {
            refuse_entries(entries, path, source, found);
            for (key, value) in entries {
                refuse_keys(value, &join(path, key.text()), source, found);
            }
        }
    }
}

fn refuse_entries(
    entries: &mut Vec<(Node, Node)>,
    path: &str,
    source: &Arc<Source>,
    found: &mut Vec<Diagnostic>,
) {
    let mut seen: BTreeMap<String, Range<usize>> = BTreeMap::new();
    entries.retain(|(key, _)| {
        let here = place(source, key.span.clone());
        let Kind::Scalar(text, _) = &key.kind else {
            found.push(
                Diagnostic::error("found a list or a map as a key, expected a word").at(&here),
            );
            return false;
        };
        if text == "<<" {
            let merge = Diagnostic::error("merge keys (`<<`) are not read").at(&here);
            found.push(merge.hint("write the keys out"));
            return false;
        }
        if let Some(first) = seen.get(text) {
            let twice = Diagnostic::error(format!("the key `{text}` is given twice"));
            let first = place(source, first.clone());
            let twice = twice.at(&here).key(join(path, text));
            found.push(twice.also(&first, "first given here"));
            return false;
        }
        seen.insert(text.clone(), key.span.clone());
        true
    });
}
