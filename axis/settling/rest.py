"""Where the load can come to rest: what no setting can change."""

from __future__ import annotations

import math


def rest_band(breakaway_torque: float, stiffness: float, ratio: float) -> float:
    """Half width of the band in which friction can hold the load away from a motor that stands on its target.

    Parameters
        breakaway_torque [N·m]: of the load, at the motor shaft
        stiffness [N·m/rad]: between motor and load, at the motor shaft; infinite: rigid
        ratio [rad/m]: motor radians per load unit
    Returns [m]
    x = T_break/(k·|ratio|), which is the break-away force over the stiffness at the load
    Source: [own]; with the encoder at the motor
    """
    return 0.0 if math.isinf(stiffness) else breakaway_torque / (stiffness * abs(ratio))
