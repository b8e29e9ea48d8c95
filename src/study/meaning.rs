//! What is wrong only when the files are put together: zones, goals and releases against tracks.
//!
//! What the files show without a spine (riders against trains, filters against the rate) the reader has checked.

use std::collections::BTreeSet;

use super::plan::{Design, Plan};
use super::selection::suggest;
use crate::diagnostic::Diagnostic;
use crate::input::{Goal, PointTable, Rule, Scenario, TrackSource, Zone};
use crate::spine::{Finding, Outlier, gaps, understated_error};

/// All mistakes of a plan.
pub(super) fn check(plan: &Plan<'_>) -> Vec<Diagnostic> {
    let goal = &plan.study.operation.goal;
    let mut mistakes = Vec::new();
    for &scenario in &plan.scenarios {
        mistakes.extend(check_finish(goal, scenario));
    }
    for design in &plan.variants {
        mistakes.extend(check_blunders(design));
        mistakes.extend(check_goal(goal, design));
        let envelopes = plan.study.envelopes.iter();
        let rules = envelopes.flat_map(|envelope| &envelope.rules);
        mistakes.extend(rules.flat_map(|rule| check_stations(rule, design)));
        for &scenario in &plan.scenarios {
            let zones = scenario.zones.iter();
            mistakes.extend(zones.filter_map(|zone| check_zone(zone, design)));
            mistakes.extend(check_release(goal, scenario, design));
        }
    }
    mistakes
}

/// The same mistakes, each once: scenarios share zones and releases.
pub(super) fn without_repeats(mistakes: Vec<Diagnostic>) -> Vec<Diagnostic> {
    let mut seen = BTreeSet::new();
    let mut first_time = |d: &Diagnostic| {
        let place = d.place.as_ref();
        let place = place.map(|p| (p.source.name.clone(), p.span.start));
        seen.insert((place, d.message.clone()))
    };
    mistakes.into_iter().filter(|d| first_time(d)).collect()
}

/// Beyond the seam of a closed track a station would mean another one; beyond an open end it is never reached.
fn check_stations(rule: &Rule, design: &Design<'_>) -> Vec<Diagnostic> {
    let length_m = design.spine.length_m();
    let ranges = rule.holds.stations.iter().flatten();
    let beyond = ranges.filter(|r| design.spine.is_closed() && r.from_m.max(r.to_m) > length_m);
    let mistake = |range: &crate::input::StationRange| {
        Diagnostic::error(format!(
            "the stretch from {} m to {} m does not lie on the closed track of variant `{}`, \
             expected stations within 0 m..{length_m:.3} m",
            range.from_m, range.to_m, design.variant.name
        ))
        .at(&range.place)
        .hint("a stretch across the seam ends at a lower station than it begins")
    };
    beyond.map(mistake).collect()
}

/// Rows far off the curve that are told one by one, farthest first.
const BLUNDERS_SHOWN: usize = 5;

/// One row in so many may be a blunder; where there are more, the stated error is to blame.
const ROWS_A_BLUNDER: usize = 20;

/// Points too far from the curve for their error: they bend it, and nobody has said they should.
fn check_blunders(design: &Design<'_>) -> Vec<Diagnostic> {
    let (TrackSource::Points(table), Some(report)) =
        (&design.variant.track.source, design.spine.fit())
    else {
        return Vec::new();
    };
    let mut blunders = report.blunders.clone();
    blunders.sort_by(|a, b| b.studentised.total_cmp(&a.studentised));
    let too_many = blunders.len() * ROWS_A_BLUNDER > table.len();
    let told = blunders.iter().take(BLUNDERS_SHOWN);
    let mut mistakes: Vec<_> = told
        .map(|blunder| off_the_curve(table, blunder, too_many))
        .collect();
    if let Some(more @ 1..) = blunders.len().checked_sub(BLUNDERS_SHOWN) {
        let message =
            format!("{more} more rows of this table lie too far from the curve for their error");
        let hint = "`crestfall spine` lists them all";
        mistakes.push(Diagnostic::error(message).at(&table.place).hint(hint));
    }
    mistakes.extend(
        gaps(table, &design.spine)
            .iter()
            .filter_map(|gap| in_the_dark(table, gap)),
    );
    mistakes.extend(understated_error(table, report).map(|sizes| error_too_small(table, sizes)));
    mistakes
}

/// How the track runs over a gap is a guess that no margin holds.
fn in_the_dark(table: &PointTable, gap: &Finding) -> Option<Diagnostic> {
    let (row, width_m, usual_m) = (gap.row?, gap.size?, gap.against?);
    let point = (0..table.len()).find(|&point| table.row_number(point) == row)?;
    Some(
        Diagnostic::error(format!(
            "the next point is {width_m:.3} m from this one, where the points around lie {usual_m:.3} m apart: \
             nothing is known of the track in between"
        ))
        .at(&table.row_place(point))
        .hint("give the points in between; where the track is drawn there, take them from the drawing"),
    )
}

