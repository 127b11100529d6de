"""Velocity and position loop from a prototype: the closed loop's denominator made equal to it.

With Tσ the sum of the lags, J the total inertia, b the set-point weight and a = 1/T_n the closed loop's denominator is
s⁴ + s³/Tσ + Kp/(J·Tσ)·( s² + (a + b·Kv)·s + a·Kv ).
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

from axis.description.settings import Loops
from axis.errors import NotComputable


@dataclass(frozen=True)
class CascadeGains:
    """What the designs return."""

    kp: float  # [N·m·s/rad] velocity loop
    ti: float  # [s] velocity loop, T_n = 1/a
    kv: float  # [1/s] position loop
    setpoint_weight: float  # [1] b


def largest_setpoint_weight(c2: float, c1: float, c0: float) -> float:
    """The largest set-point weight for which a denominator can be reached.

    Parameters
        c2 [1/s²]: coefficient of s²
        c1 [1/s³]: coefficient of s
        c0 [1/s⁴]: constant coefficient
    Returns [1]
    b = c1²/(4·c0·c2); 0.56 for the published order 4; above 1 where a plain PI has a solution
    Source: [own]
    """
    return c1 * c1 / (4.0 * c0 * c2)


def gains_for_denominator(
    c2: float, c1: float, c0: float, inertia: float, lag: float, setpoint_weight: float
) -> CascadeGains:
    """The gains that give the closed loop the denominator s⁴ + s³/Tσ + c2·s² + c1·s + c0.

    Parameters
        c2 [1/s²]: coefficient of s²
        c1 [1/s³]: coefficient of s
        c0 [1/s⁴]: constant coefficient
        inertia [kg·m²]: total, at the shaft
        lag [s]: Tσ
        setpoint_weight [1]: b
    Returns the gains
    Kp = J·Tσ·c2; a + b·Kv = c1/c2; a·Kv = c0/c2. Of the two roots the one that stays finite at b → 0:
    a = ( c1/c2 + √( (c1/c2)² − 4·b·c0/c2 ) )/2
    Source: [own]; needs c1² ≥ 4·b·c0·c2
    """
    total = c1 / c2
    root = total * total - 4.0 * setpoint_weight * c0 / c2
    if root < 0.0:
        limit = largest_setpoint_weight(c2, c1, c0)
        raise NotComputable(f"no gains give this denominator with a set-point weight above {limit:.3g}")
    a = (total + math.sqrt(root)) / 2.0
    return CascadeGains(kp=inertia * lag * c2, ti=1.0 / a, kv=c0 / (c2 * a), setpoint_weight=setpoint_weight)


def order4_denominator(prototype: tuple[float, float, float], lag: float) -> tuple[float, float, float]:
    """Coefficients of s², s and 1 of an order-4 prototype on a given lag.

    Parameters
        prototype [1]: α, β, γ of s⁴ + α·s³ + β·s² + γ·s + 1
        lag [s]: Tσ, which alone fixes the speed: ω = 1/(α·Tσ)
    Returns [1/s²], [1/s³], [1/s⁴]
    β·ω², γ·ω³, ω⁴
    Source: [own]
    """
    alpha, beta, gamma = prototype
    omega = 1.0 / (alpha * lag)
    return beta * omega**2, gamma * omega**3, omega**4


def order3_denominator(prototype: tuple[float, float], omega: float, lag: float) -> tuple[float, float, float]:
    """Coefficients of s², s and 1 of an order-3 prototype with the real pole that a given lag leaves beside it.

    Parameters
        prototype [1]: α₃, β₃ of s³ + α₃·s² + β₃·s + 1
        omega [rad/s]: natural frequency ω, below 1/(α₃·Tσ); the slower, the more robust
        lag [s]: Tσ
    Returns [1/s²], [1/s³], [1/s⁴]: c2, c1, c0
    p = 1/Tσ − α₃·ω;  c2 = β₃·ω² + p·α₃·ω;  c1 = ω³ + p·β₃·ω²;  c0 = p·ω³
    Source: [own]; needs p > 0
    """
    alpha, beta = prototype
    pole = 1.0 / lag - alpha * omega
    if pole <= 0.0:
        raise NotComputable(
            f"an order-3 design on this lag needs a natural frequency below {1 / (alpha * lag):.4g} rad/s"
        )
    return beta * omega**2 + pole * alpha * omega, omega**3 + pole * beta * omega**2, pole * omega**3


def order4_design(
    prototype: tuple[float, float, float], inertia: float, lag: float, setpoint_weight: float
) -> CascadeGains:
    """The fastest design on a given lag: all four poles from the prototype.

    Parameters
        prototype [1]: α, β, γ
        inertia [kg·m²]: total, at the shaft
        lag [s]: Tσ
        setpoint_weight [1]: b, at most γ²/(4·β)
    Returns the gains
    Source: [own]; an order-4 prototype cannot be slowed on a given lag
    """
    return gains_for_denominator(*order4_denominator(prototype, lag), inertia, lag, setpoint_weight)


def order3_design(
    prototype: tuple[float, float], omega: float, inertia: float, lag: float, setpoint_weight: float
) -> CascadeGains:
    """The slowed design: three poles from the prototype at ω, the fourth real at 1/Tσ − α₃·ω.

    Parameters
        prototype [1]: α₃, β₃
        omega [rad/s]: natural frequency, lowered until the margins hold
        inertia [kg·m²]: total, at the shaft
        lag [s]: Tσ
        setpoint_weight [1]: b
    Returns the gains
    Source: [own]
    """
    return gains_for_denominator(*order3_denominator(prototype, omega, lag), inertia, lag, setpoint_weight)


def with_gains(loops: Loops, gains: CascadeGains) -> Loops:
    """The same settings with new gains of velocity and position loop."""
    velocity = replace(loops.velocity, kp=gains.kp, ti=gains.ti, setpoint_weight=gains.setpoint_weight)
    return replace(loops, velocity=velocity, position=replace(loops.position, kv=gains.kv))
