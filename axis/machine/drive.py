"""The drive's current-time bucket, its DC link and braking resistor, and the copper loss of the motor."""

from __future__ import annotations

import math


def bucket_capacity(continuous_current: float, peak_current: float, peak_time: float) -> float:
    """What the current-time bucket holds: peak current from empty is allowed for the peak time.

    Parameters
        continuous_current [A]: of the drive
        peak_current [A]: of the drive, same basis
        peak_time [s]: that the peak current is allowed from cold
    Returns [A²·s]; infinite where the peak current is not above the continuous one
    (I_pk² − I_cont²)·t_pk
    Source: [own]
    """
    if peak_current <= continuous_current:
        return math.inf
    return (peak_current**2 - continuous_current**2) * peak_time


def bucket_step(level: float, current: float, continuous_current: float, time: float) -> float:
    """Level of the current-time bucket after some time at one current. Plain arithmetic: the simulation compiles it.

    Parameters
        level [A²·s]: before
        current [A]: same basis as the continuous current
        continuous_current [A]: of the drive
        time [s]: at that current
    Returns [A²·s], not below zero
    max(0, level + (i² − I_cont²)·t)
    Source: [own]
    """
    return max(0.0, level + (current * current - continuous_current * continuous_current) * time)


def rectified_bus(supply_voltage: float) -> float:
    """DC-link voltage of a diode bridge without load.

    Parameters
        supply_voltage [V]: rms, line-line where three-phase
    Returns [V]
    √2·V
    Source: [own]; a loaded three-phase bridge falls to 3·√2/π = 1.35 times V
    """
    return math.sqrt(2.0) * supply_voltage


def link_energy(capacitance: float, low: float, high: float) -> float:
    """Energy that the DC link takes between two voltages.

    Parameters
        capacitance [F]: of the link
        low [V]: before
        high [V]: after
    Returns [J]
    C/2·(V_high² − V_low²)
    Source: [own]
    """
    return capacitance / 2.0 * (high**2 - low**2)


def copper_loss(current: float, resistance: float) -> float:
    """Loss in the three phases.

    Parameters
        current [A]: q-axis peak
        resistance [ohm]: of one phase
    Returns [W]
    1.5·R·i²
    Source: [own]
    """
    return 1.5 * resistance * current**2


def braking_energy(returned: float, taken_by_link: float) -> float:
    """Energy of one braking that the resistor must turn into heat.

    Parameters
        returned [J]: to the link, after copper and drive losses
        taken_by_link [J]: up to the chopper's voltage
    Returns [J], not negative
    max(0, E − E_link)
    Source: [own]; the link must have been emptied to its nominal voltage since the last braking
    """
    return max(0.0, returned - taken_by_link)


def mean_power(energy: float, period: float) -> float:
    """Mean power of an energy once a period, for instance of the braking resistor over one cycle.

    Parameters
        energy [J]: each period
        period [s]: of the cycle
    Returns [W]
    P = E/T
    Source: [own]
    """
    return energy / period


def chopper_power(chopper_voltage: float, resistance: float) -> float:
    """Power of the braking resistor while the chopper is on.

    Parameters
        chopper_voltage [V]: DC-link voltage at which it switches on
        resistance [ohm]: of the braking resistor
    Returns [W]
    V²/R
    Source: [own]
    """
    return chopper_voltage**2 / resistance
