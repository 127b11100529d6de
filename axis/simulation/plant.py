"""The axis between samples: its state matrix in each mode of rest, and the exact transition over a time.

State of the kernel: motor angle, motor speed, twist (motor angle less load angle), load speed, current. The position
itself moves nothing; only the twist does, and it keeps its digits however far the axis travels.
"""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from axis.compiled import compiled_part
from axis.simulation.exponential import ORDER, exponential
from axis.simulation.layout import (
    BREAKAWAY,
    COULOMB,
    DAMPING,
    INDUCTANCE,
    LOAD_INERTIA,
    LOAD_TORQUE,
    MOTOR_COULOMB,
    MOTOR_INERTIA,
    POLE_PAIRS,
    RESISTANCE,
    STIFFNESS,
    STRIBECK_SPEED,
    TORQUE_CONSTANT,
    VISCOUS,
    VOLTAGE_CONSTANT,
)

Array = npt.NDArray[np.float64]

# The state of the kernel.
ANGLE, MOTOR_SPEED, TWIST, LOAD_SPEED, CURRENT, STATE_SIZE = range(6)

# The plant as the kernel uses it.
(
    J_MOTOR,  # [kg·m²]
    J_LOAD,  # [kg·m²]
    SPRING,  # [N·m/rad]
    DASHPOT,  # [N·m·s/rad]
    MOTOR_DRAG,  # [N·m]
    SLIDING,  # [N·m] Coulomb friction of the load
    HOLDING,  # [N·m] break-away friction of the load
    FADING_SPEED,  # [rad/s] Stribeck speed; 0: the excess over Coulomb vanishes with the first motion
    FAST,  # [rad/s] load speed beyond which friction is Coulomb friction to the last digit
    DRAG,  # [N·m·s/rad] viscous
    PULL,  # [N·m] load torque
    K_TORQUE,  # [N·m/A]
    K_VOLTAGE,  # [V·s/rad]
    OHMS,  # [ohm]
    HENRYS,  # [H]
    RIGID,  # [1] 1: both inertias move as one, their friction stands on the load's side
    CROSS_VOLTAGE,  # [V·s/(rad·A)] d-axis voltage p·ω·L·i over ω·i
    PREPARED_SIZE,
) = range(18)

SEGMENTS = 2  # before and after the new voltage acts
MODES = 4  # 2·(motor rests) + (load rests)
PADDED = 8  # rows of a transition, a whole number of vector registers
COLUMNS = 7  # motor speed, twist, load speed, current; voltage, motor friction, load friction with load torque
FADED = 6.1  # exp(−6.1²) is below half a unit in the last place of one


@compiled_part
def prepare(plant: Array, prepared: Array) -> None:
    """Bring one plant into the form that the kernel uses; an infinite stiffness makes one inertia of two."""
    rigid = math.isinf(plant[STIFFNESS])
    motor_drag, carried = plant[MOTOR_COULOMB], 0.0
    if rigid:
        motor_drag, carried = 0.0, plant[MOTOR_COULOMB]
    total = plant[MOTOR_INERTIA] + plant[LOAD_INERTIA]
    prepared[J_MOTOR] = total if rigid else plant[MOTOR_INERTIA]
    prepared[J_LOAD] = total if rigid else plant[LOAD_INERTIA]
    prepared[SPRING] = 0.0 if rigid else plant[STIFFNESS]
    prepared[DASHPOT] = 0.0 if rigid else plant[DAMPING]
    prepared[MOTOR_DRAG] = motor_drag
    prepared[SLIDING] = plant[COULOMB] + carried
    prepared[HOLDING] = max(plant[BREAKAWAY], plant[COULOMB]) + carried
    fades = plant[BREAKAWAY] > plant[COULOMB] and plant[STRIBECK_SPEED] > 0.0
    prepared[FADING_SPEED] = plant[STRIBECK_SPEED] if fades else 0.0
    prepared[FAST] = FADED * prepared[FADING_SPEED]
    prepared[DRAG] = plant[VISCOUS]
    prepared[PULL] = plant[LOAD_TORQUE]
    prepared[K_TORQUE] = plant[TORQUE_CONSTANT]
    prepared[K_VOLTAGE] = plant[VOLTAGE_CONSTANT]
    prepared[OHMS] = plant[RESISTANCE]
    prepared[HENRYS] = plant[INDUCTANCE]
    prepared[RIGID] = 1.0 if rigid else 0.0
    prepared[CROSS_VOLTAGE] = plant[POLE_PAIRS] * plant[INDUCTANCE]


