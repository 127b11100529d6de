"""The move with constant acceleration from rest to rest: trapezoid of speed, or triangle."""

from __future__ import annotations

import math

from axis.motion.pieces import Profile, from_rest, in_time, within_limits


def triangle_speed(distance: float, acceleration: float, deceleration: float) -> float:
    """Speed at which the two ramps of a move without cruise meet.

    Parameters
        distance [m or rad]: not negative
        acceleration [m/s² or rad/s²]: while speeding up
        deceleration [m/s² or rad/s²]: while slowing down
    Returns [m/s or rad/s]
    v = √(2·d·a·a_dec/(a + a_dec))
    Source: [own]
    """
    return math.sqrt(2.0 * distance * acceleration * deceleration / (acceleration + deceleration))


def constant_acceleration(
    distance: float, speed: float, acceleration: float, deceleration: float | None = None
) -> Profile:
    """Time-optimal move from rest to rest under limits of speed and acceleration, starting at position zero.

    Parameters
        distance [m or rad]: either sign; zero gives a move without duration
        speed [m/s or rad/s]: limit, above zero
        acceleration [m/s² or rad/s²]: limit while speeding up, above zero
        deceleration [m/s² or rad/s²]: limit while slowing down; left out: as acceleration
    Returns the move
    T = d/v + v/2·(1/a + 1/a_dec); without cruise T = v_top·(1/a + 1/a_dec) with `triangle_speed`
    Source: [own]; its steps of acceleration have no finite jerk
    """
    down = acceleration if deceleration is None else deceleration
    length, sign = abs(distance), math.copysign(1.0, distance)
    top = min(speed, triangle_speed(length, acceleration, down))
    ramps = top**2 / 2.0 * (1.0 / acceleration + 1.0 / down)
    cruise = max(length - ramps, 0.0) / speed if top == speed else 0.0
    return from_rest(
        0.0,
        [
            (top / acceleration, sign * acceleration, 0.0),
            (cruise, 0.0, 0.0),
            (top / down, -sign * down, 0.0),
        ],
    )


def constant_acceleration_for_duration(
    distance: float,
    duration: float,
    speed: float | None = None,
    acceleration: float | None = None,
    deceleration: float | None = None,
) -> Profile:
    """Move with constant acceleration from rest to rest in exactly the given time.

    Parameters
        distance [m or rad]: either sign
        duration [s]: above zero
        speed [m/s or rad/s]: limit, if any
        acceleration [m/s² or rad/s²]: limit, if any
        deceleration [m/s² or rad/s²]: limit while slowing down; left out: as acceleration
    Returns the move; raises NotComputable where it would exceed a limit
    With speed and acceleration: the time-optimal move under them, stretched in time. Else a third of the time each
    speeding up, cruising, slowing down: v = 1.5·d/T, a = 4.5·d/T²
    Source: [own]
    """
    if speed is not None and acceleration is not None:
        return in_time(constant_acceleration(distance, speed, acceleration, deceleration), duration)
    part, rate = duration / 3.0, 4.5 * distance / duration**2
    thirds = from_rest(0.0, [(part, rate, 0.0), (part, 0.0, 0.0), (part, -rate, 0.0)])
    return within_limits(thirds, speed, acceleration, deceleration)
