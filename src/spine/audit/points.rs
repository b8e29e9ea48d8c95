//! The points of a table: how they are spaced, and where a spacing or a turn sticks out.

use nalgebra::Vector3;

use super::{Finding, FindingKind};
use crate::input::PointTable;
use crate::spine::fit::{self, Fitted};
use crate::spine::report::FitReport;

/// A spacing beyond this many medians of those around it is a gap.
const GAP: f64 = 3.0;

/// A spacing below this part of the median of those around it makes two points almost one.
const NEAR: f64 = 0.1;

/// A turn beyond this many times what the curvature around would make is a kink.
const KINK: f64 = 3.0;

/// Spacings on either side against which one is held.
const AROUND: usize = 4;

/// Turns below this say nothing, rad: 0.05 deg.
const LEAST_KINK_RAD: f64 = 0.000_873;

/// Standard deviations of a turn that the points' error may make of it.
const ERRORS: f64 = 5.0;

/// Standard deviation of a turn between equal chords over error/spacing: √(1 + 4 + 1).
const TURN_GAIN: f64 = 2.449_489_742_783_178;

/// What a table holds.
#[derive(Clone, Debug, PartialEq)]
pub struct Points {
    /// Points that were taken.
    pub count: usize,
    /// Rows that were left out by `except`, from 1.
    pub left_out: Vec<usize>,
    /// Distances of neighbours; on a closed track also from the last to the first.
    pub spacing_m: Spacing,
}

/// Distances of neighbours, m.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Spacing {
    /// The smallest.
    pub least: f64,
    /// As many are larger as are smaller.
    pub median: f64,
    /// The largest.
    pub largest: f64,
}

/// A table with the stations of its points.
pub(super) struct Survey<'a> {
    pub(super) table: &'a PointTable,
    pub(super) centre_m: Vec<Vector3<f64>>,
    pub(super) stations_m: Vec<f64>,
    /// From each point to the next; one fewer on an open track.
    spacings_m: Vec<f64>,
}

impl<'a> Survey<'a> {
    pub(super) fn new(table: &'a PointTable, fitted: &Fitted) -> Self {
        let centre_m = fit::centre_line(&table.columns);
        let n = centre_m.len();
        let count = if table.closed { n } else { n - 1 };
        let spacing = |i: usize| (centre_m[(i + 1) % n] - centre_m[i]).norm();
        Self {
            spacings_m: (0..count).map(spacing).collect(),
            stations_m: fitted.stations_of(&centre_m),
            centre_m,
            table,
        }
    }

    pub(super) fn summary(&self) -> Points {
        let least = self
            .spacings_m
            .iter()
            .copied()
            .fold(f64::INFINITY, f64::min);
        Points {
            count: self.table.len(),
            left_out: self.table.left_out.clone(),
            spacing_m: Spacing {
                least,
                median: self.median_m(),
                largest: self.spacings_m.iter().copied().fold(0.0, f64::max),
            },
        }
    }

    pub(super) fn median_m(&self) -> f64 {
        median(self.spacings_m.clone())
    }

    /// Distance of samples that miss nothing between points, m.
    pub(super) fn step_m(&self) -> f64 {
        (0.5 * self.median_m()).min(super::extremes::STEP_M)
    }

    /// Gaps, points almost on one another and kinks, given the points' error where it is known.
    pub(super) fn faults(&self, error_m: Option<f64>) -> Vec<Finding> {
        let spacings = (0..self.spacings_m.len()).filter_map(|i| self.spacing_fault(i));
        let kinks = (0..self.table.len()).filter_map(|i| self.kink(i, error_m));
        spacings.chain(kinks).collect()
    }

    /// Stretches without a point, far longer than the spacings around them.
    pub(super) fn gaps(&self) -> Vec<Finding> {
        let faults = (0..self.spacings_m.len()).filter_map(|i| self.spacing_fault(i));
        faults
            .filter(|fault| fault.kind == FindingKind::Gap)
            .collect()
    }

    /// The farthest from the curve, in order of their rows.
    pub(super) fn blunders(&self, report: &FitReport) -> Vec<Finding> {
        let finding = |o: &crate::spine::Outlier| {
            let own_m = o.residual_m / o.studentised;
            self.finding(FindingKind::Blunder, o.point, o.residual_m, own_m)
        };
        report.blunders.iter().map(finding).collect()
    }

    fn finding(&self, kind: FindingKind, point: usize, size: f64, against: f64) -> Finding {
        Finding {
            kind,
            row: Some(self.table.row_number(point)),
            station_m: Some(self.stations_m[point]),
            size: Some(size),
            against: Some(against),
        }
    }

    fn spacing_fault(&self, i: usize) -> Option<Finding> {
        let around =
            |side: isize| (1..=AROUND as isize).filter_map(move |k| self.spacing(i, side * k));
        let usual = median(around(-1).chain(around(1)).collect());
        let spacing = self.spacings_m[i];
        if spacing > GAP * usual {
            return Some(self.finding(FindingKind::Gap, i, spacing, usual));
        }
        let second = (i + 1) % self.table.len();
        let near = || self.finding(FindingKind::NearDuplicate, second, spacing, usual);
        (spacing < NEAR * usual).then(near)
    }

    /// The spacing `by` places on, round the seam of a closed track.
    fn spacing(&self, i: usize, by: isize) -> Option<f64> {
        let index = self.moved(i, by, self.spacings_m.len())?;
        Some(self.spacings_m[index])
    }

    fn moved(&self, i: usize, by: isize, count: usize) -> Option<usize> {
        let (moved, count) = (i as isize + by, count as isize);
        if self.table.closed {
            return Some(moved.rem_euclid(count) as usize);
        }
        (0..count).contains(&moved).then_some(moved as usize)
    }

    fn kink(&self, i: usize, error_m: Option<f64>) -> Option<Finding> {
        let (turn, width_m, shortest_m) = self.turn(i)?;
        let noise = error_m.map_or(0.0, |error_m| ERRORS * TURN_GAIN * error_m / shortest_m);
        if turn <= noise.max(LEAST_KINK_RAD) {
            return None;
        }
        let curvature = |by: isize| {
            let (turn, width_m, _) = self.turn(self.moved(i, by, self.table.len())?)?;
            Some(turn / width_m)
        };
        let around = [-5, -4, -3, -2, 2, 3, 4, 5]
            .into_iter()
            .filter_map(curvature);
        let usual = width_m * around.fold(0.0, f64::max);
        (turn > KINK * usual).then(|| self.finding(FindingKind::Kink, i, turn, usual))
    }

    /// Turn between the chords before and after a point, rad; their mean and the shorter, m.
    fn turn(&self, i: usize) -> Option<(f64, f64, f64)> {
        let n = self.table.len();
        let (before, after) = (self.moved(i, -1, n)?, self.moved(i, 1, n)?);
        let behind = self.centre_m[i] - self.centre_m[before];
        let ahead = self.centre_m[after] - self.centre_m[i];
        let (a, b) = (behind.norm(), ahead.norm());
        Some((behind.angle(&ahead), 0.5 * (a + b), a.min(b)))
    }
}

/// The middle value; of an even number the mean of the two.
pub(super) fn median(mut values: Vec<f64>) -> f64 {
    values.sort_by(f64::total_cmp);
    let n = values.len();
    if n == 0 {
        return f64::NAN;
    }
    0.5 * (values[(n - 1) / 2] + values[n / 2])
}
