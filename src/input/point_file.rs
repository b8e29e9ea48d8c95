//! Reads a table of points: a header that names columns and units, then a point a line.
//!
//! Quotes are refused, so that a line is split at its commas and every value knows its place.

use std::ops::Range;
use std::sync::Arc;

use nalgebra::Vector3;

use crate::diagnostic::{Diagnostic, Place, Source};
use crate::input::files::{Files, Named};
use crate::input::point_header::{Header, Layout};
use crate::input::text::TABLE_BYTES;
use crate::input::{Columns, Fit, PointTable};

/// Fewest points through which a quintic spline is laid.
const FEWEST: usize = 6;
/// Most points that are read: 50 km at 0.25 m.
const MOST: usize = 200_000;
/// Mistakes of one table that are shown.
const SHOWN: usize = 20;

/// What a track file says of its table.
pub(super) struct Request {
    pub(super) named: Named,
    pub(super) closed: bool,
    /// The `points` entry.
    pub(super) place: Place,
}

/// The table, if it could be read whole.
pub(super) fn read(
    request: Request,
    files: &mut Files,
    found: &mut Vec<Diagnostic>,
) -> Option<PointTable> {
    let source = files.read(&request.named, TABLE_BYTES);
    let source = source.map_err(|diagnostic| found.push(diagnostic)).ok()?;
    let mut table = Table {
        source: &source,
        found: Vec::new(),
        left_out: 0,
    };
    let read = table.read();
    let Table {
        found: own,
        left_out,
        ..
    } = table;
    let whole = own.is_empty();
    found.extend(own);
    if left_out > 0 {
        let message = format!(
            "{left_out} more mistakes in `{}` are not shown",
            source.name
        );
        found.push(Diagnostic::error(message).at(&request.place));
    }
    let (columns, rows) = read.filter(|_| whole)?;
    Some(PointTable {
        columns,
        closed: request.closed,
        fit: Fit::Exact,
        place: request.place,
        source: Arc::clone(&source),
        rows,
    })
}

/// One value of a line.
#[derive(Clone, Debug)]
pub(super) struct Cell<'a> {
    pub(super) text: &'a str,
    pub(super) span: Range<usize>,
}

/// A table being read.
pub(super) struct Table<'a> {
    source: &'a Arc<Source>,
    pub(super) found: Vec<Diagnostic>,
    left_out: usize,
}

impl<'a> Table<'a> {
    fn read(&mut self) -> Option<(Columns, Vec<Range<usize>>)> {
        if let Some(quote) = self.source.text.find('"') {
            self.error(
                quote..quote + 1,
                "found a quote, expected plain numbers with commas",
            );
            return None;
        }
        let lines = self.lines();
        let Some((first, rest)) = lines.split_first() else {
            self.error(0..0, "the table holds nothing but comments");
            return None;
        };
        let header = self.header(first)?;
        if rest.len() > MOST {
            let message = format!("found {} points, expected at most {MOST}", rest.len());
            self.error(first.clone(), message);
            return None;
        }
        let (mut rows, mut values) = (Vec::new(), Vec::new());
        for line in rest {
            if let Some(row) = self.row(line, &header) {
                rows.push(line.clone());
                values.push(row);
            }
        }
        if !self.found.is_empty() {
            return None;
        }
        self.check_points(header.layout, &values, &rows);
        if rows.len() < FEWEST {
            let message = format!("found {} points, expected at least {FEWEST}", rows.len());
            self.error(first.clone(), message);
        }
        Some((columns(header.layout, &values), rows))
    }

    /// Lines that are neither blank nor comments, without their ends.
    fn lines(&self) -> Vec<Range<usize>> {
        let mut start = 0;
        let mut lines = Vec::new();
        for line in self.source.text.split_inclusive('\n') {
            let text = line.trim_end();
            if !text.is_empty() && !text.starts_with('#') {
                lines.push(start..start + text.len());
            }
            start += line.len();
        }
        lines
    }

