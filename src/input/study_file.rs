//! Reads a study: the files it names, and what must hold between them.

use crate::diagnostic::{Diagnostic, Place};
use crate::input::decode::nearest;
use crate::input::field::{At, Located, Text, WordOr, optional};
use crate::input::files::Named;
use crate::input::holds;
use crate::input::lower::Lower;
use crate::input::read::Reader;
use crate::input::written::study::{StudyFile, VariantKeys};
use crate::input::{Envelope, FileKind, Filter, Riders, SeatName, Study, Train, Variant};

/// Most variants that are read.
const VARIANTS: usize = 100;
/// Most samples a run may take.
const SAMPLES: f64 = 1e7;

/// A study's own keys, files not yet opened.
struct Plan {
    name: Located<Text>,
    variants: Vec<Planned>,
    baseline: usize,
    operation: Option<Named>,
    envelopes: Vec<Named>,
    gravity_m_s2: f64,
    rate_hz: f64,
    place: Place,
    rate_place: Option<Place>,
}

/// A variant's name and files.
struct Planned {
    name: String,
    place: Place,
    track: Option<Named>,
    train: Option<Named>,
}

/// A study with all files it names; `files` is left empty.
pub(super) fn study(named: &Named, reader: &mut Reader) -> Option<Study> {
    let plan = reader.lowered(FileKind::Study, named, |file, named, _, lower| {
        plan(file, named, lower)
    })?;
    let variants: Vec<Variant> = plan
        .variants
        .iter()
        .filter_map(|planned| variant(planned, reader))
        .collect();
    let operation = plan
        .operation
        .as_ref()
        .and_then(|named| reader.operation(named));
    let envelopes = envelopes(&plan.envelopes, reader);
    if variants.len() < plan.variants.len() || envelopes.len() < plan.envelopes.len() {
        return None;
    }
    let study = Study {
        name: plan.name.value.0,
        variants,
        baseline: plan.baseline,
        operation: operation?,
        envelopes,
        gravity_m_s2: plan.gravity_m_s2,
        rate_hz: plan.rate_hz,
        files: Vec::new(),
        place: plan.place,
    };
    if reader.found.is_empty() {
        check_rate(&study, plan.rate_place.as_ref(), &mut reader.found);
        check_seats(&study, &mut reader.found);
        reader.found.extend(holds::check(&study));
    }
    Some(study)
}

fn plan(file: Located<StudyFile>, named: &Named, lower: &mut Lower) -> Option<Plan> {
    let (root, file) = (file.at, file.value);
    lower.version(file.crestfall, &root);
    let name = lower.require(file.study, &root, "study");
    let reference =
        |path: Located<Text>, lower: &Lower| named.names(&path.value.0, lower.place(&path.at));
    let train = match file.train {
        None => Some(None),
        Some(field) => field.given().map(|path| Some(reference(path, lower))),
    };
    let written = lower.require(file.variants, &root, "variants");
    let variants = written.map_or(Vec::new(), |written| {
        lower.count(&written.at, written.value.0.len(), VARIANTS, "variants");
        let entries = written.value.given();
        let plan_one = |(name, value)| planned(name, value, train.as_ref(), named, lower);
        entries.into_iter().take(VARIANTS).map(plan_one).collect()
    });
    let baseline = optional(file.baseline).map_or(0, |name| baseline(&name, &variants, lower));
    let operation = lower.require(file.operation, &root, "operation");
    let operation = operation.map(|path| reference(path, lower));
    let envelopes = lower.require(file.envelopes, &root, "envelopes");
    let envelopes = envelopes.map_or(Vec::new(), |list| lower.items(list, 100, "envelopes"));
    let envelopes = envelopes
        .into_iter()
        .map(|path| reference(path, lower))
        .collect();
    let gravity = optional(file.gravity);
    let gravity_m_s2 = gravity.map_or(crate::STANDARD_GRAVITY_M_S2, |gravity| {
        lower.within(&gravity, 9.0..=11.0, "from 9 m/s2 to 11 m/s2")
    });
    let rate = optional(file.rate);
    let rate_place = rate.as_ref().map(|rate| lower.place(&rate.at));
    let rate_hz = rate.map_or(500.0, |rate| {
        lower.within(&rate, 10.0..=10_000.0, "from 10 Hz to 10000 Hz")
    });
    let name = name?;
    Some(Plan {
        place: lower.place(&name.at),
        name,
        variants,
        baseline,
        operation,
        envelopes,
        gravity_m_s2,
        rate_hz,
        rate_place,
    })
}

