//! What the columns and signs mean, for who reads a result for the first time.

use super::entry::Entry;
use super::layout::list;

/// Directions as in ISO 8727; a positive load is one that the seat gives in the direction of the axis.
const AXES: &str = "Loads are those felt in the seat, filtered as the envelope says, on the rider's axes: +x is \
pushed forward by the back rest, +y pushed to the left by the side of the seat, +z pressed into the seat. \
Upright and at rest with gravity included, z is +1 g.";

const COLUMNS: &str = "`of limit` is the load over its limit: 1 is the limit, and ± is the band of what is uncertain. \
`load` is what is held throughout `for`, not the peak. `at` is the station of the seat along the spine, midway between \
the axles of its car.";

pub(super) fn how_to_read(entries: &[Entry<'_>]) -> String {
    let felt = entries.iter().any(Entry::is_felt);
    let items = [AXES, COLUMNS].into_iter().filter(|_| felt);
    list("how to read this", items.map(str::to_owned))
}
