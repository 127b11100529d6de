"""The jerk-limited move from rest to rest: time-optimal under limits, or in a given time."""

from __future__ import annotations

import math

from axis.motion.pieces import Profile, from_rest, in_time, within_limits


def ramp_time(speed: float, acceleration: float, jerk: float) -> float:
    """Shortest time from rest to a speed.

    Parameters
        speed [m/s or rad/s]: at the end of the ramp
        acceleration [m/s² or rad/s²]: limit
        jerk [m/s³ or rad/s³]: limit
    Returns [s]
    v/a + a/j where a is reached (v ≥ a²/j), else 2·√(v/j)
    Source: [biagotti]
    """
    if speed >= acceleration**2 / jerk:
        return speed / acceleration + acceleration / jerk
    return 2.0 * math.sqrt(speed / jerk)


def peak_speed(distance: float, acceleration: float, deceleration: float, jerk: float) -> float:
    """Speed that a move reaches whose two ramps just fill its distance.

    Parameters
        distance [m or rad]: not negative
        acceleration [m/s² or rad/s²]: limit while speeding up
        deceleration [m/s² or rad/s²]: limit while slowing down
        jerk [m/s³ or rad/s³]: limit
    Returns [m/s or rad/s]
    root of v/2·(t_ramp(v, a) + t_ramp(v, a_dec)) = d, which grows with v. Neither limit reached: (d²·j/4)^⅓.
    Only the smaller one, a₁: x·(x + a₁/√j) = √(2·a₁·d), v = x². Both: v²/2·(1/a + 1/a_dec) + v/2·(a + a_dec)/j = d
    Source: [own]
    """
    small, large = min(acceleration, deceleration), max(acceleration, deceleration)
    speed = math.cbrt(distance**2 * jerk / 4.0)
    if speed <= small**2 / jerk:
        return speed
    half, right = small / (2.0 * math.sqrt(jerk)), math.sqrt(2.0 * small * distance)
    root = right / (half + math.sqrt(half**2 + right))
    if root**2 <= large**2 / jerk:
        return root**2
    linear, square = (small + large) / (2.0 * jerk), 1.0 / small + 1.0 / large
    return 2.0 * distance / (linear + math.sqrt(linear**2 + 2.0 * square * distance))


def ramp_phases(speed: float, acceleration: float, jerk: float) -> tuple[float, float, float]:
    """Jerk time, time of constant acceleration and peak acceleration of the shortest ramp from rest to a speed.

    Parameters
        speed [m/s or rad/s]: at the end of the ramp
        acceleration [m/s² or rad/s²]: limit
        jerk [m/s³ or rad/s³]: limit
    Returns [s], [s], [m/s² or rad/s²]
    a/j, v/a − a/j, a where a is reached, else √(v/j), 0, √(v·j)
    Source: [biagotti]
    """
    if speed >= acceleration**2 / jerk:
        return acceleration / jerk, speed / acceleration - acceleration / jerk, acceleration
    return math.sqrt(speed / jerk), 0.0, math.sqrt(speed * jerk)


def jerk_limited(
    distance: float, speed: float, acceleration: float, jerk: float, deceleration: float | None = None
) -> Profile:
    """Time-optimal jerk-limited move from rest to rest, at most seven phases, starting at position zero.

    Parameters
        distance [m or rad]: either sign; zero gives a move without duration
        speed [m/s or rad/s]: limit, above zero
        acceleration [m/s² or rad/s²]: limit while speeding up, above zero
        jerk [m/s³ or rad/s³]: limit, above zero
        deceleration [m/s² or rad/s²]: limit while slowing down; left out: as acceleration
    Returns the move
    ramp up, cruise at v, ramp down; where the ramps alone exceed the distance they meet at `peak_speed`
    Source: [biagotti]
    """
    down = acceleration if deceleration is None else deceleration
    length, sign = abs(distance), math.copysign(1.0, distance)
    ramps = speed / 2.0 * (ramp_time(speed, acceleration, jerk) + ramp_time(speed, down, jerk))
    top, cruise = speed, (length - ramps) / speed
    if cruise < 0.0:
        top, cruise = peak_speed(length, acceleration, down, jerk), 0.0
    return _seven_phases(sign, ramp_phases(top, acceleration, jerk), cruise, ramp_phases(top, down, jerk), jerk)


def _seven_phases(
    sign: float, up: tuple[float, float, float], cruise: float, down: tuple[float, float, float], jerk: float
) -> Profile:
    (t1, t2, a), (t5, t6, b), j = up, down, sign * jerk
    a, b = sign * a, sign * b
    return from_rest(
        0.0, [(t1, 0.0, j), (t2, a, 0.0), (t1, a, -j), (cruise, 0.0, 0.0), (t5, 0.0, -j), (t6, -b, 0.0), (t5, -b, j)]
    )


def jerk_limited_for_duration(
    distance: float,
    duration: float,
    speed: float | None = None,
    acceleration: float | None = None,
    jerk: float | None = None,
    deceleration: float | None = None,
) -> Profile:
    """Jerk-limited move from rest to rest in exactly the given time.

    Parameters
        distance [m or rad]: either sign
        duration [s]: above zero
        speed [m/s or rad/s]: limit, if any
        acceleration [m/s² or rad/s²]: limit, if any
        jerk [m/s³ or rad/s³]: limit, if any
        deceleration [m/s² or rad/s²]: limit while slowing down; left out: as acceleration
    Returns the move; raises NotComputable where it would exceed a limit
    With speed, acceleration and jerk: the time-optimal move under them, stretched in time. Else thirds of thirds:
    a third of the time speeding up, cruising, slowing down, each ramp with equal times of rising, constant and
    falling acceleration: v = 1.5·d/T, a = 6.75·d/T², j = 60.75·d/T³
    Source: [own]
    """
    if speed is not None and acceleration is not None and jerk is not None:
        return in_time(jerk_limited(distance, speed, acceleration, jerk, deceleration), duration)
    part, sign = duration / 9.0, math.copysign(1.0, distance)
    rate = 60.75 * abs(distance) / duration**3
    ramp = (part, part, rate * part)
    thirds = _seven_phases(sign, ramp, duration / 3.0, ramp, rate)
    return within_limits(thirds, speed, acceleration, deceleration, jerk)
