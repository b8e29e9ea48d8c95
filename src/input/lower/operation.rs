//! Lowers an operation file: where a run ends, and scenarios with nothing left to look up.

use crate::input::field::{At, Field, Located, optional};
use crate::input::lower::grid::grid;
use crate::input::lower::scenario::{Common, scenarios};
use crate::input::lower::{Lower, zone};
use crate::input::written::operation::{FinishKeys, OperationFile};
use crate::input::{Goal, Operation, Scenario};

/// Longest run that may be asked for, s.
const LONGEST_S: f64 = 7200.0;

/// An operation from its file.
pub(in crate::input) fn operation(
    file: Located<OperationFile>,
    lower: &mut Lower,
) -> Option<Operation> {
    let (root, mut file) = (file.at, file.value);
    lower.version(std::mem::replace(&mut file.crestfall, Field::Bad), &root);
    let name = lower.require(
        std::mem::replace(&mut file.operation, Field::Bad),
        &root,
        "operation",
    );
    let time_limit_s = match optional(file.time_limit.take()) {
        Some(time) if time.value.si <= 0.0 => lower.above_zero(&time),
        Some(time) => lower.within(&time, 0.0..=LONGEST_S, "of at most 7200 s"),
        None => 600.0,
    };
    let (finish, until) = (file.finish.take(), file.until.take());
    let (scenario_list, grid_keys) = (file.scenarios.take(), file.grid.take());
    let common = Common::new(file, &root, lower);
    let goal = goal(until, finish, &common.zones, common.zones_whole, lower);
    if scenario_list.is_none() && grid_keys.is_none() {
        let hint = "an operation has `scenarios`, a `grid`, or both";
        lower.error_with_hint(&root, "missing key `scenarios`", hint);
    }
    let mut all = scenario_list.map_or(Some(Vec::new()), |list| scenarios(list, &common, lower));
    if let Some(keys) = grid_keys {
        all = all
            .zip(grid(keys, &common, lower))
            .map(|(all, more)| [all, more].concat());
    }
    let (name, goal, scenarios) = (name?, goal?, all?);
    check_names(&scenarios, lower);
    check_goal(&goal, &scenarios, lower);
    Some(Operation {
        place: lower.place(&name.at),
        name: name.value.0,
        goal,
        time_limit_s,
        scenarios,
    })
}

type Until = Option<Field<crate::input::quantity::Quantity<crate::input::dimension::Length>>>;

fn goal(
    until: Until,
    finish: Option<Field<FinishKeys>>,
    zones: &[zone::Kept],
    zones_whole: bool,
    lower: &mut Lower,
) -> Option<Goal> {
    match (until, finish) {
        (None, None) => Some(Goal::TrackEnd),
        (Some(until), None) => {
            let until = until.given()?;
            Some(Goal::Until {
                station_m: lower.above_zero(&until),
                place: lower.place(&until.at),
            })
        }
        (None, Some(finish)) => {
            let finish = finish.given()?;
            let zone = lower.require(finish.value.zone, &finish.at, "zone")?;
            if zones_whole && !zones.iter().any(|kept| kept.is(&zone)) {
                let names: Vec<&str> = zones.iter().map(|kept| kept.zone.name.as_str()).collect();
                lower.unknown(&zone.at, "zone", &zone.value.0, &names);
                return None;
            }
            Some(Goal::Finish {
                place: lower.place(&zone.at),
                zone: zone.value.0,
            })
        }
        (Some(_), Some(finish)) => {
            let nowhere = At {
                span: 0..0,
                key: "finish".to_owned(),
            };
            let at = finish.given().map_or(nowhere, |finish| finish.at);
            lower.error(
                &at,
                "found both `until` and `finish`, expected at most one of them",
            );
            None
        }
    }
}

fn check_names(scenarios: &[Scenario], lower: &mut Lower) {
    let mut seen = std::collections::BTreeSet::new();
    for scenario in scenarios {
        if !seen.insert(scenario.name.as_str()) {
            let message = format!("the scenario `{}` is given twice", scenario.name);
            let mistake = crate::diagnostic::Diagnostic::error(message).at(&scenario.place);
            lower.found.push(mistake);
        }
    }
}

/// Every scenario can reach the goal at all.
fn check_goal(goal: &Goal, scenarios: &[Scenario], lower: &mut Lower) {
    for scenario in scenarios {
        let mistake = match goal {
            Goal::Until { station_m, .. } if *station_m <= scenario.release.station_m => {
                let release_m = scenario.release.station_m;
                format!(
                    "`until` is at {station_m} m, expected a station beyond the release at {release_m} m"
                )
            }
            Goal::Finish { zone, .. } if !scenario.zones.iter().any(|z| z.name == *zone) => {
                format!(
                    "scenario `{}` goes without `{zone}`, which is the finish",
                    scenario.name
                )
            }
            _ => continue,
        };
        let place = match goal {
            Goal::Until { place, .. } => place,
            _ => &scenario.place,
        };
        lower
            .found
            .push(crate::diagnostic::Diagnostic::error(mistake).at(place));
        if matches!(goal, Goal::Until { .. }) {
            return;
        }
    }
}