/// The curve follows the noise of its points, and no margin would tell.
fn error_too_small(table: &PointTable, (stated_m, found_m): (f64, f64)) -> Diagnostic {
    Diagnostic::error(format!(
        "the stated error makes {:.2} mm of a point of the centre line, and the points show {:.2} mm",
        1e3 * stated_m,
        1e3 * found_m
    ))
    .at(&table.place)
    .hint("state a larger error or use `fit: auto`; `crestfall spine` shows rows that stick out")
    .hint("where points lie metres apart, give them closer together")
}

fn off_the_curve(table: &PointTable, blunder: &Outlier, too_many: bool) -> Diagnostic {
    let row = blunder.row;
    let mistake = Diagnostic::error(format!(
        "row {row} lies {:.1} mm from the curve, {:.0} times its error",
        1e3 * blunder.residual_m,
        blunder.studentised
    ))
    .at(&table.row_place(blunder.point));
    if too_many {
        return mistake.hint("so many rows are like this that the stated error is too small");
    }
    mistake
        .hint(format!(
            "correct the row, or leave it out with `except: [{row}]` and say why in a comment"
        ))
        .hint(
            "where a straight meets an arc at once, or points lie far apart in a sharp bend, no row is \
             wrong: give points closer together, or larger errors there in a column `error_mm`",
        )
}

fn check_finish(goal: &Goal, scenario: &Scenario) -> Option<Diagnostic> {
    let Goal::Finish { zone, place } = goal else {
        return None;
    };
    let names: Vec<String> = scenario.zones.iter().map(|z| z.name.clone()).collect();
    if names.contains(zone) {
        return None;
    }
    let message = format!(
        "scenario `{}` has no zone `{zone}`, in which the run is to finish",
        scenario.name
    );
    Some(
        suggest(message, zone, &names)
            .at(&scenario.place)
            .also(place, "the finish"),
    )
}

fn check_goal(goal: &Goal, design: &Design<'_>) -> Option<Diagnostic> {
    let length_m = design.spine.length_m();
    match goal {
        Goal::TrackEnd if design.spine.is_closed() => Some(
            Diagnostic::error(format!(
                "a run on the closed track of variant `{}` has no end",
                design.variant.name
            ))
            .at(&design.variant.place)
            .hint("give `until` or `finish` in the operation"),
        ),
        Goal::Until { station_m, place } if !design.spine.is_closed() && *station_m > length_m => {
            Some(
                Diagnostic::error(format!(
                    "`until` {station_m} m lies beyond the end of the track of variant `{}`, {length_m:.3} m",
                    design.variant.name
                ))
                .at(place)
                .hint("leave `until` out to run to the end of the track"),
            )
        }
        _ => None,
    }
}

fn check_zone(zone: &Zone, design: &Design<'_>) -> Option<Diagnostic> {
    let (name, variant) = (&zone.name, &design.variant.name);
    let length_m = design.spine.length_m();
    let on_track = |station_m: f64| (0.0..=length_m).contains(&station_m);
    let error = |message: String| Some(Diagnostic::error(message).at(&zone.place));
    if let Some(off_m) = [zone.from_m, zone.to_m].into_iter().find(|&m| !on_track(m)) {
        return error(format!(
            "zone `{name}` reaches to {off_m} m, off the track of variant `{variant}`, which runs from 0 m to {length_m:.3} m"
        ));
    }
    if zone.from_m <= zone.to_m {
        return check_overlap(zone, zone.to_m - zone.from_m, design);
    }
    if design.spine.is_closed() {
        return check_overlap(zone, zone.to_m - zone.from_m + length_m, design);
    }
    error(format!(
        "zone `{name}` runs backwards, from {} m to {} m, and the track of variant `{variant}` is open",
        zone.from_m, zone.to_m
    ))
    .map(|d| d.hint("exchange `from` and `to`; only a zone of a closed track crosses its seam"))
}

/// On a closed track a train must not reach into a zone with both its ends.
fn check_overlap(zone: &Zone, zone_m: f64, design: &Design<'_>) -> Option<Diagnostic> {
    let train_m = design.poses.layout().length_m();
    let length_m = design.spine.length_m();
    if !design.spine.is_closed() || zone_m + train_m <= length_m {
        return None;
    }
    Some(
        Diagnostic::error(format!(
            "zone `{}` overlaps itself: {zone_m:.3} m and {train_m:.3} m of train are more than the {length_m:.3} m of the closed track of variant `{}`",
            zone.name, design.variant.name
        ))
        .at(&zone.place)
        .hint("shorten the zone, or split it into two with names of their own"),
    )
}

fn check_release(goal: &Goal, scenario: &Scenario, design: &Design<'_>) -> Option<Diagnostic> {
    let release = &scenario.release;
    let (first_m, last_m) = design.poses.stations_m();
    let variant = &design.variant.name;
    if !(first_m..=last_m).contains(&release.station_m) {
        return Some(
            Diagnostic::error(format!(
                "with the leading axle released at {} m the train is not wholly on the track of variant `{variant}`: \
                 expected {first_m:.3} m to {last_m:.3} m",
                release.station_m
            ))
            .at(&release.place),
        );
    }
    match goal {
        Goal::Until { station_m, place } if *station_m <= release.station_m => Some(
            Diagnostic::error(format!(
                "`until` {station_m} m does not lie ahead of the release at {} m",
                release.station_m
            ))
            .at(place)
            .also(&release.place, "the release"),
        ),
        _ => None,
    }
}
