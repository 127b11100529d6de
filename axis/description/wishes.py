"""What is allowed to vary and what is wished of the tuning."""

from __future__ import annotations

from dataclasses import dataclass

from axis.units import plain, quantity


@dataclass(frozen=True)
class Tolerance:
    """Relative half widths of the values that vary from machine to machine; 0 where nothing is stated."""

    load_mass: float = plain("ratio", "Load mass or inertia, plus or minus", at_least=0, below=1, default=0.0)
    friction: float = plain("ratio", "All friction of the load, plus or minus", at_least=0, below=1, default=0.0)
    torque_constant: float = plain(
        "ratio", "Torque and voltage constant, plus or minus", at_least=0, below=1, default=0.0
    )
    stiffness: float = plain("ratio", "Stiffness of the transmission, plus or minus", at_least=0, below=1, default=0.0)
    supply_voltage: float = plain("ratio", "Supply voltage, plus or minus", at_least=0, below=1, default=0.0)


@dataclass(frozen=True)
class Tuning:
    """Margins to hold and the share of the window to keep back."""

    gain_margin_up: float = quantity("dB", "Gain margin upwards", at_least=0, default=6.0, example='"6 dB"')
    gain_margin_down: float = quantity("dB", "Gain margin downwards", at_least=0, default=6.0, example='"6 dB"')
    phase_margin: float = quantity(
        "rad", "Phase margin", shown="deg", at_least=0, default=0.5235987755982988, example='"30 deg"'
    )
    peak_sensitivity: float = plain("ratio", "Largest peak of the sensitivity", above=1, default=2.0, example="2.0")
    kept_back: float = plain(
        "ratio",
        "Share of the window that tuning does not use",
        at_least=0,
        below=1,
        default=0.1,
        example="0.1",
    )
    may_change: tuple[str, ...] = plain(
        "names",
        "Stated values of a move that tuning may change",
        choices=("jerk",),
        default=(),
        example='["jerk"]',
    )
