"""The drive: currents, bus and the periods of its loops."""

from __future__ import annotations

from dataclasses import dataclass

from axis.description.motor import CurrentBasis
from axis.units import plain, quantity


@dataclass(frozen=True)
class Drive:
    """A servo drive. None where its data sheet is silent."""

    use: str | None = plain("text", "Row of a drive catalogue", default=None, example='"DD-08"')
    continuous_current: float | None = quantity(
        "A", "Continuous output current", above=0, default=None, example='"8 A"'
    )
    peak_current: float | None = quantity("A", "Peak output current", above=0, default=None, example='"20 A"')
    peak_time: float | None = quantity(
        "s", "Time the peak current is allowed from cold", above=0, default=None, example='"3 s"'
    )
    standstill_current: float | None = quantity(
        "A", "Continuous output current at standstill", above=0, default=None, example='"7 A"'
    )
    current_basis: CurrentBasis | None = plain(
        "choice", "Basis of the drive's currents", choices=("rms", "peak"), default=None, example='"rms"'
    )
    supply_voltage: float | None = quantity(
        "V", "Supply voltage, rms (line-line where three-phase)", above=0, default=None, example='"400 V"'
    )
    supply_phases: int | None = plain("count", "Phases of the supply", at_least=1, at_most=3, default=None, example="3")
    dc_link_min: float | None = quantity("V", "Lowest DC-link voltage", above=0, default=None, example='"480 V"')
    dc_link_nominal: float | None = quantity("V", "Nominal DC-link voltage", above=0, default=None, example='"560 V"')
    dc_link_max: float | None = quantity(
        "V", "DC-link voltage at which the drive trips", above=0, default=None, example='"820 V"'
    )
    chopper_on_voltage: float | None = quantity(
        "V",
        "DC-link voltage at which the braking chopper switches on",
        above=0,
        default=None,
        example='"760 V"',
    )
    dc_link_capacitance: float | None = quantity(
        "F", "DC-link capacitance", shown="uF", above=0, default=None, example='"470 uF"'
    )
    braking_resistor_resistance: float | None = quantity(
        "ohm", "Resistance of the braking resistor", above=0, default=None, example='"60 ohm"'
    )
    braking_resistor_power: float | None = quantity(
        "W", "Continuous power of the braking resistor", above=0, default=None, example='"100 W"'
    )
    modulation_limit: float | None = plain(
        "ratio",
        "Share of the voltage circle the drive uses",
        above=0,
        at_most=1,
        default=None,
        example="0.95",
    )
    current_period: float | None = quantity(
        "s", "Period of the current loop", shown="us", at_least=1e-6, at_most=0.01, default=None, example='"62.5 us"'
    )
    velocity_period: float | None = quantity(
        "s", "Period of the velocity loop", shown="us", at_least=1e-6, at_most=0.01, default=None, example='"125 us"'
    )
    position_period: float | None = quantity(
        "s", "Period of the position loop", shown="us", at_least=1e-6, at_most=0.01, default=None, example='"250 us"'
    )
    computation_delay: float | None = quantity(
        "s",
        "From sampling the current to the new voltage",
        shown="us",
        at_least=0,
        default=None,
        example='"62.5 us"',
    )
