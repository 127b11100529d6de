"""Winding and housing as two thermal bodies, solved exactly over a repeated cycle of losses."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]


@dataclass(frozen=True)
class TwoBody:
    """Winding on housing on ambient."""

    winding_housing: float  # [K/W] thermal resistance
    housing_ambient: float  # [K/W] thermal resistance
    winding_capacity: float  # [J/K]
    housing_capacity: float  # [J/K]


def heat_capacity(time_constant: float, resistance: float) -> float:
    """Capacity of a body whose time constant is stated as the product with its own resistance.

    Parameters
        time_constant [s]: R·C of the body alone
        resistance [K/W]: towards the next body
    Returns [J/K]
    C = τ/R
    Source: [own]
    """
    return time_constant / resistance


def steady_rises(body: TwoBody, loss: float) -> tuple[float, float]:
    """Temperature rises of winding and housing above ambient under a constant loss.

    Parameters
        body: the two bodies
        loss [W]: in the winding
    Returns [K], [K]
    P·(R_wh + R_ha), P·R_ha
    Source: [own]
    """
    return loss * (body.winding_housing + body.housing_ambient), loss * body.housing_ambient


def natural_rates(body: TwoBody) -> tuple[float, float]:
    """The two rates at which differences fade, fast one first.

    Parameters
        body: the two bodies
    Returns [1/s], [1/s]
    −λ of C_w·ΔT_w' = P − (ΔT_w − ΔT_h)/R_wh and C_h·ΔT_h' = (ΔT_w − ΔT_h)/R_wh − ΔT_h/R_ha
    Source: [own]
    """
    matrix = _matrix(body)
    half = -0.5 * float(matrix[0, 0] + matrix[1, 1])
    product = 1.0 / (body.winding_capacity * body.housing_capacity * body.winding_housing * body.housing_ambient)
    fast = half + math.sqrt(half**2 - product)
    return fast, product / fast


def rises_after(body: TwoBody, start: tuple[float, float], loss: float, time: float) -> tuple[float, float]:
    """Temperature rises after some time of constant loss.

    Parameters
        body: the two bodies
        start [K]: rises of winding and housing at the start
        loss [W]: in the winding
        time [s]: since the start
    Returns [K], [K]
    x∞ + exp(M·t)·(x_0 − x∞), the exponential by Sylvester's formula
    Source: [own]
    """
    steady = np.array(steady_rises(body, loss))
    result = steady + _exponential(body, time) @ (np.array(start) - steady)
    return float(result[0]), float(result[1])


@dataclass(frozen=True)
class PeriodicRises:
    """Rises above ambient once the cycle has been repeated for ever."""

    winding: tuple[float, ...]  # [K] at the start of each piece of the cycle
    housing: tuple[float, ...]  # [K]
    peak_winding: float  # [K] hottest instant of the cycle: always where two pieces meet
    peak_housing: float  # [K] hottest of the instants where two pieces meet


def periodic_rises(body: TwoBody, losses: Sequence[float], durations: Sequence[float]) -> PeriodicRises:
    """Periodic temperature rises under a repeated cycle of piecewise constant losses.

    Parameters
        body: the two bodies
        losses [W]: of each piece
        durations [s]: of each piece
    Returns the rises
    fixed point x = Φ·x + b of the map over one cycle. Where the winding turns inside a piece, the housing is falling
    from a maximum at which the winding was hotter, so that the hottest instant lies where two pieces meet
    Source: [own]; losses that do not depend on the temperature
    """
    total, offset = np.eye(2), np.zeros(2)
    for loss, duration in zip(losses, durations, strict=True):
        step, steady = _exponential(body, duration), np.array(steady_rises(body, loss))
        total, offset = step @ total, step @ (offset - steady) + steady
    state = np.linalg.solve(np.eye(2) - total, offset)
    rises = [(float(state[0]), float(state[1]))]
    for loss, duration in zip(losses, durations, strict=True):
        rises.append(rises_after(body, rises[-1], loss, duration))
    return PeriodicRises(
        winding=tuple(one for one, _ in rises[:-1]),
        housing=tuple(one for _, one in rises[:-1]),
        peak_winding=max(one for one, _ in rises),
        peak_housing=max(one for _, one in rises),
    )


def _matrix(body: TwoBody) -> Array:
    inner, outer = 1.0 / body.winding_housing, 1.0 / body.housing_ambient
    return np.array(
        [
            [-inner / body.winding_capacity, inner / body.winding_capacity],
            [inner / body.housing_capacity, -(inner + outer) / body.housing_capacity],
        ]
    )


def _exponential(body: TwoBody, time: float) -> Array:
    """exp(M·t) = (e^{−f·t}·(M + s) − e^{−s·t}·(M + f))/(s − f); the two rates always differ."""
    fast, slow = natural_rates(body)
    matrix, unit = _matrix(body), np.eye(2)
    weighted = math.exp(-fast * time) * (matrix + slow * unit) - math.exp(-slow * time) * (matrix + fast * unit)
    result: Array = weighted / (slow - fast)
    return result
