//! What a reader has to know before using a result.

use super::plan::{Design, Plan};
use crate::input::{Fit, Status, TrackSource};

/// In a fixed order, each once.
pub(super) fn of(plan: &Plan<'_>) -> Vec<String> {
    let mut cautions = vec![
        "The results hold only for the envelopes given; they defer to the applicable standard, the local \
         code and the judgement of a licensed engineer."
            .to_owned(),
        "The uncertainty that numerics and geometry give a load is not yet estimated: band is 0, so that a \
         utilisation a hair below 1 is no margin."
            .to_owned(),
    ];
    cautions.extend(illustrative(plan));
    for design in &plan.variants {
        let of_variant = [exact_points(design), no_inertia(design)];
        for caution in of_variant.into_iter().flatten() {
            if !cautions.contains(&caution) {
                cautions.push(caution);
            }
        }
    }
    cautions
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

fn exact_points(design: &Design<'_>) -> Option<String> {
    let track = &design.variant.track;
    match &track.source {
        TrackSource::Points(table) if table.fit == Fit::Exact => Some(format!(
            "The point table of the track `{}` is taken as exact: errors of its points go into the loads \
             and are not assessed.",
            track.name
        )),
        _ => None,
    }
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
