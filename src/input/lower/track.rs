//! Lowers a track file: elements with what they change, or a table of points.

use crate::diagnostic::Place;
use crate::input::dimension::{Angle, Length};
use crate::input::field::{At, Field, Located, WordOr, optional};
use crate::input::files::{Files, Named};
use crate::input::lower::{Lower, Names};
use crate::input::point_file::{self, Request};
use crate::input::quantity::{Quantity, SidedAngle};
use crate::input::written::track::{
    EaseWord, ElementKeys, FitKeys, FitWord, LandmarkKeys, PointsKeys, StartKeys, TrackFile,
    WrittenEase,
};
use crate::input::{
    Change, Ease, Element, ElementTrack, Extent, Fit, Landmark, Start, Track, TrackSource,
};

/// A track from its file; the table of points is opened on the way.
pub(in crate::input) fn track(
    file: Located<TrackFile>,
    named: &Named,
    files: &mut Files,
    lower: &mut Lower,
) -> Option<Track> {
    let (root, file) = (file.at, file.value);
    lower.version(file.crestfall, &root);
    let name = lower.require(file.track, &root, "track");
    lower.later(file.formula.clone());
    let mut names = Names::of("name");
    let start = optional(file.start);
    let source = match (file.elements, file.points) {
        (Some(elements), None) => {
            elements_source(start, elements.given()?, &mut names, lower).map(TrackSource::Elements)
        }
        (None, Some(points)) => {
            refuse_start(start, lower);
            points_source(points.given()?, named, files, lower).map(TrackSource::Points)
        }
        (Some(elements), Some(_)) => {
            let at = elements.given().map_or(root, |elements| elements.at);
            lower.error_with_hint(
                &at,
                "found both `elements` and `points`, expected one of them",
                "write one track file for each and compare them as variants",
            );
            None
        }
        (None, None) if file.formula.is_some() => None,
        (None, None) => {
            let hint = "a track is made of `elements` or of `points`";
            lower.error_with_hint(&root, "missing key `elements`", hint);
            None
        }
    };
    let closed = matches!(&source, Some(TrackSource::Points(table)) if table.closed);
    let written = optional(file.landmarks).map_or(Vec::new(), |list| list.value);
    let landmarks = written
        .into_iter()
        .filter_map(Field::given)
        .filter_map(|entry| landmark(entry, closed, &mut names, lower))
        .collect();
    let name = name?;
    Some(Track {
        place: lower.place(&name.at),
        name: name.value.0,
        source: source?,
        landmarks,
    })
}

fn refuse_start(start: Option<Located<StartKeys>>, lower: &mut Lower) {
    if let Some(start) = start {
        lower.error(
            &start.at,
            "`start` belongs to `elements`: a table of points says itself where it begins",
        );
    }
}

fn elements_source(
    start: Option<Located<StartKeys>>,
    written: Located<Vec<Field<ElementKeys>>>,
    names: &mut Names,
    lower: &mut Lower,
) -> Option<ElementTrack> {
    let start = start.map_or(Start::default(), |start| lowered_start(start.value));
    let count = written.value.len();
    let mut grade_rad = start.grade_rad;
    let mut elements = Vec::new();
    for item in lower.items(written, 10_000, "elements") {
        elements.extend(element(item, &mut grade_rad, names, lower));
    }
    (elements.len() == count).then_some(ElementTrack { start, elements })
}

fn lowered_start(start: StartKeys) -> Start {
    let length = |field| optional(field).map_or(0.0, |l: Located<Quantity<Length>>| l.value.si);
    let angle = |field| optional(field).map_or(0.0, |a: Located<Quantity<Angle>>| a.value.si);
    Start {
        x_m: length(start.x),
        y_m: length(start.y),
        z_m: length(start.z),
        bearing_rad: angle(start.heading),
        grade_rad: angle(start.grade),
        bank_left_rad: optional(start.bank).map_or(0.0, |bank| bank.value.left_rad),
    }
}

/// One element; `grade_rad` is the driven grade before it, and after it on return.
fn element(
    item: Located<ElementKeys>,
    grade_rad: &mut f64,
    names: &mut Names,
    lower: &mut Lower,
) -> Option<Element> {
    let (at, keys) = (item.at, item.value);
    let name = optional(keys.name);
    if let Some(name) = &name {
        names.add(name, lower);
    }
    // What could not be read may change something.
    let is_unread = is_bad(&keys.turn) || is_bad(&keys.grade_to) || is_bad(&keys.grade_by);
    let angle = |angle: Located<Quantity<Angle>>| (angle.value.si, angle.at);
    let sided = |angle: Located<SidedAngle>| (angle.value.left_rad, angle.at);
    let grade = change(
        optional(keys.grade_to).map(angle),
        optional(keys.grade_by).map(angle),
        ["grade_to", "grade_by"],
        lower,
    );
    let bank = change(
        optional(keys.bank_to).map(sided),
        optional(keys.bank_by).map(sided),
        ["bank_to", "bank_by"],
        lower,
    );
    let turn_left_rad = optional(keys.turn).map_or(0.0, |turn| turn.value.left_rad);
    let before_rad = *grade_rad;
    match grade {
        Some(Change::To(to)) => *grade_rad = to,
        Some(Change::By(by)) => *grade_rad += by,
        None => {}
    }
    let bends = is_unread || turn_left_rad != 0.0 || *grade_rad != before_rad;
    let extent = extent(keys.length, keys.radius, bends, &at, lower);
    let ease = keys
        .ease
        .map_or(Some(Ease::Smooth), |field| ease(field, lower));
    let bank_ease = keys
        .bank_ease
        .map_or(ease, |field| self::ease(field, lower));
    Some(Element {
        name: name.map(|name| name.value.0),
        extent: extent?,
        grade,
        turn_left_rad,
        bank,
        ease: ease?,
        bank_ease: bank_ease?,
        place: lower.place(&at),
    })
}

