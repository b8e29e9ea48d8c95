//! The header of a table of points: which columns there are, where, and in what unit.

use std::f64::consts::PI;
use std::ops::Range;

use crate::input::decode::{listed, nearest};
use crate::input::point_file::{Cell, Table};

/// The column of each point's standard deviation per coordinate.
const ERROR_COLUMN: &str = "error_mm";

/// Metres in a foot, exact: NIST SP 811 (2008), appendix B.8.
const FOOT_M: f64 = 0.3048;

/// What columns there are, and what stands in them.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Layout {
    Bank,
    Up,
    Rails,
}

impl Layout {
    /// Column names, `L` standing for the unit of length.
    fn names(self) -> &'static [&'static str] {
        match self {
            Self::Bank => &["x_L", "y_L", "z_L", "bank_left_deg"],
            Self::Up => &["x_L", "y_L", "z_L", "up_x", "up_y", "up_z"],
            Self::Rails => &[
                "left_x_L",
                "left_y_L",
                "left_z_L",
                "right_x_L",
                "right_y_L",
                "right_z_L",
            ],
        }
    }

    /// What a column's name begins with where the layout is this one.
    fn is_in(self, columns: &[Cell<'_>]) -> bool {
        let begins = |start: &str| columns.iter().any(|cell| cell.text.starts_with(start));
        match self {
            Self::Bank => begins("bank_"),
            Self::Up => begins("up_"),
            Self::Rails => begins("left_") || begins("right_"),
        }
    }
}

/// Where a layout's columns stand, and the factor to m (or rad, or 1).
pub(super) struct Header {
    pub(super) layout: Layout,
    pub(super) columns: Vec<(usize, f64)>,
    /// Where each point's own error stands.
    pub(super) error: Option<usize>,
    pub(super) width: usize,
}

impl Table<'_> {
    /// Reads the line that names the columns.
    pub(super) fn header(&mut self, line: &Range<usize>) -> Option<Header> {
        let cells = self.cells(line);
        if let Some(instead) = no_header(&cells) {
            let mistake = self.mistake(
                line.clone(),
                format!("found {instead}, expected a header that names the columns"),
            );
            self.push(mistake.hint("a header reads, for instance, `x_m,y_m,z_m,bank_left_deg`"));
            return None;
        }
        let layouts = [Layout::Bank, Layout::Up, Layout::Rails];
        let present: Vec<Layout> = layouts
            .into_iter()
            .filter(|layout| layout.is_in(&cells))
            .collect();
        let layout = match present[..] {
            [layout] => layout,
            [] => {
                let mistake = self.mistake(line.clone(), "no column says how the track is banked");
                self.push(mistake.hint(
                    "beside `x_m,y_m,z_m` give `bank_left_deg` or `up_x,up_y,up_z`; or give both rails, `left_x_m` to `right_z_m`",
                ));
                return None;
            }
            _ => {
                self.error(
                    line.clone(),
                    "found more than one of bank, up vector and rails, expected one of them",
                );
                return None;
            }
        };
        let before = self.found.len();
        self.refuse_columns(&cells, layout);
        // All are looked for before the first missing one ends it.
        let columns: Vec<_> = layout
            .names()
            .iter()
            .map(|name| self.column(name, &cells, line))
            .collect();
        if self.found.len() > before {
            return None;
        }
        Some(Header {
            layout,
            columns: columns.into_iter().collect::<Option<_>>()?,
            error: cells.iter().position(|cell| cell.text == ERROR_COLUMN),
            width: cells.len(),
        })
    }

    /// Columns that are unknown or stand twice.
    fn refuse_columns(&mut self, cells: &[Cell<'_>], layout: Layout) {
        let metric: Vec<String> = layout
            .names()
            .iter()
            .map(|name| name.replace('L', "m"))
            .collect();
        for (index, cell) in cells.iter().enumerate() {
            let span = cell.span.clone();
            let is_known = layout
                .names()
                .iter()
                .any(|name| factor(name, cell.text).is_some());
            if !is_known && cell.text != ERROR_COLUMN {
                let hint = match nearest(cell.text, metric.iter().map(String::as_str)) {
                    Some(near) => format!("did you mean `{near}`?"),
                    None => format!(
                        "the columns are {}",
                        listed(metric.iter().map(String::as_str))
                    ),
                };
                let mistake = self.mistake(span, format!("unknown column `{}`", cell.text));
                self.push(mistake.hint(hint));
            } else if cells[..index].iter().any(|other| other.text == cell.text) {
                self.error(span, format!("the column `{}` is given twice", cell.text));
            }
        }
    }

    /// The place of one column and its factor.
    fn column(
        &mut self,
        name: &str,
        cells: &[Cell<'_>],
        line: &Range<usize>,
    ) -> Option<(usize, f64)> {
        let mut fits = cells
            .iter()
            .enumerate()
            .filter_map(|(index, cell)| Some((index, factor(name, cell.text)?)));
        let first = fits.next();
        let second = fits.next();
        match (first, second) {
            (None, _) => {
                let name = name.replace('L', "m");
                self.error(line.clone(), format!("missing column `{name}`"));
                None
            }
            (Some(_), Some((index, _))) if cells[index].text != cells[first?.0].text => {
                let cell = &cells[index];
                let message = format!(
                    "`{}` and `{}` are one column in two units",
                    cells[first?.0].text, cell.text
                );
                self.error(cell.span.clone(), message);
                None
            }
            (Some(found), _) => Some(found),
        }
    }
}

/// What a first line is when it cannot be a header.
fn no_header(cells: &[Cell<'_>]) -> Option<&'static str> {
    if cells.iter().all(|cell| cell.text.parse::<f64>().is_ok()) {
        return Some("numbers alone");
    }
    (cells.len() == 1).then_some("no comma")
}

/// The factor to m, rad or 1, if `written` is the column `name`.
fn factor(name: &str, written: &str) -> Option<f64> {
    match name.strip_suffix('L') {
        Some(stem) => match written.strip_prefix(stem)? {
            "m" => Some(1.0),
            "ft" => Some(FOOT_M),
            _ => None,
        },
        None if name != written => None,
        None if name.ends_with("_deg") => Some(PI / 180.0),
        None => Some(1.0),
    }
}