/// One variant; `train` is the study's: not given, or given (and then readable or not).
fn planned(
    name: Located<String>,
    value: Located<WordOr<Text, VariantKeys>>,
    train: Option<&Option<Named>>,
    named: &Named,
    lower: &mut Lower,
) -> Planned {
    let at = value.at;
    let (track, own_train) = match value.value {
        WordOr::Word(path) => (
            Some(Located {
                value: path,
                at: at.clone(),
            }),
            None,
        ),
        WordOr::Keys(keys) => (lower.require(keys.track, &at, "track"), keys.train),
    };
    let mut refer = |path: Located<Text>| named.names(&path.value.0, lower.place(&path.at));
    let track = track.map(&mut refer);
    let train = match (own_train, train) {
        (Some(own), _) => own.given().map(refer),
        (None, Some(Some(of_study))) => Some(of_study.clone()),
        (None, Some(None)) => {
            no_train(&name, &at, lower);
            None
        }
        (None, None) => None,
    };
    Planned {
        place: lower.place(&name.at),
        name: name.value,
        track,
        train,
    }
}

fn no_train(name: &Located<String>, at: &At, lower: &mut Lower) {
    let message = format!("variant `{}` has no train", name.value);
    lower.error_with_hint(
        at,
        message,
        "give the study a `train`, or the variant its own: `{track: FILE, train: FILE}`",
    );
}

fn baseline(name: &Located<Text>, variants: &[Planned], lower: &mut Lower) -> usize {
    let found = variants
        .iter()
        .position(|variant| variant.name == name.value.0);
    found.unwrap_or_else(|| {
        let names: Vec<&str> = variants
            .iter()
            .map(|variant| variant.name.as_str())
            .collect();
        lower.unknown(&name.at, "variant", &name.value.0, &names);
        0
    })
}

fn variant(planned: &Planned, reader: &mut Reader) -> Option<Variant> {
    let track = planned.track.as_ref().and_then(|named| reader.track(named));
    let train = planned.train.as_ref().and_then(|named| reader.train(named));
    Some(Variant {
        name: planned.name.clone(),
        track: track?,
        train: train?,
        place: planned.place.clone(),
    })
}

/// Envelopes with names that differ, since findings name them.
fn envelopes(list: &[Named], reader: &mut Reader) -> Vec<Envelope> {
    let mut envelopes: Vec<Envelope> = Vec::new();
    for named in list {
        let Some(envelope) = reader.envelope(named) else {
            continue;
        };
        if let Some(first) = envelopes.iter().find(|other| other.name == envelope.name) {
            let message = format!("the envelope `{}` is given twice", envelope.name);
            let mistake = named.blame(Diagnostic::error(message));
            reader
                .found
                .push(mistake.also(&first.place, "first given here"));
        }
        envelopes.push(envelope);
    }
    envelopes
}

/// The rate suits the filters, and the longest run fits in memory.
fn check_rate(study: &Study, rate_place: Option<&Place>, found: &mut Vec<Diagnostic>) {
    let rate_hz = study.rate_hz;
    for envelope in &study.envelopes {
        if let Filter::Butterworth { corner_hz, .. } = envelope.filter
            && rate_hz <= 2.0 * corner_hz
        {
            let message = format!(
                "a rate of {rate_hz} Hz is too low for the filter of `{}`, expected above {} Hz",
                envelope.name,
                2.0 * corner_hz
            );
            found.push(Diagnostic::error(message).at(rate_place.unwrap_or(&envelope.place)));
        }
    }
    let samples = rate_hz * study.operation.time_limit_s;
    if samples > SAMPLES {
        let message = format!("a run of up to {samples} samples, expected at most {SAMPLES}");
        let mistake = Diagnostic::error(message).at(rate_place.unwrap_or(&study.operation.place));
        found.push(mistake.hint("lower `rate` or `time_limit`"));
    }
}

/// Seats that scenarios name are there in every train.
fn check_seats(study: &Study, found: &mut Vec<Diagnostic>) {
    for scenario in &study.operation.scenarios {
        let Riders::Seats(names) = &scenario.riders else {
            continue;
        };
        for variant in &study.variants {
            found.extend(
                names
                    .iter()
                    .filter_map(|name| unknown_seat(name, &variant.train)),
            );
        }
    }
}

fn unknown_seat(name: &SeatName, train: &Train) -> Option<Diagnostic> {
    let Some(car) = train.cars.get(name.car - 1) else {
        let message = format!(
            "car {} is not in train `{}`, which has {} cars",
            name.car,
            train.name,
            train.cars.len()
        );
        return Some(Diagnostic::error(message).at(&name.place));
    };
    if car.seats.iter().any(|seat| seat.name == name.seat) {
        return None;
    }
    let message = format!(
        "seat `{}` is not in car {} of train `{}`",
        name.seat, name.car, train.name
    );
    let mistake = Diagnostic::error(message).at(&name.place);
    let names = car.seats.iter().map(|seat| seat.name.as_str());
    Some(match nearest(&name.seat, names) {
        Some(near) => mistake.hint(format!("did you mean `{}-{near}`?", name.car)),
        None => mistake,
    })
}
