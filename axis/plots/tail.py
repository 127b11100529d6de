"""The tail of a move: how the load comes to rest around its window, drawn at the scale of the window."""

from __future__ import annotations

import math
from collections.abc import Mapping

import numpy as np

from axis.completion import CompletedAxis
from axis.description.moves import Window
from axis.plots.figure import (
    Array,
    Band,
    Figure,
    Line,
    Marker,
    Meaning,
    Scale,
    Shape,
    Stroke,
    VerticalMark,
    line,
    staggered,
)
from axis.settling.check import tail_trace
from axis.settling.verdict import MoveVerdict, corner_in_words
from axis.simulation.record import MoveOutcome, Trace
from axis.study import Study
from axis.units import Quantity, declarations, digits_of, in_shown, pretty, shown_unit

LEAST_WINDOWS, MOST_WINDOWS = 2.0, 6.0  # half height of the figure, in windows
BEFORE = 0.15  # share of the shown time that lies before the commanded end
AFTER = 1.15  # shown time after the commanded end over the latest instant of interest


def tail(axis: CompletedAxis, move: MoveVerdict, nominal: Trace, worst: Trace) -> Figure:
    """Error of the load against the time after the commanded end: nominal axis, worst corner, window, instants.

    The traces are those of the nominal axis and of the move's worst corner (`axis.settling.check.tail_trace`).
    """
    length, rotary = _declared("position"), axis.stated.rotary
    window = in_shown(axis.stated.window.position, length, rotary)
    scale_x = _shown_time(axis, move)
    direction = math.copysign(1.0, axis.moves[move.number - 1].distance)
    drawn: list[tuple[str, Meaning, Stroke, Shape, MoveOutcome, Trace]] = [
        ("worst corner", "worst", "solid", "diamond", move.worst, worst),
        ("nominal axis", "nominal", "dashed", "circle", move.nominal, nominal),
    ]
    if not move.worst_corner:
        drawn = [("nominal axis, the worst", "worst", "solid", "diamond", move.worst, worst)]
    lines, markers = [], []
    for name, meaning, stroke, shape, outcome, trace in drawn:
        time, error = _error(trace, move.number - 1, direction)
        shown = in_shown_many(error, length, rotary)
        seen = (time >= scale_x.low) & (time <= scale_x.high)
        lines.append(line(name, time[seen], shown[seen], meaning, stroke))
        markers += _settled_marker(name, meaning, shape, outcome, time, shown)
    return Figure(
        title=f"Move {move.number}: the load around its window",
        words=in_words(axis, move),
        x=scale_x,
        y=_height(lines, window, pretty(shown_unit(length, rotary))),
        lines=tuple(lines),
        bands=(
            Band(f"window ±{digits_of(window, 3)} {pretty(shown_unit(length, rotary))}", -window, window, "window"),
        ),
        markers=tuple(markers),
        marks=_marks(axis, move),
    )


def tails(study: Study) -> tuple[Figure, ...]:
    """The tail of every move that was checked; simulates the nominal axis and each worst corner once more."""
    loops = study.document.axis.loops
    if study.settled is None or loops is None:
        return ()
    traces: dict[tuple[tuple[str, float], ...], Trace] = {}

    def at(corner: Mapping[str, float]) -> Trace:
        key = tuple(sorted(corner.items()))
        if key not in traces:
            traces[key] = tail_trace(study.axis, loops, corner)
        return traces[key]

    return tuple(tail(study.axis, move, at({}), at(move.worst_corner)) for move in study.settled.moves)


def in_words(axis: CompletedAxis, move: MoveVerdict) -> str:
    """What the figure of a tail shows, for those who cannot see it."""
    window = axis.stated.window.position
    length, rotary = _declared("position"), axis.stated.rotary
    half = f"±{digits_of(in_shown(window, length, rotary), 3)} {pretty(shown_unit(length, rotary))}"
    parts = [f"Move {move.number}, window {half}."]
    for where, outcome in (("on the nominal axis", move.nominal), (corner_in_words(move.worst_corner), move.worst)):
        if math.isinf(outcome.time_to_window):
            parts.append(f"The load never comes to rest inside {where}, observed for {ms(_observed(outcome))}.")
        else:
            parts.append(
                f"The load stays inside from {ms(outcome.settling_time)} after the commanded end {where}, "
                f"observed for {ms(_observed(outcome))}."
            )
        if math.isfinite(outcome.signal):
            parts.append(f"The in-position signal comes at {ms(outcome.signal - outcome.commanded_end)}.")
    return " ".join(parts)


