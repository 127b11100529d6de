"""Textbook settings, for comparison: the symmetrical optimum, slowed until the wished margins hold."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

from axis.description.settings import Feedforward, Loops
from axis.description.wishes import Tuning
from axis.errors import NotComputable
from axis.loops.design import CascadeGains, with_gains
from axis.loops.margins import margins_hold
from axis.loops.sampled import SampledPlant

SLOWEST = 1000.0  # division of the gains beyond which no design is sought


@dataclass(frozen=True)
class Textbook:
    """The settings and how far they had to be slowed."""

    loops: Loops
    slowed_by: float  # [1] common divisor of Kp, 1/T_n and Kv


def symmetrical_optimum(inertia: float, lag: float) -> CascadeGains:
    """Velocity and position loop by the symmetrical optimum with a = 2.

    Parameters
        inertia [kg·m²]: total, at the shaft
        lag [s]: Tσ
    Returns the gains, set-point weight 0
    Kp = J/(2·Tσ);  T_n = 4·Tσ;  Kv = 1/(16·Tσ)
    Source: [kessler1958]
    """
    return CascadeGains(kp=inertia / (2.0 * lag), ti=4.0 * lag, kv=1.0 / (16.0 * lag), setpoint_weight=0.0)


def slowed(gains: CascadeGains, divisor: float) -> CascadeGains:
    """Kp, 1/T_n and Kv divided by one factor.

    Parameters
        gains: as designed
        divisor [1]: 1 and more
    Returns the gains
    Source: [own]
    """
    return replace(gains, kp=gains.kp / divisor, ti=gains.ti * divisor, kv=gains.kv / divisor)


def slow_until_margins_hold(
    loops: Loops, gains: CascadeGains, corners: Sequence[SampledPlant], wishes: Tuning
) -> Textbook:
    """The smallest common divisor of the gains, in steps of 1 %, with which every corner holds the margins.

    Parameters
        loops: settings that stay: current loop, filters, feedforward
        gains: as designed
        corners: the sampled plants, current loop closed
        wishes: the margins
    Returns the settings and the divisor
    Source: [own]
    """
    for step in range(math.ceil(math.log(SLOWEST) / math.log(1.01))):
        divisor = 1.01**step
        candidate = with_gains(loops, slowed(gains, divisor))
        if all(margins_hold(corner, candidate, wishes) for corner in corners):
            return Textbook(candidate, divisor)
    raise NotComputable(f"even {SLOWEST:g} times slower the settings do not hold the wished margins at every corner")


def textbook_settings(
    loops: Loops, inertia: float, lag: float, corners: Sequence[SampledPlant], wishes: Tuning, torque_share: float
) -> Textbook:
    """Symmetrical optimum on the same lags, filters and inertia, with full velocity feedforward.

    Parameters
        loops: gives current loop, velocity filter, torque filters and move jerk
        inertia [kg·m²]: total, at the shaft
        lag [s]: Tσ, of the same filters
        corners: the sampled plants at which the margins must hold
        wishes: the margins
        torque_share [1]: torque feedforward, 1 where the drive has it, else 0
    Returns the settings and how far they had to be slowed
    Source: [own]
    """
    fed = replace(loops, feedforward=Feedforward(velocity=1.0, torque=torque_share))
    return slow_until_margins_hold(fed, symmetrical_optimum(inertia, lag), corners, wishes)
