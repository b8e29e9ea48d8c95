//! Lowers an envelope file: rules whose curves have been checked point by point.

use crate::input::field::{At, Field, Located, WordOr, optional};
use crate::input::lower::curve::{check_floor_axis, floor_of, limits_of, lowered_between};
use crate::input::lower::holds::{holds, scale};
use crate::input::lower::speed::{check_speed, refuse_foreign_keys, speed};
use crate::input::lower::{Lower, Names};
use crate::input::written::envelope::{
    AxisWord, ButterworthKeys, EnvelopeFile, FilterKeys, FilterWord, GravityWord, KindWord,
    PassesWord, ReadingWord, RuleKeys, SourceKeys, StatusWord,
};
use crate::input::{
    Axis, Document, Envelope, Filter, GravityTerm, Rule, RuleKind, Status, Sustained,
};

/// An envelope from its file.
pub(in crate::input) fn envelope(
    file: Located<EnvelopeFile>,
    lower: &mut Lower,
) -> Option<Envelope> {
    let (root, file) = (file.at, file.value);
    lower.version(file.crestfall, &root);
    let name = lower.require(file.envelope, &root, "envelope");
    let status = lower.require(file.status, &root, "status");
    let source = lower.require(file.source, &root, "source");
    let source = source.and_then(|source| document(source, lower));
    let gravity = lower
        .require(file.gravity, &root, "gravity")
        .map(|word| gravity(word.value));
    let filter = lower.require(file.filter, &root, "filter");
    let filter = filter.and_then(|written| lowered_filter(written, lower));
    let rules = lower.require(file.rules, &root, "rules");
    let rules = rules.and_then(|list| all_rules(list, gravity, lower));
    let name = name?;
    Some(Envelope {
        place: lower.place(&name.at),
        name: name.value.0,
        status: match status?.value {
            StatusWord::Illustrative => Status::Illustrative,
            StatusWord::Transcribed => Status::Transcribed,
            StatusWord::Project => Status::Project,
        },
        source: source?,
        gravity: gravity?,
        filter: filter?,
        rules: rules?,
    })
}

fn gravity(word: GravityWord) -> GravityTerm {
    match word {
        GravityWord::Included => GravityTerm::Included,
        GravityWord::Excluded => GravityTerm::Excluded,
    }
}

fn document(source: Located<SourceKeys>, lower: &mut Lower) -> Option<Document> {
    let (at, keys) = (source.at, source.value);
    let document = lower.require(keys.document, &at, "document");
    let edition = lower.require(keys.edition, &at, "edition");
    Some(Document {
        document: document?.value.0,
        edition: edition?.value.0,
        note: optional(keys.note).map(|note| note.value.0),
    })
}

fn lowered_filter(
    written: Located<WordOr<FilterWord, FilterKeys>>,
    lower: &mut Lower,
) -> Option<Filter> {
    let keys = match written.value {
        WordOr::Word(FilterWord::None) => return Some(Filter::None),
        WordOr::Keys(keys) => keys,
    };
    let has_later = keys.moving_average.is_some();
    lower.later(keys.moving_average);
    match keys.butterworth {
        Some(butterworth) => lowered_butterworth(butterworth.given()?, lower),
        None if has_later => None,
        None => {
            lower.missing(&written.at, "butterworth");
            None
        }
    }
}

fn lowered_butterworth(written: Located<ButterworthKeys>, lower: &mut Lower) -> Option<Filter> {
    let (at, keys) = (written.at, written.value);
    let poles = lower.require(keys.poles, &at, "poles");
    let corner = lower.require(keys.corner, &at, "corner");
    let passes = lower.require(keys.passes, &at, "passes");
    if let Some(poles) = &poles
        && !(1..=8).contains(&poles.value)
    {
        lower.error(
            &poles.at,
            format!("found {} poles, expected 1 to 8", poles.value),
        );
    }
    let corner_hz = corner.map(|corner| lower.above_zero(&corner));
    let passes = passes?;
    if !matches!(passes.value, PassesWord::One) {
        lower.later_word(&passes.at);
    }
    Some(Filter::Butterworth {
        poles: u32::try_from(poles?.value).ok()?,
        corner_hz: corner_hz?,
    })
}

