"""Winding temperature of the repeated cycle."""

from __future__ import annotations

import math

import numpy as np

from axis.completion import CompletedAxis
from axis.machine.drive import copper_loss
from axis.machine.temperature import copper_resistance_ratio
from axis.machine.thermal import TwoBody, periodic_rises
from axis.sizing.polynomials import Array, product
from axis.sizing.trace import Trace

_BLOCK = 1e-3  # of the winding's time constant: losses that close together are averaged


def hottest_winding(axis: CompletedAxis, course: Trace) -> float | None:
    """[K] Hottest instant of the winding once the cycle has been repeated for ever; infinite where it runs away.

    Only copper loss counts. The copper is as warm as the winding's mean; within the cycle its loss follows the current.
    """
    motor = axis.motor
    if motor.thermal is None:
        return None
    per_torque = copper_loss(1.0 / motor.torque_constant, motor.resistance)
    energies = per_torque * course.integral(product(course.torque, course.torque))
    mean_loss = float(energies.sum()) / course.cycle_time
    mean = mean_winding_temperature(mean_loss, motor.thermal, axis.ambient, motor.constants_temperature)
    if math.isinf(mean):
        return math.inf
    warmer = copper_resistance_ratio(mean, motor.constants_temperature)
    losses, durations = _blocks(
        energies * warmer, course.duration, _BLOCK * motor.thermal.winding_housing * motor.thermal.winding_capacity
    )
    return axis.ambient + periodic_rises(motor.thermal, losses, durations).peak_winding


def mean_winding_temperature(cold_loss: float, body: TwoBody, ambient: float, stated_temperature: float) -> float:
    """Temperature at which a winding whose resistance grows with it comes to rest.

    Parameters
        cold_loss [W]: with the resistance at the temperature where it was stated
        body: winding and housing
        ambient [K]: around the housing
        stated_temperature [K]: where the resistance was stated
    Returns [K], infinite where the loss grows faster with the temperature than the heat flows off
    T = T_a + P·r(T)·(R_wh + R_ha), r the ratio of resistances, which is linear in T
    Source: [own]
    """
    resistance = body.winding_housing + body.housing_ambient
    at_ambient = copper_resistance_ratio(ambient, stated_temperature)
    slope = copper_resistance_ratio(ambient + 1.0, stated_temperature) - at_ambient
    left = 1.0 - cold_loss * resistance * slope
    if left <= 0.0:
        return math.inf
    return ambient + cold_loss * resistance * at_ambient / left


def _blocks(energies: Array, durations: Array, shortest: float) -> tuple[list[float], list[float]]:
    """Mean loss [W] and duration [s] of neighbouring segments joined until they last `shortest`."""
    ends = np.cumsum(durations)
    number = np.floor(ends / max(shortest, 1e-300)).astype(np.int64)
    last = np.append(np.flatnonzero(np.diff(number)), len(durations) - 1)
    times = np.diff(np.concatenate([[0.0], ends[last]]))
    sums = np.diff(np.concatenate([[0.0], np.cumsum(energies)[last]]))
    return (sums / times).tolist(), times.tolist()
