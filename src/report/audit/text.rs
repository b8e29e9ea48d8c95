//! An audit as people read it: what has to be looked at first, then the figures; at most 100 columns.

use crate::report::number::{Units, degrees, fine_degrees, noise as noise_g, percent, times};
use crate::report::text::layout::{counted, list, section, wrapped};
use crate::spine::{
    Audit, Extreme, Finding, FindingKind, FitMethod, FitReport, Floor, Law, NoiseFloor, Points,
    Range, WANTED_G,
};

/// Findings of one kind that are told one by one.
const SHOWN: usize = 10;

/// Spacings between the ends of a track that are worth counting.
const FEW: f64 = 20.0;

/// Rows far from the curve that are told.
const ROWS_SHOWN: usize = 5;

/// The whole audit, with a line end; no line is longer than 100 columns.
pub fn spine_text(audit: &Audit, units: Units) -> String {
    [
        headline(audit, units),
        findings(audit, units),
        extremes(audit, units),
        list("shape", shape(audit, units).into_iter()),
        list("points", points(audit, units).into_iter()),
        rows(audit, units),
        list("noise", noise(audit, units).into_iter()),
    ]
    .concat()
}

fn headline(audit: &Audit, units: Units) -> String {
    let kind = if audit.closed { "closed" } else { "open" };
    let found = match audit.findings.len() {
        0 => "nothing found".to_owned(),
        count => counted(count, "finding"),
    };
    let length = units.length(audit.length_m);
    let line = format!("{}: {kind} track of {length}: {found}", audit.track);
    wrapped(&line, "", "") + "\n"
}

fn findings(audit: &Audit, units: Units) -> String {
    let mut lines = Vec::new();
    let mut told: Vec<FindingKind> = Vec::new();
    for finding in &audit.findings {
        if told.contains(&finding.kind) {
            continue;
        }
        told.push(finding.kind);
        let alike = || audit.findings.iter().filter(|f| f.kind == finding.kind);
        lines.extend(alike().take(SHOWN).map(|f| told_finding(f, units)));
        let more = alike().count().saturating_sub(SHOWN);
        if more > 0 {
            lines.push(format!(
                "{more} more like these; `--format json` has them all"
            ));
        }
        lines.extend(way_out(finding.kind).map(|way| format!("hint: {way}")));
    }
    list("findings", lines.into_iter())
}

fn told_finding(finding: &Finding, units: Units) -> String {
    let row = finding
        .row
        .map_or_else(String::new, |row| format!("row {row}, "));
    let place = finding
        .station_m
        .map_or_else(String::new, |s| format!("at {}: ", units.station(s)));
    // What has no size has its own sentence, which tells none.
    let (size, against) = (finding.size.unwrap_or(0.0), finding.against.unwrap_or(0.0));
    let what = match finding.kind {
        FindingKind::CurvatureJump => format!("the curvature jumps by {}", units.curvature(size)),
        FindingKind::RollRateJump => format!("the roll rate jumps by {}", units.rate(size)),
        FindingKind::Gap => format!(
            "the next point is {} away, {} times the spacing around",
            units.fine(size),
            times(size / against)
        ),
        FindingKind::NearDuplicate => format!(
            "this point is {} from the one before; the spacing around is {}",
            units.fine(size),
            units.fine(against)
        ),
        FindingKind::Kink => format!(
            "the track turns by {} at this point; the curvature around it would make {}",
            fine_degrees(size),
            fine_degrees(against)
        ),
        FindingKind::Blunder => format!(
            "this point lies {} from the curve, {} times its error",
            units.fine(size),
            times(size / against)
        ),
        FindingKind::ErrorOverstated => format!(
            "the stated error of {} is {} times the {} that the points show: what the track does \
             may be smoothed away",
            units.fine(size),
            times(size / against),
            units.fine(against)
        ),
        FindingKind::ErrorUnderstated => format!(
            "the stated error of {} is far below the {} that the points show: their noise is taken for \
             the track, and no margin tells",
            units.fine(size),
            units.fine(against)
        ),
        FindingKind::ErrorUnknown => {
            "nothing is known of the points' error, nor of the noise it makes".to_owned()
        }
        FindingKind::NoiseFloor => format!(
            "the points' error alone makes up to {} of load, and more than {} on more than a twentieth of \
             the track",
            noise_g(size),
            noise_g(against)
        ),
    };
    format!("{row}{place}{what}")
}

