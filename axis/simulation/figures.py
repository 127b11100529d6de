"""The figures of a move: cleared at its start, filled while it runs, concluded at the end of its dwell."""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from axis.compiled import compiled_part
from axis.simulation.controller import COMMAND, VOLTAGE
from axis.simulation.layout import (
    FIGURES_SIZE,
    OVERSHOOT,
    PEAK_CURRENT_SEEN,
    PEAK_TORQUE,
    REST_ERROR,
    SIGNAL,
    SIGNAL_EARLY,
    SIGNAL_LAST,
    SIGNAL_LOSSES,
    TIME_TO_WINDOW,
    TRACE_COMMAND,
    TRACE_CURRENT,
    TRACE_LOAD_POSITION,
    TRACE_LOAD_SPEED,
    TRACE_MOTOR_ANGLE,
    TRACE_MOTOR_SPEED,
    TRACE_SETPOINT,
    TRACE_TIME,
    TRACE_TWIST,
    TRACE_VOLTAGE,
    UNDERSHOOT,
)
from axis.simulation.observer import AIM, BAND, BEYOND, INSIDE, LAST_OUTSIDE, SHORT
from axis.simulation.plant import ANGLE, CURRENT, LOAD_SPEED, MOTOR_SPEED, TWIST

Array = npt.NDArray[np.float64]


@compiled_part
def clear(figures: Array) -> None:
    """No move has been seen yet."""
    for f in range(FIGURES_SIZE):
        figures[f] = 0.0
    figures[SIGNAL] = math.inf
    figures[SIGNAL_LAST] = math.inf


@compiled_part
def signal(figures: Array, o: Array, inside: bool, needed: float, time: float) -> None:
    """The drive's in-position signal at one position sample: it stands once `needed` periods were spent inside.

    Parameters
        needed [1]: position periods
        time [s]: from the first sample of the move
    Source: [own]
    """
    if not inside:
        if o[INSIDE] >= needed:
            figures[SIGNAL_LOSSES] += 1.0
        o[INSIDE] = -1.0
        return
    o[INSIDE] += 1.0
    if o[INSIDE] == needed:
        if math.isinf(figures[SIGNAL]):
            figures[SIGNAL] = time
        figures[SIGNAL_LAST] = time


@compiled_part
def conclude(figures: Array, o: Array, y: float, constant: float) -> None:
    """Take over what the observer kept, at the end of the dwell.

    Parameters
        y [rad]: position of the load
        constant [N·m/A]: torque constant of the corner
    Source: [own]
    """
    outside = abs(y - o[AIM]) > o[BAND]
    figures[TIME_TO_WINDOW] = math.inf if outside else o[LAST_OUTSIDE]
    figures[OVERSHOOT] = o[BEYOND]
    figures[UNDERSHOOT] = o[SHORT]
    figures[REST_ERROR] = y - o[AIM]
    figures[PEAK_TORQUE] = constant * figures[PEAK_CURRENT_SEEN]
    if math.isinf(figures[SIGNAL]):
        figures[SIGNAL_EARLY] = -math.inf
    else:
        figures[SIGNAL_EARLY] = figures[TIME_TO_WINDOW] - figures[SIGNAL]


@compiled_part
def write_trace(trace: Array, row: int, time: float, setpoint: float, x: Array, u: Array, rest_offset: float) -> None:
    """One row of the trace.

    Parameters
        time [s]: from the first sample of the move
        setpoint [rad]: held by the drive
        rest_offset [rad]: twist at the rest from which positions count
    Source: [own]
    """
    trace[row, TRACE_TIME] = time
    trace[row, TRACE_SETPOINT] = setpoint
    trace[row, TRACE_MOTOR_ANGLE] = x[ANGLE]
    trace[row, TRACE_MOTOR_SPEED] = x[MOTOR_SPEED]
    trace[row, TRACE_TWIST] = x[TWIST]
    trace[row, TRACE_LOAD_SPEED] = x[LOAD_SPEED]
    trace[row, TRACE_CURRENT] = x[CURRENT]
    trace[row, TRACE_VOLTAGE] = u[VOLTAGE]
    trace[row, TRACE_COMMAND] = u[COMMAND]
    trace[row, TRACE_LOAD_POSITION] = x[ANGLE] - x[TWIST] + rest_offset


@compiled_part
def diverge(figures: Array) -> None:
    """An unstable loop has no figures."""
    for m in range(figures.shape[0]):
        for f in range(FIGURES_SIZE):
            figures[m, f] = math.inf


@compiled_part
def keep_worst(kept: Array, first: int, last: int, figures: Array) -> None:
    """The worst of the kept cycles, figure by figure; of rest errors the larger in size, of signals the latest."""
    for m in range(figures.shape[0]):
        for f in range(FIGURES_SIZE):
            worst = kept[first, m, f]
            for n in range(first + 1, last):
                other = kept[n, m, f]
                if (abs(other) > abs(worst)) if f == REST_ERROR else (other > worst):
                    worst = other
            figures[m, f] = worst
