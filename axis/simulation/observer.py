"""Watches the load between samples: when it is last outside the window, how far it goes beyond its target."""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from axis.compiled import compiled_part

Array = npt.NDArray[np.float64]

# What the observer keeps during one move; angles at the shaft.
(
    AIM,  # [rad] target of the move
    BAND,  # [rad] half width of the window
    SENSE,  # [1] direction of travel
    LAST_OUTSIDE,  # [s] from the move's first sample
    REACHED,  # [1] 1 once the load has been at or beyond its target
    BEYOND,  # [rad] farthest beyond
    SHORT,  # [rad] farthest short of it afterwards
    INSIDE,  # [1] position samples that the measured position has been inside, −1 outside
    OBSERVER_SIZE,
) = range(9)


@compiled_part
def hermite(s: float, e0: float, d0: float, e1: float, d1: float) -> float:
    """Cubic through two positions with their slopes.

    Parameters
        s [1]: share of the step
        e0 [rad]: position at its start
        d0 [rad]: speed at its start times the step
        e1 [rad]: position at its end
        d1 [rad]: speed at its end times the step
    Returns [rad]
    Source: [own]
    """
    rise = e1 - e0
    return e0 + s * (d0 + s * ((3.0 * rise - 2.0 * d0 - d1) + s * (d0 + d1 - 2.0 * rise)))


@compiled_part
def turning_point(e0: float, d0: float, e1: float, d1: float) -> float:
    """Where the cubic of `hermite` turns, its slopes at both ends having different signs.

    Parameters
        e0 [rad]: position at the start of the step
        d0 [rad]: speed at its start times the step
        e1 [rad]: position at its end
        d1 [rad]: speed at its end times the step
    Returns [1], share of the step: the only root of d0 + 2·c·s + 3·g·s² there
    Source: [own]
    """
    rise = e1 - e0
    half = 3.0 * rise - 2.0 * d0 - d1
    cube = 3.0 * (d0 + d1 - 2.0 * rise)
    root = math.sqrt(max(half * half - cube * d0, 0.0))
    # The slope changes from the sign of d0 to the other one: that picks the branch, in the form without cancellation.
    if d0 > 0.0:
        root = -root
    if half * root >= 0.0:
        return -d0 / (half + root) if half + root != 0.0 else 0.5
    return (root - half) / cube if cube != 0.0 else -0.5 * d0 / half


@compiled_part
def crossing(level: float, inside: float, e0: float, d0: float, e1: float, d1: float) -> float:
    """Where the cubic of `hermite` comes back to a level, between a share of the step that is outside and its end.

    Parameters
        level [rad]: edge of the window
        inside [1]: share of the step from which the search starts, outside of the window
        e0 [rad]: position at the start of the step
        d0 [rad]: speed at its start times the step
        e1 [rad]: position at its end
        d1 [rad]: speed at its end times the step
    Returns [1], share of the step, by bisection
    Source: [own]
    """
    outside = inside
    within = 1.0
    above = hermite(outside, e0, d0, e1, d1) > level
    for _ in range(52):
        middle = 0.5 * (outside + within)
        if (hermite(middle, e0, d0, e1, d1) > level) == above:
            outside = middle
        else:
            within = middle
    return within


@compiled_part
def observe(o: Array, time: float, step: float, y0: float, v0: float, y1: float, v1: float) -> None:
    """Take note of one exact step of the load: position [rad] and speed [rad/s] at its ends.

    Parameters
        time [s]: from the first sample of the move
        step [s]: length
        y0 [rad]: position at its start
        v0 [rad/s]: speed there
        y1 [rad]: position at its end
        v1 [rad/s]: speed there
    Source: [own]
    """
    e0, e1 = (y0 - o[AIM]) * o[SENSE], (y1 - o[AIM]) * o[SENSE]
    band = o[BAND]
    highest = max(e0, e1)
    lowest = e1
    turn = -1.0
    if v0 * v1 < 0.0:
        d0, d1 = v0 * step * o[SENSE], v1 * step * o[SENSE]
        turn = turning_point(e0, d0, e1, d1)
        extreme = hermite(turn, e0, d0, e1, d1)
        highest = max(highest, extreme)
        lowest = min(lowest, extreme)
    if abs(e1) > band:
        o[LAST_OUTSIDE] = time + step
    elif abs(e0) > band:
        d0, d1 = v0 * step * o[SENSE], v1 * step * o[SENSE]
        o[LAST_OUTSIDE] = time + step * crossing(math.copysign(band, e0), 0.0, e0, d0, e1, d1)
    elif highest > band or lowest < -band:
        d0, d1 = v0 * step * o[SENSE], v1 * step * o[SENSE]
        level = band if highest > band else -band
        o[LAST_OUTSIDE] = time + step * crossing(level, turn, e0, d0, e1, d1)
    if highest >= 0.0:
        o[REACHED] = 1.0
        o[BEYOND] = max(o[BEYOND], highest)
    if o[REACHED] != 0.0:
        o[SHORT] = max(o[SHORT], -lowest)
