"""The settings under test: what stands in the drive."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from axis.units import plain, quantity


@dataclass(frozen=True)
class CurrentLoop:
    """PI current controller, in q-axis peak quantities."""

    kp: float = quantity("V/A", "Proportional gain of the current loop", above=0, symbol="K_pi", example='"22 V/A"')
    ti: float = quantity("s", "Integral time of the current loop", shown="ms", above=0, at_most=10, example='"4.7 ms"')


@dataclass(frozen=True)
class VelocityLoop:
    """PI velocity controller at the motor shaft."""

    kp: float = quantity(
        "N*m*s/rad",
        "Proportional gain of the velocity loop",
        above=0,
        symbol="K_p",
        side="motor",
        example='"1.9 N*m*s/rad"',
    )
    ti: float = quantity(
        "s", "Integral time of the velocity loop", shown="ms", above=0, at_most=10, symbol="T_n", example='"6 ms"'
    )
    setpoint_weight: float = plain(
        "ratio",
        "Set-point weight of the velocity loop",
        at_least=0,
        at_most=1,
        default=1.0,
        symbol="b",
        example="0.4",
    )
    filter: float = quantity(
        "s",
        "Time constant of the velocity filter",
        shown="ms",
        at_least=0,
        default=0.0,
        symbol="T_f",
        example='"0.2 ms"',
    )


@dataclass(frozen=True)
class PositionLoop:
    """Proportional position controller."""

    kv: float = quantity(
        "1/s",
        "Position-loop gain",
        above=0,
        symbol="K_v",
        example='"85 1/s"',
        alternatives=(("m/min/mm", 1000.0 / 60.0),),
    )


@dataclass(frozen=True)
class Feedforward:
    """Shares of the move's own velocity and acceleration torque that are fed forward."""

    velocity: float = plain("ratio", "Velocity feedforward", at_least=0, at_most=2, default=1.0, example="1.0")
    torque: float = plain("ratio", "Torque feedforward", at_least=0, at_most=2, default=0.0, example="0.95")


@dataclass(frozen=True)
class TorqueFilter:
    """A filter in the torque path: low-pass of first order, or notch of finite depth."""

    kind: Literal["lowpass", "notch"] = plain("choice", "Kind of filter", choices=("lowpass", "notch"))
    frequency: float = quantity("rad/s", "Corner or centre frequency", shown="Hz", above=0, example='"210 Hz"')
    width: float | None = quantity("rad/s", "Width of the notch", shown="Hz", above=0, default=None, example='"60 Hz"')
    depth: float | None = plain(
        "ratio",
        "Gain that is left at the centre of the notch",
        above=0,
        at_most=1,
        default=None,
        example="0.1",
    )


@dataclass(frozen=True)
class Loops:
    """Everything that is set in the drive, SI, motor side."""

    current: CurrentLoop
    velocity: VelocityLoop
    position: PositionLoop
    feedforward: Feedforward = Feedforward()
    filters: tuple[TorqueFilter, ...] = ()
    move_jerk: tuple[float, ...] | None = quantity(
        "m/s^3",
        "Jerk limit of each move; overrides the move's own",
        rotary="rad/s^3",
        shown_rotary="deg/s^3",
        above=0,
        default=None,
        side="load",
        example='["300 m/s^3"]',
    )