/// What to do about a kind of finding, where its own line does not say it.
fn way_out(kind: FindingKind) -> Option<&'static str> {
    match kind {
        FindingKind::Blunder => Some(
            "correct such rows, the farthest first, or leave them out with `except: [rows]` and say why in \
             a comment; if many rows are like this, the stated error is too small",
        ),
        FindingKind::Kink => {
            Some("look for a slip of the pen near a kink, or a joint of the track that is one")
        }
        FindingKind::Gap => {
            Some("between the ends of a gap the curve is a guess: give points there")
        }
        FindingKind::NearDuplicate => Some("leave out one of two points that are almost one"),
        FindingKind::ErrorUnknown => {
            Some("use `fit: auto`, or state the error with `fit: {within: ...}`")
        }
        FindingKind::ErrorUnderstated => Some("state a larger error, or use `fit: auto`"),
        FindingKind::ErrorOverstated => Some("state a smaller error, or use `fit: auto`"),
        FindingKind::CurvatureJump | FindingKind::RollRateJump | FindingKind::NoiseFloor => None,
    }
}

fn extremes(audit: &Audit, units: Units) -> String {
    let mut table = Vec::<Vec<String>>::new();
    let found = &audit.extremes;
    let at = |e: Extreme| units.station(e.station_m);
    let none = String::new;
    let radius = match found.radius_m {
        Some(e) => [none(), none(), units.length(e.value), at(e)],
        None => [none(), none(), "straight".to_owned(), none()],
    };
    let both = |range: Range, shown: &dyn Fn(f64) -> String| {
        [
            shown(range.max.value),
            at(range.max),
            shown(range.min.value),
            at(range.min),
        ]
    };
    let bend_rate = found.bend_rate_1_m2;
    let shown = units.curvature_rate(bend_rate.value);
    let bank = found.bank_left_rad.map(|bank| both(bank, &banked));
    let rate = |value: f64| units.rate(value);
    let rows = [
        ("radius", Some(radius)),
        ("height", Some(both(found.height_m, &|z| units.length(z)))),
        ("grade", Some(both(found.grade_rad, &degrees))),
        ("bank", bank),
        ("roll rate", Some(both(found.roll_rate_rad_m, &rate))),
        ("pitch rate", Some(both(found.pitch_rate_rad_m, &rate))),
        ("yaw rate", Some(both(found.yaw_rate_rad_m, &rate))),
        (
            "change of curvature",
            Some([shown, at(bend_rate), none(), none()]),
        ),
    ];
    for (name, cells) in rows {
        if let Some(cells) = cells {
            table.push([name.to_owned()].into_iter().chain(cells).collect());
        }
    }
    section("extremes", &["", "largest", "at", "smallest", "at"], &table)
}

fn banked(left_rad: f64) -> String {
    let shown = degrees(left_rad.abs());
    match shown.as_str() {
        "0.0 deg" => shown,
        _ if left_rad > 0.0 => format!("{shown} left"),
        _ => format!("{shown} right"),
    }
}

fn shape(audit: &Audit, units: Units) -> Vec<String> {
    let ends = &audit.ends;
    let bank = ends.bank_left_rad.map_or_else(String::new, |b| {
        format!(" and {} in bank", degrees(b.abs()))
    });
    let spacings = match ends.spacings {
        Some(spacings) if spacings < FEW => format!(" ({} median spacings)", times(spacings)),
        _ => String::new(),
    };
    let who = if audit.closed {
        "the last point and the first"
    } else {
        "the two ends"
    };
    let mut lines = vec![format!(
        "{who} lie {} apart{spacings}, {} in direction{bank}",
        units.length(ends.distance_m),
        degrees(ends.direction_rad)
    )];
    if ends.meet {
        lines.push("the ends meet: if this is a circuit, say `closed: true`".to_owned());
    }
    if let Some(corners) = audit.corners.filter(|c| c.count > 0) {
        let mut line = format!(
            "{} where the change of curvature or roll rate is sudden (no finding)",
            counted(corners.count, "place")
        );
        if let Some(e) = corners.bend_rate_1_m2 {
            line += &format!(
                ", most {} at {}",
                units.curvature_rate(e.value),
                units.station(e.station_m)
            );
        }
        lines.push(line);
    }
    lines
}

fn points(audit: &Audit, units: Units) -> Vec<String> {
    let (Some(points), Some(report)) = (&audit.points, &audit.fit) else {
        return Vec::new();
    };
    let mut lines = vec![table_line(points, units)];
    if !points.left_out.is_empty() {
        let rows: Vec<_> = points.left_out.iter().map(usize::to_string).collect();
        lines.push(format!("left out by `except`: row {}", rows.join(", ")));
    }
    lines.push(fit_line(report, units));
    if let Some(found_m) = audit.cross_validated_m {
        lines.push(format!(
            "cross-validation finds an error of {}",
            units.fine(found_m)
        ));
    }
    if report.method != FitMethod::Exact {
        let rms = units.fine(report.residual_rms_m);
        lines.push(format!(
            "residuals across the track: {rms} root mean square"
        ));
    }
    lines
}

