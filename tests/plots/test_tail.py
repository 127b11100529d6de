"""The tail of a move: what is drawn follows from the record, in the units of the window."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from axis.plots.figure import LONGEST_TRACE, Figure
from axis.plots.tail import tail
from tests.sheet.sample import NEVER, NOMINAL, WORST, settled, study, trace

STUDY = study()
MOVES = settled(STUDY.axis).moves


def _tail(number: int) -> Figure:
    return tail(STUDY.axis, MOVES[number - 1], trace(amplitude=120e-6), trace())


def test_it_names_every_instant() -> None:
    marks = {mark.name: mark.x for mark in _tail(1).marks}
    # From the record: 31.2 ms and 44.7 ms after the commanded end; 45 ms is settle_within of the file.
    assert marks == pytest.approx(
        {
            "commanded end": 0.0,
            "load settled, worst: 31.2 ms": 31.2,
            "in-position signal, worst: 44.7 ms": 44.7,
            "allowed: 45 ms": 45.0,
        }
    )


def test_the_window_is_a_band_at_its_own_scale() -> None:
    figure = _tail(1)
    (band,) = figure.bands
    assert (band.low, band.high, band.name) == (-25.0, 25.0, "window ±25 µm")
    assert figure.y.unit == "µm"
    assert 2.0 * 25.0 <= figure.y.high <= 6.0 * 25.0
    assert figure.x.low < 0.0 < 45.0 < figure.x.high


def test_lines_are_the_load_against_its_target_in_micrometres() -> None:
    worst, nominal = _tail(1).lines
    assert (worst.name, nominal.name) == ("worst corner", "nominal axis")
    assert worst.stroke != nominal.stroke
    for one, amplitude in ((worst, 300.0), (nominal, 120.0)):
        after = one.x > 0.0
        expected = amplitude * np.exp(-one.x / 12.0) * np.sin(2.0 * np.pi * 0.045 * one.x)  # as made in sample.py
        assert one.y[after] == pytest.approx(expected[after], abs=1e-6)
        assert len(one.x) <= LONGEST_TRACE


def test_beyond_the_target_is_positive_whichever_way_the_move_goes() -> None:
    there, back = _tail(1).lines[0], _tail(2).lines[0]
    at = np.linspace(1.0, 40.0, 50)
    # The made load swings the same way in space after both moves: beyond the first target is short of the second.
    assert np.interp(at, back.x, back.y) == pytest.approx(-np.interp(at, there.x, there.y), abs=1e-6)


def test_markers_stand_on_their_lines() -> None:
    figure = _tail(1)
    by_meaning = {one.meaning: one for one in figure.lines}
    assert {marker.meaning: marker.x for marker in figure.markers} == pytest.approx({"worst": 31.2, "nominal": 12.3})
    for marker in figure.markers:
        drawn = by_meaning[marker.meaning]
        assert marker.y == pytest.approx(np.interp(marker.x, drawn.x, drawn.y), abs=0.5)
    assert len({marker.shape for marker in figure.markers}) == 2


def test_a_load_that_never_settles_is_shown_to_the_end_of_the_observation() -> None:
    (move, _) = settled(STUDY.axis, NEVER).moves
    figure = tail(STUDY.axis, move, trace(), trace(amplitude=3e-3))
    assert figure.x.high == pytest.approx(200.0)  # observed 0.2 s after the commanded end
    assert not any("worst" in mark.name for mark in figure.marks)
    assert "never comes to rest inside" in figure.words
    assert "observed for 200 ms" in figure.words


def test_a_load_that_settles_before_the_command_ends_is_in_the_picture() -> None:
    early = replace(WORST, time_to_window=NOMINAL.commanded_end - 0.03)
    move = replace(MOVES[0], worst=early)
    figure = tail(STUDY.axis, move, trace(), trace())
    assert figure.x.low < -30.0


def test_one_line_where_the_nominal_axis_is_the_worst() -> None:
    move = replace(MOVES[0], worst_corner={}, worst=MOVES[0].nominal)
    figure = tail(STUDY.axis, move, trace(), trace())
    assert [one.name for one in figure.lines] == ["nominal axis, the worst"]


def test_the_words_tell_it_to_those_who_cannot_see() -> None:
    words = _tail(1).words
    for told in ("±25 µm", "31.2 ms", "44.7 ms", "load mass +5 %", "friction -40 %"):
        assert told in words
