"""One cycle at the motor shaft: commanded speed and the torque it asks, beside what the motor can give."""

from __future__ import annotations

import numpy as np

from axis.completion import CompletedAxis
from axis.description.motor import Motor
from axis.plots.figure import Array, Figure, Level, Scale, line
from axis.sizing.polynomials import value
from axis.sizing.trace import Trace, trace
from axis.units import Quantity, declarations, digits_of, in_shown, pretty, shown_unit

POINTS = 24  # drawn of each segment; a segment is at most quadratic in time
HEADROOM = 1.12  # height of the figure over what it shows


def profiles(axis: CompletedAxis) -> tuple[Figure, Figure]:
    """Speed and torque of the nominal axis over one cycle."""
    course = trace(axis)
    speed = _figure(axis, course, course.speed, "speed", "max_speed", axis.motor.max_speed)
    torque = _figure(axis, course, course.torque, "torque", "peak_torque", axis.motor.peak_torque)
    return speed, torque


def _figure(
    axis: CompletedAxis, course: Trace, polynomials: Array, name: str, field: str, limit: float | None
) -> Figure:
    declared = declarations(Motor)[field]
    assert isinstance(declared, Quantity)
    time, course_si = _sampled(course, polynomials)
    drawn = course_si * in_shown(1.0, declared)
    most = float(np.abs(drawn).max())
    unit = pretty(shown_unit(declared))
    words = f"The {name} of the motor over a cycle of {course.cycle_time:.3g} s peaks at {digits_of(most, 3)} {unit}"
    levels: tuple[Level, ...] = ()
    if limit is not None:
        most_allowed = in_shown(limit, declared)
        told = f"{digits_of(most_allowed, 3)} {unit}"
        levels = (Level(f"limit ±{told}", most_allowed, "limit"), Level("", -most_allowed, "limit"))
        most = max(most, most_allowed)
        words += f"; the motor allows ±{told}"
    half = HEADROOM * most
    return Figure(
        title=f"{name} of the motor over one cycle",
        words=f"{words}.",
        x=Scale("time", "s", 0.0, course.cycle_time),
        y=Scale(name, unit, -half, half),
        lines=(line(name, time, drawn, "nominal"),),
        levels=levels,
    )


def _sampled(course: Trace, polynomials: Array) -> tuple[Array, Array]:
    """Times from the start of the cycle [s] and values of one polynomial a segment, both ends of each included."""
    share = np.linspace(0.0, 1.0, POINTS)
    within = course.duration[:, None] * share
    starts = np.cumsum(course.duration) - course.duration
    return (starts[:, None] + within).ravel(), value(polynomials, within).ravel()
