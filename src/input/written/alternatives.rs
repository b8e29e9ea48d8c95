//! Which keys need or exclude each other, for the JSON Schemas.
//!
//! What is said here in conditions, `lower` says in words to whoever has to mend a file.

use schemars::Schema;
use serde_json::{Value, json};

/// Elements or points; only elements have a start.
pub(super) fn track(schema: &mut Schema) {
    hold(schema, exactly_one(&["elements", "points"]));
    hold(schema, not_both("points", "start"));
}

/// A length or a radius, from which a length follows where something turns.
pub(super) fn element(schema: &mut Schema) {
    hold(schema, exactly_one(&["length", "radius"]));
    hold(schema, not_both("grade_to", "grade_by"));
    hold(schema, not_both("bank_to", "bank_by"));
    let turns = at_least_one(&["grade_to", "grade_by", "turn"]);
    hold(schema, json!({"if": given("radius"), "then": turns}));
}

/// A side: to the left or to the right.
pub(super) fn side(schema: &mut Schema) {
    hold(schema, exactly_one(&["left", "right"]));
}

/// At most one end of a run; scenarios, a grid or both.
pub(super) fn operation(schema: &mut Schema) {
    hold(schema, not_both("until", "finish"));
    hold(schema, at_least_one(&["scenarios", "grid"]));
}

/// A density, or an altitude and perhaps a temperature.
pub(super) fn air(schema: &mut Schema) {
    hold(schema, exactly_one(&["density", "altitude"]));
    hold(schema, not_both("density", "temperature"));
}

/// Speed and bearing together.
pub(super) fn wind(schema: &mut Schema) {
    let together = json!({"speed": ["from"], "from": ["speed"]});
    hold(schema, json!({"dependentRequired": together}));
}

/// What a zone of each kind has, and nothing of another kind.
pub(super) fn zone(schema: &mut Schema) {
    let common = ["name", "kind", "from", "to"];
    for (kind, own) in [
        ("push", ["thrust", "cap"]),
        ("hold", ["speed", "force"]),
        ("eddy", ["peak_force", "critical_speed"]),
        ("clamp", ["force", "release_speed"]),
    ] {
        let known = [&common[..], &own[..]].concat();
        let then = json!({"required": own, "propertyNames": {"enum": known}});
        hold(schema, json!({"if": word("kind", kind), "then": then}));
    }
}

/// An entry that is not in a grid has no name; a word has no keys at all.
pub(super) fn nameless(schema: &mut Schema) {
    hold(
        schema,
        json!({"not": {"type": "object", "required": ["name"]}}),
    );
}

/// A wind that is not in a grid is complete and has no name.
pub(super) fn nameless_wind(schema: &mut Schema) {
    nameless(schema);
    hold(schema, json!({"required": ["speed", "from"]}));
}

/// Values of a grid that are written as keys have names; a word is its own.
pub(super) fn named(schema: &mut Schema) {
    hold(schema, json!({"minItems": 1, "items": given("name")}));
}

/// What a rule of each kind has.
pub(super) fn rule(schema: &mut Schema) {
    let limits = json!({"if": given("limits"), "then": given("sign")});
    let upright = word("axis", "z");
    let floor = json!({"if": given("floor"), "then": {"allOf": [upright, {"not": given("sign")}]}});
    let curve = exactly_one(&["limits", "floor"]);
    let whole = json!({"required": ["axis", "between"], "allOf": [curve, limits, floor]});
    hold(
        schema,
        json!({"if": word("kind", "sustained"), "then": whole}),
    );
}

/// Adds a condition.
fn hold(schema: &mut Schema, condition: Value) {
    let all = schema
        .ensure_object()
        .entry("allOf")
        .or_insert_with(|| json!([]));
    if let Value::Array(all) = all {
        all.push(condition);
    }
}

fn given(key: &str) -> Value {
    json!({"required": [key]})
}

/// The key is there and holds this word.
fn word(key: &str, word: &str) -> Value {
    json!({"required": [key], "properties": {key: {"const": word}}})
}

fn exactly_one(keys: &[&str]) -> Value {
    json!({"oneOf": keys.iter().map(|key| given(key)).collect::<Vec<_>>()})
}

fn at_least_one(keys: &[&str]) -> Value {
    json!({"anyOf": keys.iter().map(|key| given(key)).collect::<Vec<_>>()})
}

fn not_both(one: &str, other: &str) -> Value {
    json!({"not": {"required": [one, other]}})
}
