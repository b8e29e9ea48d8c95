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

/// Rows are counted from 1.
pub(super) fn rows(schema: &mut Schema) {
    hold(schema, json!({"items": {"minimum": 1}}));
}

/// A side: to the left or to the right.
pub(super) fn side(schema: &mut Schema) {
    hold(schema, exactly_one(&["left", "right"]));
}

/// A train for all variants, or one for each.
pub(super) fn study(schema: &mut Schema) {
    let own = json!({"type": "object", "required": ["train"]});
    let each = json!({"properties": {"variants": {"additionalProperties": own}}});
    hold(schema, json!({"anyOf": [given("train"), each]}));
}

/// At most one end of a run; scenarios, a grid or both; air and a release that are whole for each.
pub(super) fn operation(schema: &mut Schema) {
    hold(schema, not_both("until", "finish"));
    hold(schema, at_least_one(&["scenarios", "grid"]));
    let each = json!({"properties": {
        "scenarios": {"additionalProperties": given("air")},
        "grid": given("air")
    }});
    hold(schema, json!({"anyOf": [given("air"), each]}));
    for key in ["station", "speed"] {
        let release = json!({"required": ["release"], "properties": {"release": given(key)}});
        let each = json!({
            "properties": {"scenarios": {"additionalProperties": release}},
            "allOf": [none_of(&["grid"])]
        });
        hold(schema, json!({"anyOf": [release, each]}));
    }
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

/// Without gravity there is no floor.
pub(super) fn envelope(schema: &mut Schema) {
    let floorless = json!({"properties": {"rules": {"items": none_of(&["floor"])}}});
    hold(
        schema,
        json!({"if": word("gravity", "excluded"), "then": floorless}),
    );
}

/// Values of a curve above 0.
pub(super) fn limits(schema: &mut Schema) {
    values(schema, json!({"exclusiveMinimum": 0}));
}

/// Values of a curve below 1.
pub(super) fn floor(schema: &mut Schema) {
    values(schema, json!({"exclusiveMaximum": 1}));
}

/// What holds for the values of a curve, in a map or in a list of pairs.
fn values(schema: &mut Schema, condition: Value) {
    let pair = json!({"prefixItems": [true, condition]});
    hold(
        schema,
        json!({"additionalProperties": condition, "items": pair}),
    );
}

/// What a rule of each kind has, and nothing of another kind.
pub(super) fn rule(schema: &mut Schema) {
    for (kind, then) in [("sustained", sustained()), ("speed", speed())] {
        hold(schema, json!({"if": word("kind", kind), "then": then}));
    }
}

/// Limits with their sign, or a floor of the upright axis.
fn sustained() -> Value {
    let limits = json!({"if": given("limits"), "then": given("sign")});
    let upright = json!({"allOf": [word("axis", "z"), none_of(&["sign"])]});
    let floor = json!({"if": given("floor"), "then": upright});
    json!({
        "required": ["axis", "between"],
        "allOf": [exactly_one(&["limits", "floor"]), limits, floor, none_of(&["min", "max", "stop"])]
    })
}

/// Bounds or a stop of the whole train; only an upper bound may be scaled.
fn speed() -> Value {
    let other = [
        "axis",
        "sign",
        "limits",
        "floor",
        "between",
        "ignore_below",
        "reading",
    ];
    let train = json!({"properties": {"where": none_of(&["seats"])}});
    let slower = json!({"if": word("stop", "required"), "then": none_of(&["min"])});
    json!({
        "allOf": [
            at_least_one(&["min", "max", "stop"]), none_of(&other), train, slower,
            not_both("min", "scale"), {"if": given("scale"), "then": given("max")}
        ]
    })
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

fn none_of(keys: &[&str]) -> Value {
    json!({"not": at_least_one(keys)})
}

fn not_both(one: &str, other: &str) -> Value {
    json!({"not": {"required": [one, other]}})
}
