"""Makes demo-tracks/saltglass/as-built.csv: what a survey of the eased Saltglass would have brought home.

The elements of eased.track.yaml are integrated here anew (Gauss-Legendre, NumPy), so that the table is also
a check from outside on the spine that Crestfall makes of them. Run: python3 as_built.py > as-built.csv
"""

import numpy as np

GAUGE_M = 1.1
ERROR_M = 0.002
SEED = 20260
# Data row and column whose digits were swapped when the figures were copied: the two of the centimetres and
# millimetres in that cell.
SLIP = (701, 5)

# name, length or ("r", radius), grade after, turn, bank after (left), ramp part or None for the smooth ease.
ELEMENTS = [
    ("crest", 12, 0, 0, 0, None),
    ("drop", ("r", 19), -54, 0, 0, None),
    ("pull-out", 48, 0, 0, 3, None),
    ("loop", 115, 398, 114, 3, None),
    ("camel", 34, 321, 0, 0, None),
    ("dive", 12, 321, 0, 0, None),
    ("valley", 42, 381, 0, 0, None),
    ("roll-in", 25, 381, 6, 66, None),
    ("over-bank", 46, 340, 142, 93, None),
    ("roll-out", 31, 340, 8, 0, None),
    ("dip", 32, 385, 0, 0, None),
    ("floater", 34, 356.5, 0, 0, None),
    ("trim-run", 9, 356.5, 0, 0, None),
    ("lean-in", 21, 356.5, 10, 52, None),
    ("helix", 82, 356.5, 332, 52, 0.15),
    ("lean-out", 22, 360, 12, 0, None),
    ("brakes", 47, 360, 0, 0, None),
]


def eased(x, ramp):
    """The part of a change that is done after the part x of an element."""
    if ramp is None:
        return x**3 * (10 + x * (-15 + 6 * x))
    middle = (x - ramp / 2) / (1 - ramp)
    begin = x**2 / (2 * ramp * (1 - ramp))
    end = 1 - (1 - x) ** 2 / (2 * ramp * (1 - ramp))
    return np.where(x < ramp, begin, np.where(x > 1 - ramp, end, middle))


def segments():
    """Begin, length, angles (heading, grade, bank) before and their changes, rad; and the ramp part."""
    station, angles = 0.0, np.zeros(3)
    for _, length, grade, turn, bank, ramp in ELEMENTS:
        after = np.array([angles[0] + np.radians(turn), np.radians(grade), np.radians(bank)])
        if isinstance(length, tuple):
            length = 15 / 8 * length[1] * abs(after[1] - angles[1])
        yield station, length, angles, after - angles, ramp
        station, angles = station + length, after


SEGMENTS = list(segments())
LENGTH_M = SEGMENTS[-1][0] + SEGMENTS[-1][1]


def angles_at(station):
    begins = np.array([s[0] for s in SEGMENTS])
    index = np.clip(np.searchsorted(begins, station, side="right") - 1, 0, len(SEGMENTS) - 1)
    begin, length, before, change, ramp = SEGMENTS[index]
    return before + change * eased(np.clip((station - begin) / length, 0, 1), ramp)


def tangent(station):
    heading, grade, _ = angles_at(station)
    return np.array([np.cos(heading) * np.cos(grade), np.sin(heading) * np.cos(grade), np.sin(grade)])


def left(station):
    heading, grade, bank = angles_at(station)
    level_left = np.array([-np.sin(heading), np.cos(heading), 0])
    level_up = np.cross(tangent(station), level_left)
    up = level_up * np.cos(bank) + level_left * np.sin(bank)
    return np.cross(up, tangent(station))


def centres(stations):
    """Positions: the tangent integrated between stations and element ends."""
    nodes, weights = np.polynomial.legendre.leggauss(12)
    ends = [s[0] for s in SEGMENTS[1:]]
    ramps = [b + l * f for b, l, _, _, r in SEGMENTS if r for f in (r, 1 - r)]
    cuts = np.unique(np.concatenate([stations, ends, ramps]))
    place, at = np.array([0.0, 0.0, 38.0]), {}
    at[cuts[0]] = place
    for a, b in zip(cuts, cuts[1:]):
        half = (b - a) / 2
        place = place + half * sum(w * tangent((a + b) / 2 + half * x) for x, w in zip(nodes, weights))
        at[b] = place
    return np.array([at[s] for s in stations])


def survey_stations(random):
    """From the first to the last metre, 0.3 m to 0.7 m apart."""
    stations = [0.0]
    while stations[-1] < LENGTH_M - 0.7:
        stations.append(stations[-1] + random.uniform(0.3, 0.7))
    return np.array(stations + [LENGTH_M])


def main():
    random = np.random.default_rng(SEED)
    stations = survey_stations(random)
    middle = centres(stations)
    across = np.array([left(s) for s in stations]) * GAUGE_M / 2
    rails = np.hstack([middle + across, middle - across])
    rails += ERROR_M * random.standard_normal(rails.shape)
    rows = [[f"{x:.3f}" for x in row] for row in rails]
    row, column = SLIP
    cell = rows[row - 1][column]
    rows[row - 1][column] = cell[:-2] + cell[-1] + cell[-2]
    print(HEAD.format(count=len(rows), right=cell, wrong=rows[row - 1][column], row=row))
    print("left_x_m,left_y_m,left_z_m,right_x_m,right_y_m,right_z_m")
    print("\n".join(",".join(cells) for cells in rows))


HEAD = """\
# Saltglass as built: both running rails as a survey gave them, {count} pairs of points in metres, to the millimetre;
# an invented ride.
# How it was made: the elements of eased.track.yaml were integrated by a program of their own
# (tests/demos/as_built.py), pairs of points were taken square to the track 0.3 m to 0.7 m apart, at random, and
# every coordinate got a Gaussian error of 2 mm (NumPy's default_rng, seed 20260). The rails are 1.1 m apart.
# In row {row} (of the rows of figures, from 1) the last two digits of right_z_m were then swapped: {wrong} for
# {right}. The track file leaves that row out."""

if __name__ == "__main__":
    main()