fn table_line(points: &Points, units: Units) -> String {
    let spacing = points.spacing_m;
    format!(
        "{}, {} apart in the median, {} to {}",
        counted(points.count, "point"),
        units.fine(spacing.median),
        units.fine(spacing.least),
        units.fine(spacing.largest)
    )
}

fn fit_line(report: &FitReport, units: Units) -> String {
    let error = report.error_m.map(|e| units.fine(e));
    let roll = report
        .roll_error_rad
        .map_or_else(String::new, |r| format!(", roll {}", fine_degrees(r)));
    match (report.method, error) {
        (FitMethod::Exact, None) => {
            "interpolated; nothing is known of the points' error".to_owned()
        }
        (FitMethod::Exact, Some(error)) => {
            format!("interpolated; the points have an error of {error} per coordinate{roll}")
        }
        (FitMethod::Within, error) => {
            format!(
                "smoothed to the stated error of {} per coordinate{roll}",
                error.unwrap_or_default()
            )
        }
        (FitMethod::Grid, error) => format!(
            "smoothed to the rounding of the table's decimals, {} per coordinate{roll}",
            error.unwrap_or_default()
        ),
        (FitMethod::CrossValidated, error) => format!(
            "smoothed by cross-validation, which found an error of {} per coordinate{roll}",
            error.unwrap_or_default()
        ),
    }
}

fn rows(audit: &Audit, units: Units) -> String {
    let Some(report) = audit.fit.as_ref().filter(|f| f.method != FitMethod::Exact) else {
        return String::new();
    };
    let row = |outlier: &crate::spine::Outlier| {
        let (off, times) = (units.fine(outlier.residual_m), times(outlier.studentised));
        vec![outlier.row.to_string(), off, times]
    };
    let rows = report
        .worst
        .iter()
        .take(ROWS_SHOWN)
        .map(row)
        .collect::<Vec<_>>();
    let header = ["row", "off the curve", "times its error"];
    section(
        "rows farthest from the curve for their error",
        &header,
        &rows,
    )
}

fn noise(audit: &Audit, units: Units) -> Vec<String> {
    let Some(noise) = &audit.noise else {
        return Vec::new();
    };
    let mut lines = vec![
        format!(
            "what the points' error alone makes of v2/r/g at {}, two standard deviations",
            units.speed(noise.speed_m_s)
        ),
        format!("this spine: {}", floor(&noise.spine, units)),
        format!(
            "the same points interpolated: {}",
            floor(&noise.interpolated, units)
        ),
    ];
    lines.extend(remedy(noise, units));
    lines
}

fn floor(floor: &Floor, units: Units) -> String {
    format!(
        "median {}, largest {} at {}; above {} on {} of the track",
        noise_g(floor.median_g),
        noise_g(floor.largest_g.value),
        units.station(floor.largest_g.station_m),
        noise_g(WANTED_G),
        percent(floor.above)
    )
}

fn remedy(noise: &NoiseFloor, units: Units) -> Option<String> {
    if noise.spine.most_g <= WANTED_G {
        return None;
    }
    let goal = format!("under {} on 95% of the track", noise_g(WANTED_G));
    let Some(remedy) = noise.remedy else {
        return Some(format!(
            "{goal}: not by better points alone; look at the findings first"
        ));
    };
    let error = remedy
        .error_m
        .map(|e| format!("with points of about {} error", units.fine(e)));
    let law = match remedy.law {
        Law::Interpolated => {
            let error = error.map_or_else(String::new, |error| format!("{error}, or "));
            let law = "interpolated noise goes as error/spacing2";
            return Some(format!("{goal}: {error}by smoothing: `fit: auto` ({law})"));
        }
        Law::Measured { power } => format!(
            "noise goes as error^{}; measured by fitting this curve anew with a quarter of the error",
            times(power)
        ),
    };
    let spacing = remedy
        .spacing_m
        .map(|s| format!("with a point about every {}", units.fine(s)));
    let ways: Vec<String> = [error, spacing].into_iter().flatten().collect();
    Some(match ways.is_empty() {
        true => format!("{goal}: not even with a thousandth of the error ({law})"),
        false => format!("{goal}: {} ({law})", ways.join(", or ")),
    })
}
