"""The drive: its three loops, its limits and its current-time bucket, one function a sample rate."""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from axis.compiled import compiled_part
from axis.machine.drive import bucket_step
from axis.simulation.layout import (
    BUCKET_CAPACITY,
    CONTINUOUS_CURRENT,
    CURRENT_GAIN,
    CURRENT_PERIOD,
    CURRENT_STEP,
    FILTER_COUNT,
    FILTERS,
    MAX_FILTERS,
    NOMINAL_CONSTANT,
    PEAK_CURRENT,
    POSITION_GAIN,
    SETPOINT_WEIGHT,
    TORQUE_FEEDFORWARD,
    VELOCITY_EVERY,
    VELOCITY_FEEDFORWARD,
    VELOCITY_FILTER,
    VELOCITY_GAIN,
    VELOCITY_STEP,
    VOLTAGE_LIMIT,
)
from axis.simulation.plant import CROSS_VOLTAGE, K_TORQUE, OHMS, PULL

Array = npt.NDArray[np.float64]

# What the drive remembers.
(
    SET_POSITION,  # [rad] held from the last position sample
    SET_SPEED,  # [rad/s]
    SET_ACCELERATION,  # [rad/s²]
    SPEED_COMMAND,  # [rad/s] of the position loop
    LAST_ANGLE,  # [rad] measured at the last velocity sample
    FILTERED_SPEED,  # [rad/s]
    TORQUE_INTEGRAL,  # [N·m]
    COMMAND,  # [A]
    VOLTAGE_INTEGRAL,  # [V]
    VOLTAGE,  # [V] of the last current sample
    BUCKET,  # [A²·s]
    FULL,  # [1] 1 while the bucket holds the current down
    TRIP,  # [1] 1 once the bucket was full in this move
    MEMORY,  # two states a filter from here on
) = range(14)
DRIVE_SIZE = MEMORY + 2 * MAX_FILTERS

fill = compiled_part(bucket_step)

EMPTIED = 0.9  # of the bucket's capacity: below it the peak current is allowed again


@compiled_part
def measured(angle: float, count: float) -> float:
    """What an encoder reads.

    Parameters
        angle [rad]: true
        count [rad]: angle of one count; 0: no quantisation
    Returns [rad]
    count·⌊angle/count + 1/2⌋
    Source: [own]
    """
    return count * math.floor(angle / count + 0.5) if count > 0.0 else angle


@compiled_part
def position_sample(u: Array, gains: Array, angle: float) -> None:
    """Speed command from the position error; the set-point stands already in the drive.

    Parameters
        angle [rad]: measured
    ω_p = Kv·(r − θ)
    Source: [own]
    """
    u[SPEED_COMMAND] = gains[POSITION_GAIN] * (u[SET_POSITION] - angle)


@compiled_part
def filtered_torque(u: Array, gains: Array, torque: float) -> float:
    """The torque behind all filters, each in transposed direct form.

    Parameters
        torque [N·m]: asked
    Returns [N·m]
    y = b0·u + s1; s1 = b1·u − a1·y + s2; s2 = b2·u − a2·y
    Source: [own]
    """
    for n in range(int(gains[FILTER_COUNT])):
        f, m = FILTERS + 5 * n, MEMORY + 2 * n
        result = gains[f] * torque + u[m]
        u[m] = gains[f + 1] * torque - gains[f + 3] * result + u[m + 1]
        u[m + 1] = gains[f + 2] * torque - gains[f + 4] * result
        torque = result
    return torque


