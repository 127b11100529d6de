"""The notch that the resonance needs: only as deep as needed, and none where none is needed."""

from __future__ import annotations

import math
from collections.abc import Sequence

from axis.completion import ShaftPlant
from axis.description.settings import TorqueFilter
from axis.mechanics.compliance import resonance, resonance_damping_ratio

PHASE_STABLE = math.pi / 3.0  # lag at the resonance up to which the mode stays 30 degrees clear of instability
DEEPEST = 0.05  # a deeper notch trusts the resonance to stay where it was computed
POLE_DAMPING = 0.5  # wide enough for the resonance to wander by a third
HIGHEST = 0.8  # of half the sampling rate: above it the bilinear notch is no longer the one that was drawn


def resonance_peak(
    kp: float, motor_inertia: float, load_inertia: float, frequency: float, damping_ratio: float
) -> float:
    """Gain of the velocity loop at the top of the resonance, its filters left out.

    Parameters
        kp [N·m·s/rad]: velocity loop
        motor_inertia [kg·m²]: motor side
        load_inertia [kg·m²]: load side
        frequency [rad/s]: of the resonance
        damping_ratio [1]: of the resonance
    Returns [1]
    Kp/(J_m + J_l)·J_l/J_m/(2·ζ_r·ω_r): the mode's share of the motor's velocity per torque
    Source: [own]; stops being true where ζ_r is above about 0.3
    """
    return kp / (motor_inertia + load_inertia) * load_inertia / motor_inertia / (2.0 * damping_ratio * frequency)


def needed_notch(
    plants: Sequence[ShaftPlant], kp: float, lag: float, gain_margin: float, velocity_period: float
) -> TorqueFilter | None:
    """One notch over the resonances of several plants, as deep as the worst of them needs.

    With the sensor at the motor the mode turns the loop's phase between +90° and −90°, less the lag of the loop at the
    resonance; while that lag is below 60° it cannot destabilise, whatever its height. Above, its peak must stay below
    1 by the gain margin.

    Parameters
        plants: the corners
        kp [N·m·s/rad]: of a design without this filter
        lag [s]: Tσ without this filter
        gain_margin [dB]: to keep
        velocity_period [s]: the filter runs at it
    Returns the notch at the middle of the resonances, or None
    depth = 10^(−gain_margin/20)/peak, at least 0.05
    Source: [own]
    """
    frequencies: list[float] = []
    depth = 1.0
    for plant in plants:
        if math.isinf(plant.stiffness):
            continue
        inertias = plant.motor_inertia, plant.load_inertia
        frequency = resonance(plant.stiffness, *inertias)
        frequencies.append(frequency)
        damping_ratio = resonance_damping_ratio(plant.stiffness, *inertias, plant.damping)
        if frequency * lag > PHASE_STABLE:
            height = resonance_peak(kp, *inertias, frequency, max(damping_ratio, 1e-3))
            depth = min(depth, 10.0 ** (-gain_margin / 20.0) / height)
    if depth >= 1.0:
        return None
    centre = math.sqrt(min(frequencies) * max(frequencies))
    if centre * velocity_period > HIGHEST * math.pi:
        return None
    return TorqueFilter(kind="notch", frequency=centre, width=2.0 * POLE_DAMPING * centre, depth=max(depth, DEEPEST))