@compiled_part
def state_matrix(p: Array, motor_rests: bool, load_rests: bool, matrix: Array) -> None:
    """D of the free motion, rows and columns motor speed, twist, load speed, current; a resting side is a zero row."""
    for row in range(ORDER):
        for column in range(ORDER):
            matrix[row, column] = 0.0
    matrix[3, 0] = -p[K_VOLTAGE] / p[HENRYS]
    matrix[3, 3] = -p[OHMS] / p[HENRYS]
    if p[RIGID] != 0.0:
        if not load_rests:
            for row in (0, 2):
                matrix[row, 2] = -p[DRAG] / p[J_LOAD]
                matrix[row, 3] = p[K_TORQUE] / p[J_LOAD]
        return
    matrix[1, 0] = 1.0
    matrix[1, 2] = -1.0
    if not motor_rests:
        matrix[0, 0] = -p[DASHPOT] / p[J_MOTOR]
        matrix[0, 1] = -p[SPRING] / p[J_MOTOR]
        matrix[0, 2] = p[DASHPOT] / p[J_MOTOR]
        matrix[0, 3] = p[K_TORQUE] / p[J_MOTOR]
    if not load_rests:
        matrix[2, 0] = p[DASHPOT] / p[J_LOAD]
        matrix[2, 1] = p[SPRING] / p[J_LOAD]
        matrix[2, 2] = -(p[DASHPOT] + p[DRAG]) / p[J_LOAD]


@compiled_part
def transitions(p: Array, first_time: float, second_time: float, result: Array) -> None:
    """Exact transition of the state over both segments of a current period in all modes.

    Row ANGLE gives the increment of the motor angle. Inputs are held over the segment.

    Parameters
        first_time [s]: until the new voltage acts
        second_time [s]: from there to the next sample
    Source: [own]
    """
    matrix = np.empty((ORDER, ORDER))
    once = np.empty((ORDER, ORDER))
    first = np.empty((ORDER, ORDER))
    second = np.empty((ORDER, ORDER))
    for segment in range(SEGMENTS):
        duration = first_time if segment == 0 else second_time
        for mode in range(MODES):
            motor_rests, load_rests = mode >= 2, mode % 2 == 1
            if duration <= 0.0 or (motor_rests and p[MOTOR_DRAG] == 0.0) or (load_rests and p[HOLDING] == 0.0):
                continue
            state_matrix(p, motor_rests, load_rests, matrix)
            exponential(matrix, duration, once, first, second)
            per_motor = 0.0 if motor_rests else -1.0 / p[J_MOTOR]
            per_load = 0.0 if load_rests else -1.0 / p[J_LOAD]
            out = result[segment, mode]
            for row in range(ORDER):
                for column in range(ORDER):
                    out[column, row + 1] = once[row, column]
                out[4, row + 1] = first[row, 3] / p[HENRYS]
                out[5, row + 1] = first[row, 0] * per_motor
                out[6, row + 1] = (first[row, 2] + p[RIGID] * first[row, 0]) * per_load
            for column in range(ORDER):
                out[column, 0] = first[0, column]
            out[4, 0] = second[0, 3] / p[HENRYS]
            out[5, 0] = second[0, 0] * per_motor
            out[6, 0] = (second[0, 2] + p[RIGID] * second[0, 0]) * per_load
