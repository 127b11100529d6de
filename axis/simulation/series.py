"""One step of the axis near or through rest: a Taylor series of the whole motion, friction included, with its events.

The series are scaled: coefficient n stands for xₙ·hⁿ, so that the sum of a row is the state at the end of the step and
the state at a share s of it is the polynomial in s. Motion stops where the polynomial of a speed reaches zero, and
starts where the polynomial of the torque on a resting side reaches its holding friction: both are located.
"""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from axis.compiled import compiled_part
from axis.mechanics.friction import stribeck
from axis.simulation.plant import (
    ANGLE,
    CURRENT,
    DASHPOT,
    DRAG,
    FADING_SPEED,
    FAST,
    HENRYS,
    HOLDING,
    J_LOAD,
    J_MOTOR,
    K_TORQUE,
    K_VOLTAGE,
    LOAD_SPEED,
    MOTOR_DRAG,
    MOTOR_SPEED,
    OHMS,
    PULL,
    RIGID,
    SLIDING,
    SPRING,
    TWIST,
)

Array = npt.NDArray[np.float64]
Whole = npt.NDArray[np.int64]

dry_friction = compiled_part(stribeck)

TERMS = 20
ACCURACY = 1e-14  # of the largest term of each state: where the series may end
NEARLY = 1.0 + 1e-9  # a load this close to the speed at which friction is constant counts as slower
SHORTEST = 30  # halvings of a step that does not converge
CHECKS = 4  # points of a step at which events are looked for

MOTOR, LOAD = range(2)  # sides of the spring

# Rows of the series beyond the state itself; the torques on the sides are those without their dry friction.
EXPONENT, FADING, ON_MOTOR, ON_LOAD, SERIES_ROWS = range(5, 10)


@compiled_part
def value(c: Array, row: int, order: int, s: float) -> float:
    """The polynomial of a row at a share s of the step.

    Parameters
        s [1]: share of the step
    Returns [1], in the unit of the row
    Source: [own]
    """
    result: float = c[row, order]
    for n in range(order - 1, -1, -1):
        result = result * s + c[row, n]
    return result


@compiled_part
def slope_from_rest(c: Array, row: int, order: int, s: float) -> float:
    """The polynomial of a row that starts at zero, divided by s: its sign away from the start.

    Parameters
        s [1]: share of the step
    Returns [1], in the unit of the row
    Source: [own]
    """
    result: float = c[row, order]
    for n in range(order - 1, 0, -1):
        result = result * s + c[row, n]
    return result


@compiled_part
def converged(c: Array, n: int) -> bool:
    """The last two terms of every state are below the accuracy asked."""
    for row in range(MOTOR_SPEED, CURRENT + 1):
        size = 0.0
        for k in range(n - 1):
            size = max(size, abs(c[row, k]))
        if abs(c[row, n]) + abs(c[row, n - 1]) > ACCURACY * size:
            return False
    return True


@compiled_part
def expand(c: Array, p: Array, motor_sense: int, load_sense: int, voltage: float, step: float) -> int:
    """Fill the series of the state from its constant terms; returns the order at which they end.

    The fading part of the friction, F = (F_S − F_C)·exp(u) with u = −(ω/ω_S)², follows from n·Fₙ = Σ k·u_k·Fₙ₋ₖ, which
    is the derivative F' = u'·F term by term.

    Parameters
        voltage [V]: held over the step
        step [s]: length
    Source: [own]
    """
    fades = load_sense != 0 and p[FADING_SPEED] > 0.0 and abs(c[LOAD_SPEED, 0]) <= NEARLY * p[FAST]
    per_square = -1.0 / (p[FADING_SPEED] * p[FADING_SPEED]) if fades else 0.0
    rigid = p[RIGID] != 0.0
    per_motor, per_load, per_henry = 1.0 / p[J_MOTOR], 1.0 / p[J_LOAD], 1.0 / p[HENRYS]
    of_speed, of_twist, of_load, of_current = 0.0, 0.0, 0.0, 0.0  # largest terms so far
    for n in range(TERMS + 1):
        speed, twist, load, current = c[MOTOR_SPEED, n], c[TWIST, n], c[LOAD_SPEED, n], c[CURRENT, n]
        torque = p[K_TORQUE] * current
        spring = torque if rigid else p[SPRING] * twist + p[DASHPOT] * (speed - load)
        on_load = spring - p[DRAG] * load
        on_motor = torque - spring
        friction, drag = 0.0, 0.0
        if n == 0:
            on_load -= p[PULL]
            friction = load_sense * p[SLIDING]
            drag = motor_sense * p[MOTOR_DRAG]
        c[EXPONENT, n] = 0.0
        if fades:
            if n == 0:
                excess = dry_friction(load, p[SLIDING], p[HOLDING], p[FADING_SPEED]) - p[SLIDING]
                c[EXPONENT, 0] = per_square * load * load
                c[FADING, 0] = load_sense * excess
            else:
                square = 0.0
                for k in range(n + 1):
                    square += c[LOAD_SPEED, k] * c[LOAD_SPEED, n - k]
                c[EXPONENT, n] = per_square * square
                fading = 0.0
                for k in range(1, n + 1):
                    fading += k * c[EXPONENT, k] * c[FADING, n - k]
                c[FADING, n] = fading / n
            friction += c[FADING, n]
        c[ON_LOAD, n] = on_load
        c[ON_MOTOR, n] = on_motor
        of_speed, of_twist = max(of_speed, abs(speed)), max(of_twist, abs(twist))
        of_load, of_current = max(of_load, abs(load)), max(of_current, abs(current))
        if n == TERMS or (
            n >= 3
            and abs(load) + abs(c[LOAD_SPEED, n - 1]) <= ACCURACY * of_load
            and abs(speed) + abs(c[MOTOR_SPEED, n - 1]) <= ACCURACY * of_speed
            and abs(twist) + abs(c[TWIST, n - 1]) <= ACCURACY * of_twist
            and abs(current) + abs(c[CURRENT, n - 1]) <= ACCURACY * of_current
        ):
            break
        share = step / (n + 1.0)
        c[ANGLE, n + 1] = share * speed
        c[LOAD_SPEED, n + 1] = 0.0 if load_sense == 0 else share * (on_load - friction) * per_load
        if rigid:
            c[MOTOR_SPEED, n + 1] = c[LOAD_SPEED, n + 1]
            c[TWIST, n + 1] = 0.0
        else:
            c[MOTOR_SPEED, n + 1] = 0.0 if motor_sense == 0 else share * (on_motor - drag) * per_motor
            c[TWIST, n + 1] = share * (speed - load)
        drop = -p[OHMS] * current - p[K_VOLTAGE] * speed
        if n == 0:
            drop += voltage
        c[CURRENT, n + 1] = share * drop * per_henry
    return n


