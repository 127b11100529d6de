"""The axis over one segment of a current period, voltage held: one matrix where friction is constant, else series."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from axis.compiled import compiled_part
from axis.simulation.observer import observe
from axis.simulation.plant import (
    ANGLE,
    CURRENT,
    DASHPOT,
    DRAG,
    FAST,
    HOLDING,
    J_LOAD,
    J_MOTOR,
    K_TORQUE,
    LOAD_SPEED,
    MOTOR_DRAG,
    MOTOR_SPEED,
    PADDED,
    PULL,
    RIGID,
    SLIDING,
    SPRING,
    TWIST,
)
from axis.simulation.series import series_step

Array = npt.NDArray[np.float64]
Whole = npt.NDArray[np.int64]

BULGE = 4.0 / 27.0  # of slope times step: the most that a cubic rises above its ends
EVENTS = 64  # stops and starts looked for in one segment; a real axis shows a handful


@compiled_part
def by_series(
    x: Array, senses: Whole, p: Array, voltage: float, step: float, o: Array, time: float, rest_offset: float, c: Array
) -> None:
    """Advance through reversals, sticking, breaking away and Stribeck friction; the observer sees every piece.

    Parameters
        voltage [V]: held over the step
        step [s]: length
        time [s]: from the first sample of the move
        rest_offset [rad]: twist at the rest from which positions count
    Source: [own]
    """
    done = 0.0
    pieces = 0
    while done < step:
        y, v = x[ANGLE] - x[TWIST] + rest_offset, x[LOAD_SPEED]
        left = step - done
        taken = series_step(x, senses, p, voltage, left, pieces < EVENTS, c)
        if taken >= left:
            taken = left
        observe(o, time + done, taken, y, v, x[ANGLE] - x[TWIST] + rest_offset, x[LOAD_SPEED])
        done = step if taken == left else done + taken
        pieces += 1


@compiled_part
def torque_on_load(p: Array, speed: float, twist: float, load: float, current: float) -> float:
    """Torque on the load without its Coulomb friction.

    Parameters
        speed [rad/s]: of the motor
        twist [rad]: motor angle less load angle
        load [rad/s]: speed of the load
        current [A]: q-axis peak
    Returns [N·m]
    k·δ + d·(ω_m − ω_l) − B·ω_l − T_load; Kt·i in place of the spring where the axis is rigid
    Source: [own]
    """
    driving: float = p[SPRING] * twist + p[DASHPOT] * (speed - load)
    if p[RIGID] != 0.0:
        driving = p[K_TORQUE] * current
    result: float = driving - p[DRAG] * load - p[PULL]
    return result


@compiled_part
def torque_on_motor(p: Array, speed: float, twist: float, load: float, current: float) -> float:
    """Torque on the motor without its Coulomb friction; never asked of a rigid axis.

    Parameters
        speed [rad/s]: of the motor
        twist [rad]: motor angle less load angle
        load [rad/s]: speed of the load
        current [A]: q-axis peak
    Returns [N·m]
    Kt·i − k·δ − d·(ω_m − ω_l)
    Source: [own]
    """
    result: float = p[K_TORQUE] * current - p[SPRING] * twist - p[DASHPOT] * (speed - load)
    return result


@compiled_part
def advance(
    x: Array,
    senses: Whole,
    p: Array,
    matrices: Array,
    segment: int,
    voltage: float,
    step: float,
    o: Array,
    time: float,
    rest_offset: float,
    c: Array,
    new: Array,
) -> None:
    """Advance the state over one segment of `step` [s] from `time` [s] of the move.

    One matrix is exact as long as no side starts or stops and the load is too fast for Stribeck friction or has none.
    That is asked at both ends, with room for the most that a cubic between them can rise above or dip below.

    Parameters
        voltage [V]: held over the step
        step [s]: length
        time [s]: from the first sample of the move
        rest_offset [rad]: twist at the rest from which positions count
    Source: [own]
    """
    speed, twist, load, current = x[MOTOR_SPEED], x[TWIST], x[LOAD_SPEED], x[CURRENT]
    motor_sense, load_sense = senses[0], senses[1]
    holding, drag = p[HOLDING], p[MOTOR_DRAG]
    on_motor = drag * motor_sense
    on_load = p[SLIDING] * load_sense + p[PULL]
    mode = (2 if drag > 0.0 and motor_sense == 0 else 0) + (1 if holding > 0.0 and load_sense == 0 else 0)
    for row in range(PADDED):
        new[row] = (
            matrices[segment, mode, 0, row] * speed
            + matrices[segment, mode, 1, row] * twist
            + matrices[segment, mode, 2, row] * load
            + matrices[segment, mode, 3, row] * current
            + matrices[segment, mode, 4, row] * voltage
            + matrices[segment, mode, 5, row] * on_motor
            + matrices[segment, mode, 6, row] * on_load
        )
    new_speed, new_twist, new_load, new_current = new[MOTOR_SPEED], new[TWIST], new[LOAD_SPEED], new[CURRENT]
    plain = True
    if holding > 0.0:
        before = torque_on_load(p, speed, twist, load, current)
        after = torque_on_load(p, new_speed, new_twist, new_load, new_current)
        if load_sense == 0:
            bulge = BULGE * step * p[SPRING] * max(abs(speed), abs(new_speed))
            plain = max(abs(before), abs(after)) + bulge <= holding
        else:
            sliding = p[SLIDING] * load_sense
            bulge = BULGE * step * max(abs(before - sliding), abs(after - sliding)) / p[J_LOAD]
            plain = min(load * load_sense, new_load * load_sense) - bulge > p[FAST]
    if drag > 0.0 and plain:
        before = torque_on_motor(p, speed, twist, load, current)
        after = torque_on_motor(p, new_speed, new_twist, new_load, new_current)
        if motor_sense == 0:
            plain = max(abs(before), abs(after)) <= drag
        else:
            bulge = BULGE * step * max(abs(before - on_motor), abs(after - on_motor)) / p[J_MOTOR]
            plain = min(speed * motor_sense, new_speed * motor_sense) - bulge > 0.0
    if not plain:
        by_series(x, senses, p, voltage, step, o, time, rest_offset, c)
        return
    y = x[ANGLE] - twist + rest_offset
    x[ANGLE] += new[ANGLE]
    x[MOTOR_SPEED], x[TWIST], x[LOAD_SPEED], x[CURRENT] = new_speed, new_twist, new_load, new_current
    observe(o, time, step, y, load, x[ANGLE] - new_twist + rest_offset, new_load)
