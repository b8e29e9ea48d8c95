//! A table of points along a track.

use std::ops::Range;
use std::sync::Arc;

use nalgebra::Vector3;

use crate::diagnostic::{Place, Source};

/// Points in order of travel, as a CAD system or a survey gives them.
#[derive(Clone, Debug)]
pub struct PointTable {
    /// Positions and attitude, m and rad, all of one length.
    pub columns: Columns,
    /// Whether the last point is followed by the first.
    pub closed: bool,
    /// How the curve is laid through them.
    pub fit: Fit,
    /// Standard deviation of each point, per coordinate, m, where the table states it.
    pub errors_m: Option<Vec<f64>>,
    /// The decimal grids on which the table's numbers sit.
    pub grids: Grids,
    /// Rows of the table that are left out, from 1, increasing.
    pub left_out: Vec<usize>,
    /// The `points` entry of the track file.
    pub place: Place,
    /// Bytes and number (from 1, excepted rows counted) of each row.
    rows: Vec<Row>,
    /// The text of the table.
    source: Arc<Source>,
}

/// Where a point stands in its table.
#[derive(Clone, Debug)]
pub(in crate::input) struct Row {
    /// From 1, excepted rows counted.
    pub(in crate::input) number: usize,
    /// Its bytes.
    pub(in crate::input) span: Range<usize>,
}

/// Decimal grids: the last digit that any number of a column set has.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Grids {
    /// Of coordinates, m.
    pub position_m: Option<f64>,
    /// Of banks, rad, or of up vectors' components.
    pub attitude: Option<f64>,
}

impl PointTable {
    /// A table that was read from no file: every row's place is `place`.
    pub fn new(columns: Columns, closed: bool, fit: Fit, place: Place) -> Self {
        let rows = (1..=columns.len()).map(|number| Row {
            number,
            span: place.span.clone(),
        });
        let (rows, source) = (rows.collect(), Arc::clone(&place.source));
        let (errors_m, grids) = (None, Grids::default());
        Self {
            columns,
            closed,
            fit,
            errors_m,
            grids,
            left_out: Vec::new(),
            place,
            rows,
            source,
        }
    }

    /// The same, read from the rows of a text.
    pub(in crate::input) fn with_rows(self, source: Arc<Source>, rows: Vec<Row>) -> Self {
        Self {
            source,
            rows,
            ..self
        }
    }

    /// Number of points.
    pub fn len(&self) -> usize {
        self.rows.len()
    }

    /// Whether there are none.
    pub fn is_empty(&self) -> bool {
        self.rows.is_empty()
    }

    /// Number of the row of point `point` (from 0) in the table, from 1.
    pub fn row_number(&self, point: usize) -> usize {
        self.rows[point].number
    }

    /// The line of point `point` (from 0).
    pub fn row_place(&self, point: usize) -> Place {
        Place {
            source: Arc::clone(&self.source),
            span: self.rows[point].span.clone(),
        }
    }
}

impl Columns {
    /// Number of points.
    pub fn len(&self) -> usize {
        match self {
            Self::Bank { centre_m, .. } | Self::Up { centre_m, .. } => centre_m.len(),
            Self::Rails { left_m, .. } => left_m.len(),
        }
    }

    /// Whether there are none.
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }
}

/// The three column sets.
#[derive(Clone, Debug)]
pub enum Columns {
    /// Centre line and bank to the left.
    Bank {
        /// Centre line, m.
        centre_m: Vec<Vector3<f64>>,
        /// Bank to the left, rad, as written (not yet unwrapped).
        bank_left_rad: Vec<f64>,
    },
    /// Centre line and an up vector of any length above 0.
    Up {
        /// Centre line, m.
        centre_m: Vec<Vector3<f64>>,
        /// Up vector, not normalised.
        up: Vec<Vector3<f64>>,
    },
    /// The two rails.
    Rails {
        /// Left rail, m.
        left_m: Vec<Vector3<f64>>,
        /// Right rail, m.
        right_m: Vec<Vector3<f64>>,
    },
}

/// How a curve is laid through points.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Fit {
    /// Through every point.
    Exact,
    /// The smoothest curve that honours these standard deviations per coordinate.
    Within {
        /// Of a point (of each rail where the rails are given), m.
        error_m: f64,
        /// Of the bank or of the up vector's direction, rad, where stated.
        bank_error_rad: Option<f64>,
    },
    /// The smoothest curve that honours the errors stated point by point.
    Stated,
    /// The smoothest curve, with the error found.
    Auto,
}
