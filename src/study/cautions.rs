//! What a reader has to know before using a result.

use super::assessment::{At, Case};
use super::holds::{for_seat, in_scenario};
use super::plan::{Design, Plan};
use crate::input::{Envelope, Rule, RuleKind, Status};
use crate::spine::FitMethod;

/// In a fixed order, each once.
pub(super) fn of(plan: &Plan<'_>, cases: &[Case]) -> Vec<String> {
    let mut cautions = vec![
        "The results hold only for the envelopes given; they defer to the applicable standard, the local \
         code and the judgement of a licensed engineer."
            .to_owned(),
        "The band of a load's utilisation holds the error of numerics and, where a track comes from points, \
         two standard deviations of what their error leaves open; that of a speed the error of numerics alone. \
         No band holds what masses, friction, air or the build of the ride leave open: vary them in scenarios."
            .to_owned(),
    ];
    cautions.extend(narrowed(plan));
    cautions.extend(illustrative(plan));
    cautions.extend(rules(plan).filter_map(|(envelope, rule)| scaled(envelope, rule)));
    for design in &plan.variants {
        cautions.extend(
            rules(plan).filter_map(|(envelope, rule)| about_nothing(plan, design, envelope, rule)),
        );
    }
    cautions.extend(without_rules(plan));
    for design in &plan.variants {
        cautions.extend(upside_down(plan, design));
        let of_variant = [
            points(design, worst_margin(design, cases)),
            no_inertia(design),
        ];
        for caution in of_variant.into_iter().flatten() {
            if !cautions.contains(&caution) {
                cautions.push(caution);
            }
        }
    }
    cautions
}

/// Part of a study must not pass for all of it.
fn narrowed(plan: &Plan<'_>) -> Option<String> {
    let counted = |taken: usize, all: usize, what: &str| {
        (taken < all).then(|| format!("{taken} of the {all} {what}"))
    };
    let taken = plan.variants.iter().flat_map(|design| &design.seats);
    let all = plan.variants.iter().flat_map(|d| &d.variant.train.cars);
    let parts = [
        counted(plan.variants.len(), plan.study.variants.len(), "variants"),
        counted(
            plan.scenarios.len(),
            plan.study.operation.scenarios.len(),
            "scenarios",
        ),
        counted(
            taken.map(Vec::len).sum(),
            all.map(|car| car.seats.len()).sum(),
            "seats",
        ),
    ];
    let parts = parts.into_iter().flatten().collect::<Vec<_>>();
    (!parts.is_empty()).then(|| {
        format!(
            "Only a part of the study was taken, {}: the outcome says nothing of the rest.",
            parts.join(", ")
        )
    })
}

fn illustrative(plan: &Plan<'_>) -> Vec<String> {
    let invented = |e: &&crate::input::Envelope| e.status == Status::Illustrative;
    let envelopes = plan.study.envelopes.iter().filter(invented);
    envelopes
        .map(|e| {
            format!(
                "The envelope `{}` is illustrative: its numbers are invented and judge no ride.",
                e.name
            )
        })
        .collect()
}

fn rules<'a>(plan: &Plan<'a>) -> impl Iterator<Item = (&'a Envelope, &'a Rule)> {
    let envelopes = plan.study.envelopes.iter();
    envelopes.flat_map(|e| e.rules.iter().map(move |rule| (e, rule)))
}

fn scaled(envelope: &Envelope, rule: &Rule) -> Option<String> {
    let scale = rule.scale.as_ref()?;
    Some(format!(
        "The limits of the rule `{}` of the envelope `{}` are multiplied by {}: {}.",
        rule.id,
        envelope.name,
        scale.factor,
        scale.reason.trim_end_matches('.')
    ))
}

/// A rule that says nothing must not pass for one that is kept.
fn about_nothing(
    plan: &Plan<'_>,
    design: &Design<'_>,
    envelope: &Envelope,
    rule: &Rule,
) -> Option<String> {
    let of_train = matches!(rule.kind, RuleKind::Speed(_));
    let mut cars = design.seats.iter().enumerate();
    let seat = cars.any(|(car, seats)| {
        seats
            .iter()
            .any(|seat| of_train || for_seat(rule, car, seat))
    });
    let scenario = plan.scenarios.iter().any(|s| in_scenario(rule, &s.name));
    (!(seat && scenario)).then(|| {
        format!(
            "The rule `{}` of the envelope `{}` is not assessed in the variant `{}`: it is about none \
             of the scenarios and seats that were taken.",
            rule.id, envelope.name, design.variant.name
        )
    })
}

