"""The motor as its data sheet states it, with the basis of every constant."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from axis.units import plain, quantity

CurrentBasis = Literal["rms", "peak"]
VoltageBasis = Literal["line-line rms", "line-line peak", "phase rms", "phase peak"]
WindingBasis = Literal["line-line", "phase"]

# The key that says the basis → the values that mean nothing without it.
BASES = {
    "torque_constant_basis": ("torque_constant",),
    "voltage_constant_basis": ("voltage_constant",),
    "winding_basis": ("resistance", "inductance", "saturated_inductance"),
    "current_basis": ("rated_current", "stall_current", "peak_current"),
}


@dataclass(frozen=True)
class Motor:
    """A rotary synchronous servo motor. None where the data sheet is silent."""

    use: str | None = plain("text", "Row of a motor catalogue", default=None, example='"DM-071-30"')
    torque_constant: float | None = quantity(
        "N*m/A",
        "Torque constant, in its stated basis",
        above=0,
        default=None,
        symbol="K_T",
        example='"0.72 N*m/A"',
    )
    torque_constant_basis: CurrentBasis | None = plain(
        "choice",
        "Current basis of the torque constant",
        choices=("rms", "peak"),
        default=None,
        example='"rms"',
    )
    voltage_constant: float | None = quantity(
        "V*s/rad",
        "Voltage constant, in its stated basis",
        shown="V/krpm",
        above=0,
        default=None,
        symbol="K_E",
        example='"43.5 V/krpm"',
    )
    voltage_constant_basis: VoltageBasis | None = plain(
        "choice",
        "Basis of the voltage constant",
        choices=("line-line rms", "line-line peak", "phase rms", "phase peak"),
        default=None,
        example='"line-line rms"',
    )
    resistance: float | None = quantity(
        "ohm",
        "Winding resistance, in its stated basis",
        above=0,
        default=None,
        symbol="R",
        example='"2.6 ohm"',
    )
    inductance: float | None = quantity(
        "H",
        "Winding inductance, in its stated basis",
        shown="mH",
        above=0,
        default=None,
        symbol="L",
        example='"9.4 mH"',
    )
    winding_basis: WindingBasis | None = plain(
        "choice",
        "Basis of resistance and inductance",
        choices=("line-line", "phase"),
        default=None,
        example='"line-line"',
    )
    saturated_inductance: float | None = quantity(
        "H",
        "Inductance at peak current, in the winding's basis",
        shown="mH",
        above=0,
        default=None,
        example='"7.5 mH"',
    )
    current_basis: CurrentBasis | None = plain(
        "choice", "Basis of the motor's currents", choices=("rms", "peak"), default=None, example='"rms"'
    )
    pole_pairs: int | None = plain("count", "Pole pairs", at_least=1, default=None, symbol="p", example="4")
    inertia: float | None = quantity(
        "kg*m^2",
        "Rotor inertia",
        shown="kg*cm^2",
        above=0,
        default=None,
        symbol="J_M",
        side="motor",
        example='"1.5 kg*cm^2"',
    )
    rated_torque: float | None = quantity(
        "N*m", "Continuous torque at rated speed", above=0, default=None, symbol="T_N", example='"2.4 N*m"'
    )
    rated_speed: float | None = quantity(
        "rad/s", "Rated speed", shown="rpm", above=0, default=None, symbol="n_N", example='"3000 rpm"'
    )
    rated_current: float | None = quantity(
        "A", "Continuous current at rated speed", above=0, default=None, symbol="I_N", example='"3.4 A"'
    )
    stall_torque: float | None = quantity(
        "N*m", "Continuous torque at standstill", above=0, default=None, symbol="T_0", example='"2.8 N*m"'
    )
    stall_current: float | None = quantity(
        "A", "Continuous current at standstill", above=0, default=None, symbol="I_0", example='"3.9 A"'
    )
    peak_torque: float | None = quantity(
        "N*m", "Peak torque", above=0, default=None, symbol="T_pk", example='"8.4 N*m"'
    )
    peak_current: float | None = quantity(
        "A", "Peak current (magnet limit)", above=0, default=None, symbol="I_pk", example='"13 A"'
    )
    max_speed: float | None = quantity(
        "rad/s",
        "Highest mechanical speed",
        shown="rpm",
        above=0,
        default=None,
        symbol="n_max",
        example='"5000 rpm"',
    )
    encoder_counts: int | None = plain(
        "count",
        "Encoder counts per revolution, after interpolation",
        at_least=1,
        default=None,
        example="1048576",
    )
    max_winding_temperature: float | None = quantity(
        "K", "Highest winding temperature", shown="degC", above=0, default=None, example='"140 degC"'
    )
    constants_temperature: float | None = quantity(
        "K",
        "Temperature at which the constants were measured",
        shown="degC",
        above=0,
        default=None,
        example='"20 degC"',
    )
    winding_housing: float | None = quantity(
        "K/W", "Thermal resistance from winding to housing", above=0, default=None, example='"0.35 K/W"'
    )
    housing_ambient: float | None = quantity(
        "K/W", "Thermal resistance from housing to ambient", above=0, default=None, example='"0.75 K/W"'
    )
    winding_time_constant: float | None = quantity(
        "s", "Thermal time constant of the winding", above=0, default=None, example='"60 s"'
    )
    housing_time_constant: float | None = quantity(
        "s", "Thermal time constant of the housing", above=0, default=None, example='"35 min"'
    )
