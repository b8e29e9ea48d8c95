//! The time history of one seat as comma-separated values: one line of names, then one line a sample.

use std::io;

use super::number::plain;
use crate::study::SeatRecord;

/// Columns that every record has.
const COLUMNS: [&str; 11] = [
    "t_s",
    "train_station_m",
    "station_m",
    "speed_m_s",
    "accel_m_s2",
    "x_m",
    "y_m",
    "z_m",
    "felt_x_g",
    "felt_y_g",
    "felt_z_g",
];

/// Writes a seat's record; `filtered_<n>_…` count the distinct filters from 1, with their delay in them.
///
/// # Errors
/// Those of the writer.
pub fn write_record(record: &SeatRecord<'_>, out: impl io::Write) -> io::Result<()> {
    let mut table = csv::Writer::from_writer(out);
    table.write_record(header(record.filtered_g.len()))?;
    for sample in 0..record.samples.speed_m_s.len() {
        table.write_record(row(record, sample).map(plain))?;
    }
    table.flush()
}

fn header(filters: usize) -> impl Iterator<Item = String> {
    let filtered =
        (1..=filters).flat_map(|n| ["x", "y", "z"].map(|a| format!("filtered_{n}_{a}_g")));
    COLUMNS.into_iter().map(str::to_owned).chain(filtered)
}

fn row<'a>(record: &'a SeatRecord<'_>, sample: usize) -> impl Iterator<Item = f64> + 'a {
    let run = record.samples;
    let position_m = record.position_m[sample];
    let of_run = [
        sample as f64 / run.rate_hz,
        run.train_station_m[sample],
        record.station_m[sample],
        run.speed_m_s[sample],
        run.acceleration_m_s2[sample],
        position_m.x,
        position_m.y,
        position_m.z,
    ];
    let loads_g = std::iter::once(record.felt_g).chain(&record.filtered_g);
    let loads_g = loads_g.flat_map(move |axes_g| axes_g.each_ref().map(|axis_g| axis_g[sample]));
    of_run.into_iter().chain(loads_g)
}
