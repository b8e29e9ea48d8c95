//! Reads a table of points: a header that names columns and units, then a point a line.
//!
//! Quotes are refused, so that a line is split at its commas and every value knows its place.

use std::ops::Range;
use std::sync::Arc;

use nalgebra::Vector3;

use crate::diagnostic::{Diagnostic, Place, Source};
use crate::input::files::{Files, Named};
use crate::input::point_header::{Header, Layout};
use crate::input::points::Row;
use crate::input::text::TABLE_BYTES;
use crate::input::{Columns, Fit, Grids, PointTable};

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
    pub(super) fit: Fit,
    /// Rows to leave out, each with its place.
    pub(super) except: Vec<(u64, Place)>,
}

/// A table that was read.
struct Read {
    columns: Columns,
    rows: Vec<Row>,
    errors_m: Option<Vec<f64>>,
    grids: Grids,
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
        digits: [Digits::default(); 2],
    };
    let read = table.read(&request);
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
    let read = read.filter(|_| whole)?;
    let fit = stated_fit(&request, &read, found)?;
    let mut table = PointTable::new(read.columns, request.closed, fit, request.place);
    let left_out = request.except.iter().map(|(row, _)| *row as usize);
    table.left_out = left_out.collect();
    table.left_out.sort_unstable();
    table.left_out.dedup();
    table.errors_m = read.errors_m;
    table.grids = read.grids;
    Some(table.with_rows(Arc::clone(&source), read.rows))
}

/// The fit, with the errors of the table where it has them.
fn stated_fit(request: &Request, read: &Read, found: &mut Vec<Diagnostic>) -> Option<Fit> {
    match (request.fit, &read.errors_m) {
        (fit, None) => Some(fit),
        (Fit::Auto | Fit::Stated, Some(_)) => Some(Fit::Stated),
        (Fit::Exact | Fit::Within { .. }, Some(_)) => {
            let mistake = Diagnostic::error(
                "the table states each point's error in `error_mm`, and `fit` does not go by it",
            );
            found.push(
                mistake.at(&request.place).hint(
                    "write `fit: auto` to take the errors of the table, or take the column out",
                ),
            );
            None
        }
    }
}

/// Decimals that numbers are written with.
#[derive(Clone, Copy, Debug, Default)]
struct Digits {
    most: u32,
    /// Some number is written with an exponent.
    floating: bool,
}

impl Digits {
    fn see(&mut self, text: &str) {
        self.floating |= text.contains(['e', 'E']);
        let decimals = text
            .split_once('.')
            .map_or(0, |(_, decimals)| decimals.len());
        self.most = self.most.max(decimals as u32);
    }

    /// The last digit, in the unit that `factor` turns into SI; none where the numbers sit on no grid.
    fn grid(self, factor: f64) -> Option<f64> {
        let fine = self.most <= FINEST_GRID;
        (!self.floating && fine).then(|| factor * 0.1f64.powi(self.most as i32))
    }
}

/// Decimals beyond which the last digit says nothing of how a table was made.
const FINEST_GRID: u32 = 14;

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
    /// Of coordinates, and of what gives the attitude beside them.
    digits: [Digits; 2],
}

impl<'a> Table<'a> {
    fn read(&mut self, request: &Request) -> Option<Read> {
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
        self.check_except(request, rest.len());
        let (mut rows, mut values) = (Vec::new(), Vec::new());
        for (number, line) in (1..).zip(rest) {
            if request.except.iter().any(|(row, _)| *row == number as u64) {
                continue;
            }
            if let Some(row) = self.row(line, &header) {
                let span = line.clone();
                rows.push(Row { number, span });
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
        let stated = header.columns.len();
        let error_m = |row: &Vec<f64>| row[stated] * 1e-3;
        let errors_m = header.error.map(|_| values.iter().map(error_m).collect());
        let (columns, grids) = (
            columns(header.layout, &values),
            self.grids(&header, &values),
        );
        Some(Read {
            columns,
            rows,
            errors_m,
            grids,
        })
    }

    /// The grids of the numbers, in SI. The mean of two rails is no coarser than each; an attitude
    /// that never changes is a design value, not a rounded one.
    fn grids(&self, header: &Header, values: &[Vec<f64>]) -> Grids {
        let [position, attitude] = self.digits;
        let constant = values.windows(2).all(|pair| pair[0][3..] == pair[1][3..]);
        Grids {
            position_m: position.grid(header.columns[0].1),
            attitude: match header.layout {
                Layout::Bank | Layout::Up if !constant => attitude.grid(header.columns[3].1),
                Layout::Rails | Layout::Bank | Layout::Up => None,
            },
        }
    }

    /// Rows to leave out that the table does not have.
    fn check_except(&mut self, request: &Request, count: usize) {
        for (row, place) in &request.except {
            if *row == 0 || *row > count as u64 {
                let message =
                    format!("there is no row {row} to leave out, the table has rows 1 to {count}");
                self.push(Diagnostic::error(message).at(place));
            }
        }
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
        let mut values = Vec::with_capacity(header.columns.len() + 1);
        for (place, &(index, factor)) in header.columns.iter().enumerate() {
            let beside = usize::from(place >= 3 && header.layout != Layout::Rails);
            self.digits[beside].see(cells[index].text);
            values.extend(self.number(&cells[index]).map(|number| number * factor));
        }
        if let Some(index) = header.error {
            values.extend(self.stated_error(&cells[index]));
        }
        let expected = header.columns.len() + usize::from(header.error.is_some());
        (values.len() == expected).then_some(values)
    }

    fn stated_error(&mut self, cell: &Cell<'_>) -> Option<f64> {
        let error_mm = self.number(cell)?;
        if error_mm <= 0.0 {
            let found = format!(
                "found an error of {} mm, expected one above 0 mm",
                cell.text
            );
            self.error(cell.span.clone(), found);
        }
        Some(error_mm)
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

    fn check_points(&mut self, layout: Layout, values: &[Vec<f64>], rows: &[Row]) {
        for (row, line) in values.iter().zip(rows.iter().map(|row| &row.span)) {
            if layout == Layout::Up && row[3..6] == [0.0, 0.0, 0.0] {
                self.error(line.clone(), "the up vector is 0, expected a direction");
            }
            if layout == Layout::Rails && row[..3] == row[3..6] {
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
                        rows[index + 1].span.clone(),
                        "this point is the one before it again",
                    )
                    .also(&self.place(rows[index].span.clone()), "the one before");
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