/// How many seats, counted once a case, no rule is about.
fn without_rules(plan: &Plan<'_>) -> Option<String> {
    let (mut all, mut bare) = (0, 0);
    for design in &plan.variants {
        for scenario in &plan.scenarios {
            let mut here = rules(plan).map(|(_, rule)| rule).collect::<Vec<_>>();
            here.retain(|rule| in_scenario(rule, &scenario.name));
            for (car, seats) in design.seats.iter().enumerate() {
                for seat in seats {
                    all += 1;
                    bare += usize::from(!here.iter().any(|rule| for_seat(rule, car, seat)));
                }
            }
        }
    }
    (bare > 0).then(|| {
        format!(
            "No rule is about {bare} of the {all} seats of all cases: what is felt there is not assessed."
        )
    })
}

/// A train released head down: more likely than not left and right have been exchanged.
fn upside_down(plan: &Plan<'_>, design: &Design<'_>) -> Option<String> {
    let mut releases = plan
        .scenarios
        .iter()
        .map(|scenario| scenario.release.station_m);
    let at_m = releases.find(|&at_m| design.spine.at(at_m).up.value.z < 0.0)?;
    Some(format!(
        "At the release, {at_m} m, the track of variant `{}` lies upside down: look whether left and right \
         (rails, bank) are exchanged.",
        design.variant.name
    ))
}

/// The largest half-width that the geometry gives any load of a variant.
fn worst_margin(design: &Design<'_>, cases: &[Case]) -> Option<At> {
    let of_variant = cases
        .iter()
        .filter(|case| case.variant == design.variant.name);
    let margins = of_variant
        .flat_map(|case| &case.seats)
        .filter_map(|seat| seat.margin_g);
    margins.max_by(|a, b| a.value.total_cmp(&b.value))
}

/// What the error of a track's points makes of the loads, or that nothing is known of it.
fn points(design: &Design<'_>, worst: Option<At>) -> Option<String> {
    let track = &design.variant.track.name;
    let report = design.spine.fit()?;
    let Some(error_m) = report.error_m else {
        return Some(format!(
            "The point table of the track `{track}` is taken as exact: errors of its points go into the \
             loads and are not assessed."
        ));
    };
    let error = format!("{} mm", short(1e3 * error_m));
    let found = match report.method {
        FitMethod::Exact => format!("interpolated; their error or rounding, {error},"),
        FitMethod::Within => format!("smoothed to the stated error of {error}, which"),
        FitMethod::Grid => format!("smoothed to the rounding of their decimals, {error}, which"),
        FitMethod::CrossValidated => {
            format!("smoothed by cross-validation to an error of {error}, which")
        }
    };
    let Some(At {
        value,
        station_m: at_m,
    }) = worst
    else {
        return Some(format!(
            "The points of the track `{track}` are {found} could not be held against a run."
        ));
    };
    let g = short(value);
    Some(format!(
        "The points of the track `{track}` are {found} leaves up to ±{g} g in a load (two standard \
         deviations, at {at_m:.1} m)."
    ))
}

/// Two significant digits.
fn short(value: f64) -> String {
    let digits = (1.0 - value.abs().log10().floor()).clamp(0.0, 9.0) as usize;
    format!("{value:.digits$}")
}

fn no_inertia(design: &Design<'_>) -> Option<String> {
    let train = &design.variant.train;
    let cars: Vec<String> = (1..)
        .zip(&train.cars)
        .filter(|(_, car)| car.inertia.is_none())
        .map(|(number, _)| number.to_string())
        .collect();
    let which = match cars.len() {
        0 => return None,
        n if n == train.cars.len() => "its cars".to_owned(),
        1 => format!("car {}", cars[0]),
        _ => format!("cars {}", cars.join(", ")),
    };
    Some(format!(
        "The train `{}` gives no inertia for {which}: taken as 0.",
        train.name
    ))
}