@compiled_part
def velocity_sample(u: Array, gains: Array, frame: Array, limits: Array, angle: float) -> bool:
    """Current command from speed error, feedforward, filters and current limit; True while limited.

    Parameters
        angle [rad]: measured
    Kp·(b·ω_p + f·ṙ − ω) + x + g·J·r̈, x += Kp·a·Tv·(ω_p + f·ṙ − ω), taken back where it pushes into the limit
    Source: [own]
    """
    raw = (angle - u[LAST_ANGLE]) / (frame[CURRENT_PERIOD] * frame[VELOCITY_EVERY])
    u[LAST_ANGLE] = angle
    u[FILTERED_SPEED] += gains[VELOCITY_FILTER] * (raw - u[FILTERED_SPEED])
    forward = gains[VELOCITY_FEEDFORWARD] * u[SET_SPEED] - u[FILTERED_SPEED]
    increment = gains[VELOCITY_STEP] * (u[SPEED_COMMAND] + forward)
    u[TORQUE_INTEGRAL] += increment
    torque = gains[VELOCITY_GAIN] * (gains[SETPOINT_WEIGHT] * u[SPEED_COMMAND] + forward) + u[TORQUE_INTEGRAL]
    torque += gains[TORQUE_FEEDFORWARD] * u[SET_ACCELERATION]
    torque = filtered_torque(u, gains, torque)
    command = torque / frame[NOMINAL_CONSTANT]
    limit = limits[PEAK_CURRENT]
    if u[FULL] != 0.0:
        limit = min(limit, limits[CONTINUOUS_CURRENT])
    u[COMMAND] = min(max(command, -limit), limit)
    if abs(command) <= limit:
        return False
    if increment * torque > 0.0:
        u[TORQUE_INTEGRAL] -= increment
    return True


@compiled_part
def current_sample(u: Array, gains: Array, limits: Array, p: Array, speed: float, current: float) -> bool:
    """Voltage from current error, within the voltage circle at zero d-axis current; True while limited.

    Parameters
        speed [rad/s]: of the motor
        current [A]: q-axis peak
    kp·e + x, x += kp·Tc/ti·e; |v| ≤ √(V² − (p·ω·L·i)²)
    Source: [own]
    """
    error = u[COMMAND] - current
    increment = gains[CURRENT_STEP] * error
    u[VOLTAGE_INTEGRAL] += increment
    wanted = gains[CURRENT_GAIN] * error + u[VOLTAGE_INTEGRAL]
    across = p[CROSS_VOLTAGE] * speed * current
    room = limits[VOLTAGE_LIMIT] * limits[VOLTAGE_LIMIT] - across * across
    u[VOLTAGE] = wanted
    if wanted * wanted <= room:
        return False
    u[VOLTAGE] = math.copysign(math.sqrt(max(room, 0.0)), wanted)
    if increment * wanted > 0.0:
        u[VOLTAGE_INTEGRAL] -= increment
    return True


@compiled_part
def fill_bucket(u: Array, limits: Array, current: float, period: float) -> None:
    """Count the current-time bucket; once full it allows the continuous current until a tenth has drained.

    Parameters
        current [A]: q-axis peak
        period [s]: of the current samples
    Source: [own]
    """
    capacity = limits[BUCKET_CAPACITY]
    u[BUCKET] = fill(u[BUCKET], current, limits[CONTINUOUS_CURRENT], period)
    if u[BUCKET] >= capacity:
        u[FULL], u[TRIP] = 1.0, 1.0
    elif u[BUCKET] <= EMPTIED * capacity:
        u[FULL] = 0.0


@compiled_part
def hold_still(u: Array, gains: Array, frame: Array, p: Array) -> float:
    """Set the drive as it stands before the first move, holding the static load at rest; returns its current [A]."""
    current: float = p[PULL] / p[K_TORQUE]
    for n in range(DRIVE_SIZE):
        u[n] = 0.0
    u[COMMAND] = current
    u[TORQUE_INTEGRAL] = current * frame[NOMINAL_CONSTANT]
    u[VOLTAGE] = p[OHMS] * current
    u[VOLTAGE_INTEGRAL] = u[VOLTAGE]
    for n in range(int(gains[FILTER_COUNT])):
        f, m = FILTERS + 5 * n, MEMORY + 2 * n
        u[m] = (1.0 - gains[f]) * u[TORQUE_INTEGRAL]
        u[m + 1] = (gains[f + 2] - gains[f + 4]) * u[TORQUE_INTEGRAL]
    return current