fn is_bad<T>(field: &Option<Field<T>>) -> bool {
    matches!(field, Some(Field::Bad))
}

fn change(
    to: Option<(f64, At)>,
    by: Option<(f64, At)>,
    keys: [&str; 2],
    lower: &mut Lower,
) -> Option<Change> {
    match (to, by) {
        (Some(_), Some((_, at))) => {
            let [to, by] = keys;
            lower.error(
                &at,
                format!("found both `{to}` and `{by}`, expected one of them"),
            );
            None
        }
        (Some((to, _)), None) => Some(Change::To(to)),
        (None, Some((by, _))) => Some(Change::By(by)),
        (None, None) => None,
    }
}

type LengthField = Option<Field<Quantity<Length>>>;

fn extent(
    length: LengthField,
    radius: LengthField,
    bends: bool,
    at: &At,
    lower: &mut Lower,
) -> Option<Extent> {
    match (length, radius) {
        (None, None) => {
            let hint = "every element states its `length`, or a `radius` from which it follows";
            let mistake = lower.mistake(at, "missing key `length`").hint(hint);
            lower.found.push(mistake);
            None
        }
        (Some(length), None) => Some(Extent::Length(lower.above_zero(&length.given()?))),
        (None, Some(radius)) => {
            let radius = radius.given()?;
            if !bends {
                lower.error_with_hint(
                    &radius.at,
                    "no length follows from `radius` where neither grade nor direction changes",
                    "state `length`, or what changes: `grade_to`, `grade_by` or `turn`",
                );
            }
            Some(Extent::SmallestRadius(lower.above_zero(&radius)))
        }
        (Some(_), Some(radius)) => {
            let radius_at = radius.given().map_or(at.clone(), |radius| radius.at);
            lower.error(
                &radius_at,
                "found both `length` and `radius`, expected one of them",
            );
            None
        }
    }
}

fn ease(field: Field<WrittenEase>, lower: &mut Lower) -> Option<Ease> {
    let written = field.given()?;
    let keys = match written.value {
        WordOr::Word(EaseWord::Smooth) => return Some(Ease::Smooth),
        WordOr::Keys(keys) => keys,
    };
    let part = lower.require(keys.ramp, &written.at, "ramp")?;
    if !(part.value > 0.0 && part.value <= 0.5) {
        let message = format!(
            "found `{}`, expected a part above 0 and at most 0.5",
            part.value
        );
        lower.error(&part.at, message);
    }
    Some(Ease::Ramp(part.value))
}

fn landmark(
    entry: Located<LandmarkKeys>,
    closed: bool,
    names: &mut Names,
    lower: &mut Lower,
) -> Option<Landmark> {
    let (at, keys) = (entry.at, entry.value);
    let name = lower.require(keys.name, &at, "name");
    let from = lower.require(keys.from, &at, "from");
    let to = lower.require(keys.to, &at, "to");
    if let Some(name) = &name {
        names.add(name, lower);
    }
    let (name, from, to) = (name?, from?, to?);
    let from_m = lower.not_negative(&from);
    let to_m = lower.not_negative(&to);
    if to_m == from_m || (to_m < from_m && !closed) {
        let (to, from) = (lower.text(&to.at), lower.text(&from.at));
        let message = format!("found `to: {to}`, expected a station beyond `from: {from}`");
        lower.error(&at, message);
    }
    Some(Landmark {
        name: name.value.0,
        from_m,
        to_m,
        place: lower.place(&at),
    })
}

fn points_source(
    points: Located<PointsKeys>,
    named: &Named,
    files: &mut Files,
    lower: &mut Lower,
) -> Option<crate::input::PointTable> {
    let (at, keys) = (points.at, points.value);
    let file = lower.require(keys.file, &at, "file");
    let fit = lower
        .require(keys.fit, &at, "fit")
        .and_then(|fit| lowered_fit(fit, lower));
    let except = excepted(keys.except, lower);
    let file = file?;
    let request = Request {
        named: named.names(&file.value.0, lower.place(&file.at)),
        closed: optional(keys.closed).is_some_and(|closed| closed.value),
        place: lower.place(&at),
        fit: fit?,
        except,
    };
    point_file::read(request, files, &mut lower.found)
}

/// Rows that are left out, each with its place.
fn excepted(field: Option<Field<Vec<Field<u64>>>>, lower: &Lower) -> Vec<(u64, Place)> {
    let rows = optional(field).map_or(Vec::new(), |list| list.value);
    let rows = rows.into_iter().filter_map(Field::given);
    rows.map(|row| (row.value, lower.place(&row.at))).collect()
}

fn lowered_fit(fit: Located<WordOr<FitWord, FitKeys>>, lower: &mut Lower) -> Option<Fit> {
    match fit.value {
        WordOr::Word(FitWord::Exact) => Some(Fit::Exact),
        WordOr::Word(FitWord::Auto) => Some(Fit::Auto),
        WordOr::Keys(keys) => {
            let within = lower.require(keys.within, &fit.at, "within");
            let bank = optional(keys.bank_within).map(|bank| lower.above_zero(&bank));
            within.map(|within| Fit::Within {
                error_m: lower.above_zero(&within),
                bank_error_rad: bank,
            })
        }
    }
}
