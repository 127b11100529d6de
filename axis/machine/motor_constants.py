"""Motor constants in their bases.

Inside, everything is in one basis: q-axis current as peak phase current, voltage as peak phase voltage, winding per
phase (star). There the torque constant is exactly 1.5 times the voltage constant of a sinusoidal motor.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import product
from typing import Literal

from axis.description.motor import CurrentBasis, VoltageBasis, WindingBasis

# Peak phase current over the current as stated; peak phase voltage over the voltage as stated.
CURRENT_FACTOR: dict[CurrentBasis, float] = {"rms": math.sqrt(2.0), "peak": 1.0}
VOLTAGE_FACTOR: dict[VoltageBasis, float] = {
    "line-line rms": math.sqrt(2.0 / 3.0),
    "line-line peak": 1.0 / math.sqrt(3.0),
    "phase rms": math.sqrt(2.0),
    "phase peak": 1.0,
}
WINDING_FACTOR: dict[WindingBasis, float] = {"line-line": 0.5, "phase": 1.0}

# Ratios that a confused basis leaves between the two constants, and their inverses.
BASIS_FACTORS = (math.sqrt(1.5), math.sqrt(2.0), math.sqrt(3.0), 2.0, math.sqrt(6.0))
NEAR_FACTOR = 0.06  # this close to a basis factor: the basis is wrong
AGREES = 0.02  # rounding of data sheets
DOUBTFUL = 0.15  # hot or saturated torque constant beside a cold no-load voltage constant


def current_to_peak(current: float, basis: CurrentBasis) -> float:
    """Current as peak phase current.

    Parameters
        current [A]: in its basis
        basis: "rms" or "peak"
    Returns [A]
    rms: √2·I
    Source: [own]
    """
    return current * CURRENT_FACTOR[basis]


def torque_constant_to_peak(torque_constant: float, basis: CurrentBasis) -> float:
    """Torque constant per peak q-axis current.

    Parameters
        torque_constant [N·m/A]: per ampere of its basis
        basis: "rms" or "peak"
    Returns [N·m/A]
    rms: K_T/√2
    Source: [own]
    """
    return torque_constant / CURRENT_FACTOR[basis]


def voltage_constant_to_phase_peak(voltage_constant: float, basis: VoltageBasis) -> float:
    """Voltage constant as peak phase voltage per mechanical angular speed.

    Parameters
        voltage_constant [V·s/rad]: in its basis
        basis: "line-line rms", "line-line peak", "phase rms" or "phase peak"
    Returns [V·s/rad]
    line-line rms: √(2/3)·K_E, line-line peak: K_E/√3, phase rms: √2·K_E
    Source: [own]
    """
    return voltage_constant * VOLTAGE_FACTOR[basis]


def winding_to_phase(value: float, basis: WindingBasis) -> float:
    """Resistance, or inductance, of one phase of the star.

    Parameters
        value [ohm or H]: in its basis
        basis: "line-line" or "phase"
    Returns [ohm or H]
    line-line: half
    Source: [own]; of an inductance where the phases do not couple with the rotor's angle
    """
    return value * WINDING_FACTOR[basis]


def torque_constant_from_flux(pole_pairs: float, flux: float) -> float:
    """Torque constant of a sinusoidal motor without reluctance torque.

    Parameters
        pole_pairs [1]: of the rotor
        flux [V·s]: peak flux linkage of one phase
    Returns [N·m/A] per peak q-axis current
    K_T = 1.5·p·ψ
    Source: [krishnan]
    """
    return 1.5 * pole_pairs * flux


def motor_constant(torque_constant: float, resistance: float) -> float:
    """Torque over the square root of the copper loss that it costs.

    Parameters
        torque_constant [N·m/A]: per peak q-axis current
        resistance [ohm]: of one phase
    Returns [N·m/W^0.5]
    K_M = K_T/√(1.5·R)
    Source: [own]
    """
    return torque_constant / math.sqrt(1.5 * resistance)


@dataclass(frozen=True)
class CrossCheck:
    """What the two constants of a motor say about each other."""

    kind: Literal["ok", "warning", "error"]
    ratio: float  # [1] torque constant over 1.5 times the voltage constant
    readings: tuple[tuple[CurrentBasis, VoltageBasis], ...]  # bases under which they would agree; errors only
    text: str  # a sentence; empty where they agree


def cross_check(
    torque_constant: float, voltage_constant: float, torque_basis: CurrentBasis, voltage_basis: VoltageBasis
) -> CrossCheck:
    """Compare torque and voltage constant; a confused basis shows as a telling ratio.

    Parameters
        torque_constant [N·m/A]: per peak q-axis current, as converted
        voltage_constant [V·s/rad]: peak phase voltage, as converted
        torque_basis: it was read in
        voltage_basis: it was read in
    Returns the finding
    r = K_T/(1.5·K_E). Within 6 % of √1.5, √2, √3, 2, √6 or an inverse: error with the readings that agree within
    6 %; else within 2 %: ok; within 15 %: warning; beyond: error
    Source: [own]
    """
    ratio = torque_constant / (1.5 * voltage_constant)
    share = f"the torque constant is {ratio:.3f} times what the voltage constant says"
    if any(abs(ratio / f - 1.0) <= NEAR_FACTOR or abs(ratio * f - 1.0) <= NEAR_FACTOR for f in BASIS_FACTORS):
        readings = _agreeing(ratio, torque_basis, voltage_basis)
        named = "; or as ".join(f'torque_constant_basis = "{t}", voltage_constant_basis = "{v}"' for t, v in readings)
        cure = f"they would agree as {named}" if readings else "no pair of bases makes them agree: look at both values"
        return CrossCheck("error", ratio, readings, f"{share}, a factor of confused bases; {cure}")
    if abs(ratio - 1.0) <= AGREES:
        return CrossCheck("ok", ratio, (), "")
    if abs(ratio - 1.0) <= DOUBTFUL:
        text = f"{share}; one of them may be hot or saturated, both are used as stated"
        return CrossCheck("warning", ratio, (), text)
    return CrossCheck("error", ratio, (), f"{share}; no reading of the bases makes them agree")


def _agreeing(
    ratio: float, torque_basis: CurrentBasis, voltage_basis: VoltageBasis
) -> tuple[tuple[CurrentBasis, VoltageBasis], ...]:
    """Readings under which the ratio comes within 6 % of one, those that change a single basis first and alone."""
    found: list[tuple[int, CurrentBasis, VoltageBasis]] = []
    for current, voltage in product(CURRENT_FACTOR, VOLTAGE_FACTOR):
        torque = CURRENT_FACTOR[torque_basis] / CURRENT_FACTOR[current]
        volts = VOLTAGE_FACTOR[voltage] / VOLTAGE_FACTOR[voltage_basis]
        if abs(ratio * torque / volts - 1.0) <= NEAR_FACTOR:
            found.append(((current != torque_basis) + (voltage != voltage_basis), current, voltage))
    fewest = min((changes for changes, _, _ in found), default=0)
    return tuple((current, voltage) for changes, current, voltage in found if changes == fewest)
