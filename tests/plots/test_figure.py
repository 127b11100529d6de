"""The neutral description of a figure: thinning keeps what matters, marks do not cover each other."""

from __future__ import annotations

import csv
import io

import numpy as np
import pytest

from axis.plots.figure import LONGEST_TRACE, Figure, Scale, VerticalMark, as_csv, decimated, line, staggered


@pytest.mark.parametrize("count", [LONGEST_TRACE + 1, 7_919, 100_003])
def test_thinning_keeps_peaks_ends_and_order(count: int) -> None:
    random = np.random.default_rng(3)
    x = np.sort(random.uniform(size=count))
    y = random.normal(size=count)
    spikes = np.linspace(1, count - 2, 41).astype(int)  # further apart than a bin, up and down
    y[spikes] = 50.0 * (-1.0) ** np.arange(len(spikes))
    kept_x, kept_y = decimated(x, y)
    assert len(kept_x) == len(kept_y) <= LONGEST_TRACE
    assert np.all(np.diff(kept_x) > 0.0)
    assert (kept_x[0], kept_y[0], kept_x[-1], kept_y[-1]) == (x[0], y[0], x[-1], y[-1])
    assert set(x[spikes]) <= set(kept_x)
    assert np.array_equal(np.interp(kept_x, x, y), kept_y)


def test_a_short_trace_is_left_alone() -> None:
    x = np.arange(LONGEST_TRACE, dtype=np.float64)
    assert decimated(x, x)[0] is x


def test_every_mark_has_a_row_and_a_later_one_a_lower_row() -> None:
    marks = [VerticalMark(name, x, "command") for name, x in (("a", 3.0), ("b", -1.0), ("c", 3.0), ("d", 2.0))]
    placed = staggered(marks)
    assert sorted(mark.row for mark in placed) == [0, 1, 2, 3]
    by_time = sorted(placed, key=lambda mark: (mark.x, -mark.row))
    assert [mark.row for mark in by_time] == [3, 2, 1, 0]


def test_the_drawn_data_can_be_taken_along() -> None:
    scale = Scale("time", "ms", 0.0, 1.0)
    x = np.array([0.0, 0.1, 0.2])
    figure = Figure("t", "w", scale, Scale("error", "µm", -1.0, 1.0), (line("a, b", x, x**2, "worst"),))
    rows = list(csv.reader(io.StringIO(as_csv(figure))))
    assert rows[0] == ["trace", "time [ms]", "error [µm]"]
    assert [(name, float(a), float(b)) for name, a, b in rows[1:]] == [("a, b", v, v**2) for v in x.tolist()]