@compiled_part
def shorten(c: Array, order: int) -> float:
    """Halve the step until the last two terms vanish; rescales the series and returns the share of the step left.

    The exponent of the fading friction may change by three at most: beyond it the terms of the exponential grow before
    they fall, and two small ones say nothing.
    """
    share = 1.0
    for _ in range(SHORTEST):
        change = 0.0
        for n in range(1, order + 1):
            change += abs(c[EXPONENT, n])
        if change <= 3.0 and (order < TERMS or converged(c, order)):
            break
        share *= 0.5
        factor = 1.0
        for n in range(1, order + 1):
            factor *= 0.5
            for row in range(SERIES_ROWS):
                c[row, n] *= factor
    return share


@compiled_part
def slows_at(c: Array, row: int, order: int, sense: int, level: float) -> float:
    """Share of the step at which a moving side comes down to a speed, zero for a stop; above 1: not in this step.

    Parameters
        level [rad/s]: speed looked for
    Returns [1]
    Source: [own]
    """
    reach = 0.0
    for n in range(1, order + 1):
        reach += abs(c[row, n])
    if abs(c[row, 0]) - level > reach:
        return 2.0
    rests = c[row, 0] == 0.0
    before = 0.0
    for check in range(1, CHECKS + 1):
        s = check / CHECKS
        speed = slope_from_rest(c, row, order, s) if rests else value(c, row, order, s)
        if speed * sense < level:
            after = s
            if rests and before == 0.0 and slope_from_rest(c, row, order, 0.0) * sense <= 0.0:
                return 0.0
            for _ in range(60):
                middle = 0.5 * (before + after)
                speed = slope_from_rest(c, row, order, middle) if rests else value(c, row, order, middle)
                if speed * sense < level:
                    after = middle
                else:
                    before = middle
            return after
        before = s
    return 2.0


@compiled_part
def starts_at(c: Array, row: int, order: int, holding: float) -> float:
    """Share of the step at which the torque on a resting side exceeds what holds it; above 1: not in this step.

    Parameters
        holding [N·m]: what friction holds
    Returns [1]
    Source: [own]
    """
    reach = 0.0
    for n in range(order + 1):
        reach += abs(c[row, n])
    if reach <= holding:
        return 2.0
    if abs(c[row, 0]) > holding:
        return 0.0
    before = 0.0
    for check in range(1, CHECKS + 1):
        s = check / CHECKS
        if abs(value(c, row, order, s)) > holding:
            after = s
            for _ in range(60):
                middle = 0.5 * (before + after)
                if abs(value(c, row, order, middle)) > holding:
                    after = middle
                else:
                    before = middle
            return after
        before = s
    return 2.0


@compiled_part
def series_step(x: Array, senses: Whole, p: Array, voltage: float, step: float, events: bool, c: Array) -> float:
    """Advance the state by at most `step` [s], to the next event or as far as the series reaches; returns the time.

    Parameters
        x: state, changed in place
        senses: of motor and load, 0 at rest, changed in place
        p: prepared plant
        voltage [V]: held
        step [s]: wanted
        events: whether stops and starts are looked for
        c: work space
    Returns [s]
    Source: [own]
    """
    for row in range(CURRENT + 1):
        c[row, 0] = x[row]
    order = expand(c, p, senses[0], senses[1], voltage, step)
    share = shorten(c, order)
    s = 1.0
    which = -1
    if events:
        for side in range(2):
            friction = p[HOLDING] if side == LOAD else p[MOTOR_DRAG]
            if friction == 0.0:
                continue
            if senses[side] == 0:
                found = starts_at(c, ON_MOTOR + side, order, friction)
            else:
                found = slows_at(c, MOTOR_SPEED + 2 * side, order, senses[side], 0.0)
            if found < s or (found == s and which < 0):
                s, which = found, side
    if senses[1] != 0 and abs(x[LOAD_SPEED]) > NEARLY * p[FAST] and p[FAST] > 0.0:
        slows = slows_at(c, LOAD_SPEED, order, senses[1], p[FAST])
        if slows < s:  # from here on the fading friction belongs to the series
            s, which = slows, -1
    for row in range(CURRENT + 1):
        x[row] = value(c, row, order, s)
    if which >= 0:
        pushed = value(c, ON_MOTOR + which, order, s)
        x[MOTOR_SPEED + 2 * which] = 0.0
        if p[RIGID] != 0.0:
            x[MOTOR_SPEED] = 0.0
        holds = senses[which] != 0 and abs(pushed) <= (p[HOLDING] if which == LOAD else p[MOTOR_DRAG])
        senses[which] = 0 if holds else (1 if pushed > 0.0 else -1)
    return s * share * step
