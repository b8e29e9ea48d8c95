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
    /// The `points` entry of the track file.
    pub place: Place,
    /// The text of the table.
    pub(crate) source: Arc<Source>,
    /// Bytes of each row.
    pub(crate) rows: Vec<Range<usize>>,
}

impl PointTable {
    /// A table that was read from no file: every row's place is `place`.
    pub fn new(columns: Columns, closed: bool, fit: Fit, place: Place) -> Self {
        Self {
            closed,
            fit,
            source: Arc::clone(&place.source),
            rows: vec![place.span.clone(); columns.len()],
            columns,
            place,
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

    /// The line of point `row` (from 0).
    pub fn row_place(&self, row: usize) -> Place {
        Place {
            source: Arc::clone(&self.source),
            span: self.rows[row].clone(),
        }
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

impl Columns {
    /// Number of points.
    fn len(&self) -> usize {
        match self {
            Self::Bank { centre_m, .. } | Self::Up { centre_m, .. } => centre_m.len(),
            Self::Rails { left_m, .. } => left_m.len(),
        }
    }
}

/// How a curve is laid through points.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Fit {
    /// Through every point.
    Exact,
}
