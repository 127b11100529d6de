"""Springs in series and the two inertias on one spring, all at the motor shaft."""

from __future__ import annotations

import math
from collections.abc import Iterable


def springs_in_series(stiffnesses: Iterable[float]) -> float:
    """Stiffness of springs in series, all referred to one shaft; no spring at all is rigid.

    Parameters
        stiffnesses [N·m/rad]: each, infinite where rigid
    Returns [N·m/rad]
    1/k = Σ 1/k_i
    Source: [own]
    """
    compliance = sum(1.0 / stiffness for stiffness in stiffnesses)
    return 1.0 / compliance if compliance > 0.0 else math.inf


def reduced_inertia(motor_inertia: float, load_inertia: float) -> float:
    """The inertia that swings against the spring when both ends are free.

    Parameters
        motor_inertia [kg·m²]: motor side
        load_inertia [kg·m²]: load side
    Returns [kg·m²]
    J_m·J_l/(J_m + J_l)
    Source: [own]
    """
    return motor_inertia * load_inertia / (motor_inertia + load_inertia)


def antiresonance(stiffness: float, load_inertia: float) -> float:
    """Angular frequency at which the load swings while the motor rests; undamped.

    Parameters
        stiffness [N·m/rad]: of the spring
        load_inertia [kg·m²]: load side
    Returns [rad/s]
    ω_ar = √(k/J_l)
    Source: [own]
    """
    return math.sqrt(stiffness / load_inertia)


def resonance(stiffness: float, motor_inertia: float, load_inertia: float) -> float:
    """Angular frequency at which both inertias swing against each other; undamped.

    Parameters
        stiffness [N·m/rad]: of the spring
        motor_inertia [kg·m²]: motor side
        load_inertia [kg·m²]: load side
    Returns [rad/s]
    ω_r = √(k·(J_m + J_l)/(J_m·J_l)) = ω_ar·√(1 + J_l/J_m)
    Source: [own]
    """
    return math.sqrt(stiffness / reduced_inertia(motor_inertia, load_inertia))


def spring_damping(stiffness: float, motor_inertia: float, load_inertia: float, damping_ratio: float) -> float:
    """Damper beside the spring that gives the resonance its damping ratio; none where the spring is rigid.

    Parameters
        stiffness [N·m/rad]: of the spring
        motor_inertia [kg·m²]: motor side
        load_inertia [kg·m²]: load side
        damping_ratio [1]: of the resonance
    Returns [N·m·s/rad]
    d = 2·ζ·√(k·J_m·J_l/(J_m + J_l))
    Source: [own]
    """
    if math.isinf(stiffness):
        return 0.0
    return 2.0 * damping_ratio * math.sqrt(stiffness * reduced_inertia(motor_inertia, load_inertia))


def resonance_damping_ratio(stiffness: float, motor_inertia: float, load_inertia: float, damping: float) -> float:
    """Damping ratio of the resonance, the way back from `spring_damping`.

    Parameters
        stiffness [N·m/rad]: of the spring
        motor_inertia [kg·m²]: motor side
        load_inertia [kg·m²]: load side
        damping [N·m·s/rad]: of the damper beside the spring
    Returns [1]
    ζ_r = d/(2·√(k·J_m·J_l/(J_m + J_l)))
    Source: [own]
    """
    return damping / (2.0 * math.sqrt(stiffness * reduced_inertia(motor_inertia, load_inertia)))


def antiresonance_damping_ratio(stiffness: float, load_inertia: float, damping: float) -> float:
    """Damping ratio of the antiresonance.

    Parameters
        stiffness [N·m/rad]: of the spring
        load_inertia [kg·m²]: load side
        damping [N·m·s/rad]: of the damper beside the spring
    Returns [1]
    ζ_ar = d/(2·√(k·J_l))
    Source: [own]
    """
    return damping / (2.0 * math.sqrt(stiffness * load_inertia))