fn all_rules(
    list: Located<Vec<Field<RuleKeys>>>,
    gravity: Option<GravityTerm>,
    lower: &mut Lower,
) -> Option<Vec<Rule>> {
    let count = list.value.len();
    let mut ids = Names::of("rule");
    let mut rules = Vec::new();
    for item in lower.items(list, 1000, "rules") {
        rules.extend(rule(item, gravity, &mut ids, lower));
    }
    (rules.len() == count && count > 0).then_some(rules)
}

fn rule(
    item: Located<RuleKeys>,
    gravity: Option<GravityTerm>,
    ids: &mut Names,
    lower: &mut Lower,
) -> Option<Rule> {
    let (at, mut keys) = (item.at, item.value);
    let id = lower.require(std::mem::replace(&mut keys.id, Field::Bad), &at, "id");
    if let Some(id) = &id {
        ids.add(id, lower);
    }
    for later in [keys.only_if.take(), keys.outcome.take()] {
        lower.later(later);
    }
    let holds = holds(keys.holds.take(), lower);
    let scale = scale(keys.scale.take(), lower);
    let (clause, note) = (optional(keys.clause.take()), optional(keys.note.take()));
    let kind = lower.require(std::mem::replace(&mut keys.kind, Field::Bad), &at, "kind")?;
    refuse_foreign_keys(kind.value, &keys, lower);
    let kind = match kind.value {
        KindWord::Sustained => sustained(keys, &at, gravity, lower).map(RuleKind::Sustained),
        KindWord::Speed => speed(keys, &at, lower).map(RuleKind::Speed),
        _ => {
            lower.later_word(&kind.at);
            None
        }
    };
    let (kind, holds, scale) = (kind?, holds?, scale?);
    if let RuleKind::Speed(bounds) = &kind {
        check_speed(bounds, &holds, scale.as_ref(), lower);
    }
    Some(Rule {
        id: id?.value.0,
        clause: clause.map(|clause| clause.value.0),
        note: note.map(|note| note.value.0),
        kind,
        holds,
        scale: scale.map(|scale| scale.value),
        place: lower.place(&at),
    })
}

fn sustained(
    keys: RuleKeys,
    at: &At,
    gravity: Option<GravityTerm>,
    lower: &mut Lower,
) -> Option<Sustained> {
    if let Some(reading) = optional(keys.reading)
        && !matches!(reading.value, ReadingWord::Spell)
    {
        lower.later_word(&reading.at);
    }
    let axis = lower.require(keys.axis.unwrap_or(Field::Missing), at, "axis");
    let ignore_below = optional(keys.ignore_below);
    let ignore_below_s = ignore_below.map_or(0.0, |time| lower.not_negative(&time));
    let points = match (keys.limits, keys.floor) {
        (Some(limits), None) => limits_of(limits, keys.sign, at, lower),
        (None, Some(floor)) => {
            check_floor_axis(axis.as_ref(), gravity, &floor, lower);
            floor_of(floor, keys.sign, lower)
        }
        (Some(_), Some(floor)) => {
            let floor_at = floor.given().map_or(at.clone(), |floor| floor.at);
            lower.error(
                &floor_at,
                "found both `limits` and `floor`, expected one of them",
            );
            None
        }
        (None, None) => {
            let hint = "a rule has `limits` with `sign`, or a `floor`";
            lower.error_with_hint(at, "missing key `limits`", hint);
            None
        }
    };
    let (demand, curve) = points?;
    let between = lowered_between(keys.between, &curve, at, lower)?;
    Some(Sustained {
        axis: match axis?.value {
            AxisWord::X => Axis::X,
            AxisWord::Y => Axis::Y,
            AxisWord::Z => Axis::Z,
        },
        demand,
        curve: curve
            .iter()
            .map(|point| (point.duration.value.si, point.level.value))
            .collect(),
        between,
        ignore_below_s,
    })
}