_TIME_UNIT = "ms"


def _declared(name: str) -> Quantity:
    found = declarations(Window)[name]
    assert isinstance(found, Quantity)
    return found


def ms(time: float) -> str:
    """A time [s] as the figures and the sheet print it."""
    return f"{digits_of(in_shown(time, _declared('time')), 3)} {_TIME_UNIT}"


def in_shown_many(values: Array, declared: Quantity, rotary: bool) -> Array:
    """Values of a field in its shown unit; the units of a window have no offset."""
    return values * in_shown(1.0, declared, rotary)


def _error(trace: Trace, n: int, direction: float) -> tuple[Array, Array]:
    """Time after the commanded end [ms] and error of the load, positive beyond the target, over one move."""
    first = int(np.searchsorted(trace.time, trace.starts[n]))
    end = len(trace.time) if n + 1 == len(trace.starts) else int(np.searchsorted(trace.time, trace.starts[n + 1]))
    target = trace.setpoint[max(end - 1, 0)]
    time = in_shown_many(trace.time[first:end] - trace.ends[n], _declared("time"), False)
    return time, direction * (trace.load_position[first:end] - target)


def _observed(outcome: MoveOutcome) -> float:
    return outcome.observed - outcome.commanded_end


def _shown_time(axis: CompletedAxis, move: MoveVerdict) -> Scale:
    """From before the commanded end to beyond every instant that the figure marks, or to the end of observation."""
    observed = min(_observed(move.nominal), _observed(move.worst))
    instants = [axis.settle_within]
    for outcome in (move.nominal, move.worst):
        instants += [outcome.settling_time, outcome.signal - outcome.commanded_end]
    finite = [instant for instant in instants if math.isfinite(instant)]
    unsettled = math.isinf(move.worst.time_to_window)
    last = observed if unsettled else min(AFTER * max(finite), observed)
    first = min(-BEFORE * last, AFTER * min(finite))
    time = _declared("time")
    return Scale("time after the commanded end", _TIME_UNIT, in_shown(first, time), in_shown(last, time))


def _height(lines: list[Line], window: float, unit: str) -> Scale:
    after = [float(np.abs(one.y[one.x >= 0.0]).max(initial=0.0)) for one in lines]
    half = min(max(1.15 * max(after), LEAST_WINDOWS * window), MOST_WINDOWS * window)
    return Scale("error of the load, + beyond the target", unit, -half, half)


def _settled_marker(
    name: str, meaning: Meaning, shape: Shape, outcome: MoveOutcome, time: Array, error: Array
) -> list[Marker]:
    if math.isinf(outcome.time_to_window):
        return []
    at = in_shown(outcome.settling_time, _declared("time"))
    words = f"load settled, {name}: {ms(outcome.settling_time)}"
    return [Marker(words, at, float(np.interp(at, time, error)), meaning, shape)]


def _marks(axis: CompletedAxis, move: MoveVerdict) -> tuple[VerticalMark, ...]:
    def at(time: float) -> float:
        return in_shown(time, _declared("time"))

    worst, asked = move.worst, axis.stated.window.settle_within
    marks = [VerticalMark("commanded end", 0.0, "command")]
    if math.isfinite(worst.time_to_window):
        words = f"load settled, worst: {ms(worst.settling_time)}"
        marks.append(VerticalMark(words, at(worst.settling_time), "worst"))
    if math.isfinite(worst.signal):
        signal = worst.signal - worst.commanded_end
        marks.append(VerticalMark(f"in-position signal, worst: {ms(signal)}", at(signal), "signal", stroke="dashed"))
    if asked is not None:
        marks.append(VerticalMark(f"allowed: {ms(asked)}", at(asked), "limit", stroke="dotted"))
    return staggered(marks)
