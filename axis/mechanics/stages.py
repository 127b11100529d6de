"""One transmission stage: its ratio, what it reflects to its input, and the torque it takes."""

from __future__ import annotations

import math


def screw_ratio(lead: float) -> float:
    """Ratio of a screw: rotation of the screw for travel of the nut.

    Parameters
        lead [m]: travel per revolution; negative for a left-hand thread
    Returns [rad/m]
    i = 2π/lead
    Source: [own]
    """
    return 2.0 * math.pi / lead


def reflected_inertia(inertia: float, ratio: float) -> float:
    """Inertia at a stage's input of an inertia, or a mass, at its output.

    Parameters
        inertia [kg or kg·m²]: at the output
        ratio [rad/m or 1]: input motion over output motion, either sign
    Returns [kg·m²]
    J/i²
    Source: [own]
    """
    return inertia / ratio**2


def reflected_stiffness(stiffness: float, ratio: float) -> float:
    """Stiffness at a stage's input of a spring at its output.

    Parameters
        stiffness [N/m or N·m/rad]: at the output
        ratio [rad/m or 1]: input motion over output motion, either sign
    Returns [N·m/rad]
    k/i²
    Source: [own]
    """
    return stiffness / ratio**2


def transmitted(power: float, efficiency: float, efficiency_back: float) -> float:
    """Factor of a stage on the torque that it transmits, by the direction in which power flows.

    Parameters
        power [W]: that the stage gives to the load at its output; only its sign counts
        efficiency [1]: while the motor drives the load
        efficiency_back [1]: while the load drives the motor
    Returns [1]
    1/η for power > 0, η_back for power < 0, 1 at standstill
    Source: [own]; load-free friction is not in it, that is the stage's drag
    """
    if power > 0.0:
        return 1.0 / efficiency
    if power < 0.0:
        return efficiency_back
    return 1.0


def input_torque(
    output_torque: float, output_speed: float, ratio: float, efficiency: float, efficiency_back: float
) -> float:
    """Torque at a stage's input for a torque, or a force, that it gives at its output; without inertia and drag.

    Parameters
        output_torque [N or N·m]: given to what follows, positive along positive output motion
        output_speed [m/s or rad/s]: of the output; zero is standstill, held with η = 1
        ratio [rad/m or 1]: input motion over output motion, either sign
        efficiency [1]: while the motor drives the load
        efficiency_back [1]: while the load drives the motor
    Returns [N·m]
    T_in = T_out/i · (1/η, η_back or 1 by the sign of T_out·ω_out)
    Source: [own]
    """
    return output_torque / ratio * transmitted(output_torque * output_speed, efficiency, efficiency_back)