    pub(super) fn cells(&self, line: &Range<usize>) -> Vec<Cell<'a>> {
        let source: &'a Source = self.source;
        let mut start = line.start;
        let mut cells = Vec::new();
        for part in source.text[line.clone()].split(',') {
            let text = part.trim();
            let lead = part.len() - part.trim_start().len();
            cells.push(Cell {
                text,
                span: start + lead..start + lead + text.len(),
            });
            start += part.len() + 1;
        }
        cells
    }

    /// The values of one line, in the layout's order.
    fn row(&mut self, line: &Range<usize>, header: &Header) -> Option<Vec<f64>> {
        let cells = self.cells(line);
        if cells.len() != header.width {
            let message = format!("found {} values, expected {}", cells.len(), header.width);
            self.error(line.clone(), message);
            return None;
        }
        let mut values = Vec::with_capacity(header.columns.len());
        for &(index, factor) in &header.columns {
            values.extend(self.number(&cells[index]).map(|number| number * factor));
        }
        (values.len() == header.columns.len()).then_some(values)
    }

    fn number(&mut self, cell: &Cell<'_>) -> Option<f64> {
        match cell.text.parse::<f64>() {
            Ok(value) if value.is_finite() => Some(value),
            Ok(_) => {
                self.error(
                    cell.span.clone(),
                    format!("`{}` is not a finite number, expected one", cell.text),
                );
                None
            }
            Err(_) => {
                let found = match cell.text {
                    "" => "nothing".to_owned(),
                    text => format!("`{text}`"),
                };
                self.error(
                    cell.span.clone(),
                    format!("found {found}, expected a number"),
                );
                None
            }
        }
    }

    fn check_points(&mut self, layout: Layout, values: &[Vec<f64>], rows: &[Range<usize>]) {
        for (row, line) in values.iter().zip(rows) {
            if layout == Layout::Up && row[3..] == [0.0, 0.0, 0.0] {
                self.error(line.clone(), "the up vector is 0, expected a direction");
            }
            if layout == Layout::Rails && row[..3] == row[3..] {
                self.error(
                    line.clone(),
                    "both rails are at one point, expected some gauge",
                );
            }
        }
        let place_of = |row: &[f64]| match layout {
            Layout::Rails => [0, 1, 2].map(|axis| row[axis] + row[axis + 3]),
            _ => [row[0], row[1], row[2]],
        };
        for (index, pair) in values.windows(2).enumerate() {
            if place_of(&pair[0]) == place_of(&pair[1]) {
                let mistake = self
                    .mistake(
                        rows[index + 1].clone(),
                        "this point is the one before it again",
                    )
                    .also(&self.place(rows[index].clone()), "the one before");
                self.push(mistake.hint("take one of the two lines out"));
            }
        }
    }

    fn place(&self, span: Range<usize>) -> Place {
        Place {
            source: Arc::clone(self.source),
            span,
        }
    }

    pub(super) fn mistake(&self, span: Range<usize>, message: impl Into<String>) -> Diagnostic {
        Diagnostic::error(message).at(&self.place(span))
    }

    pub(super) fn error(&mut self, span: Range<usize>, message: impl Into<String>) {
        let mistake = self.mistake(span, message);
        self.push(mistake);
    }

    pub(super) fn push(&mut self, mistake: Diagnostic) {
        match self.found.len() < SHOWN {
            true => self.found.push(mistake),
            false => self.left_out += 1,
        }
    }
}

fn columns(layout: Layout, values: &[Vec<f64>]) -> Columns {
    let vector = |from: usize| -> Vec<Vector3<f64>> {
        let rows = values.iter();
        rows.map(|row| Vector3::new(row[from], row[from + 1], row[from + 2]))
            .collect()
    };
    match layout {
        Layout::Bank => Columns::Bank {
            centre_m: vector(0),
            bank_left_rad: values.iter().map(|row| row[3]).collect(),
        },
        Layout::Up => Columns::Up {
            centre_m: vector(0),
            up: vector(3),
        },
        Layout::Rails => Columns::Rails {
            left_m: vector(0),
            right_m: vector(3),
        },
    }
}
