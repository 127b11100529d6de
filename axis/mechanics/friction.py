"""Friction of a sliding load as a function of its speed; the simulation compiles `stribeck` as it stands."""

from __future__ import annotations

import math


def stribeck(speed: float, coulomb: float, breakaway: float, stribeck_speed: float) -> float:
    """Size of the dry friction while sliding; it fades from break-away to Coulomb.

    Parameters
        speed [m/s or rad/s]: of the load, either sign
        coulomb [N or N·m]: Coulomb friction
        breakaway [N or N·m]: friction that must be overcome at rest, not below `coulomb`
        stribeck_speed [m/s or rad/s]: over which the excess falls to 1/e
    Returns [N or N·m], not negative
    F = F_C + (F_S − F_C)·exp(−(v/v_S)²)
    Source: [canudas1995]
    """
    return coulomb + (breakaway - coulomb) * math.exp(-((speed / stribeck_speed) ** 2))


def steady_friction(speed: float, coulomb: float, breakaway: float, stribeck_speed: float, viscous: float) -> float:
    """Friction force against the motion at constant speed; zero at rest, where it is whatever holds the load.

    Parameters
        speed [m/s or rad/s]: of the load, either sign
        coulomb [N or N·m]: Coulomb friction
        breakaway [N or N·m]: friction at rest
        stribeck_speed [m/s or rad/s]: over which the excess falls to 1/e
        viscous [N·s/m or N·m·s/rad]: grows with speed
    Returns [N or N·m], with the sign of the speed
    F = sign(v)·stribeck(v) + B·v
    Source: [canudas1995]
    """
    if speed == 0.0:
        return 0.0
    return math.copysign(stribeck(speed, coulomb, breakaway, stribeck_speed), speed) + viscous * speed
