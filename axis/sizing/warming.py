"""Winding temperature of the repeated cycle."""

from __future__ import annotations

import math

import numpy as np

from axis.completion import CompletedAxis
from axis.machine.drive import copper_loss
from axis.machine.temperature import COPPER_COEFFICIENT, TWENTY_CELSIUS, copper_resistance_ratio
from axis.machine.thermal import TwoBody, periodic_rises
from axis.sizing.polynomials import Array, product
from axis.sizing.trace import Trace

_LEAST_PARTS = 48  # of the cycle, each with its exact mean loss
_FINEST = 1e-2  # of the winding's time constant: longer cycles take more parts


def hottest_winding(axis: CompletedAxis, course: Trace) -> float | None:
    """[K] Hottest instant of the winding once the cycle has been repeated for ever; infinite where it runs away.

    Only copper loss counts. The copper is as warm as the winding's mean; its loss follows the current in equal parts of
    the cycle, so that what ripples within a part is averaged.
    """
    motor = axis.motor
    if motor.thermal is None:
        return None
    per_torque = copper_loss(1.0 / motor.torque_constant, motor.resistance)
    loss = per_torque * product(course.torque, course.torque)
    mean_loss = float(course.integral(loss).sum()) / course.cycle_time
    mean = mean_winding_temperature(mean_loss, motor.thermal, axis.ambient, motor.constants_temperature)
    if math.isinf(mean):
        return math.inf
    warmer = copper_resistance_ratio(mean, motor.constants_temperature)
    time_constant = motor.thermal.winding_housing * motor.thermal.winding_capacity
    parts = max(_LEAST_PARTS, math.ceil(course.cycle_time / (_FINEST * time_constant)))
    losses = warmer * _mean_losses(course, loss, parts)
    rises = periodic_rises(motor.thermal, losses.tolist(), [course.cycle_time / parts] * parts)
    return axis.ambient + rises.peak_winding


def mean_winding_temperature(
    cold_loss: float,
    body: TwoBody,
    ambient: float,
    stated_temperature: float,
    coefficient: float = COPPER_COEFFICIENT,
    coefficient_temperature: float = TWENTY_CELSIUS,
) -> float:
    """Temperature at which a winding whose resistance grows with it comes to rest.

    Parameters
        cold_loss [W]: with the resistance at the temperature where it was stated
        body: winding and housing
        ambient [K]: around the housing
        stated_temperature [K]: where the resistance was stated
        coefficient [1/K]: of copper
        coefficient_temperature [K]: to which the coefficient belongs
    Returns [K], infinite where the loss grows faster with the temperature than the heat flows off
    T = T_a + P·r(T)·(R_wh + R_ha), r(T) = r_0 + r_1·T the ratio of resistances
    Source: [own]
    """
    heating = cold_loss * (body.winding_housing + body.housing_ambient)
    at_zero = copper_resistance_ratio(0.0, stated_temperature, coefficient, coefficient_temperature)
    at_ambient = copper_resistance_ratio(ambient, stated_temperature, coefficient, coefficient_temperature)
    left = 1.0 - heating * (at_ambient - at_zero) / ambient
    return (ambient + heating * at_zero) / left if left > 0.0 else math.inf


def _mean_losses(course: Trace, loss: Array, parts: int) -> Array:
    """[W] Exact mean of the loss over equal parts of the cycle."""
    ends = np.cumsum(course.duration)
    times = course.cycle_time / parts * np.arange(1, parts + 1)
    row = np.minimum(np.searchsorted(ends, times), len(ends) - 1)
    inside = np.minimum(times - (ends[row] - course.duration[row]), course.duration[row])
    powers = np.arange(1.0, loss.shape[1] + 1.0)
    before = np.concatenate([[0.0], np.cumsum(course.integral(loss))])[row]
    sums = before + (loss[row] / powers * inside[:, None] ** powers).sum(axis=1)
    return np.diff(np.concatenate([[0.0], sums])) * parts / course.cycle_time
