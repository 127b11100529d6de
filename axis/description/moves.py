"""The commanded moves and the window each of them must stop in."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from axis.units import plain, quantity

Law = Literal["jerk_limited", "constant_acceleration"]


@dataclass(frozen=True)
class Window:
    """The in-position window and what the machine asks of it."""

    position: float = quantity(
        "m",
        "Half width of the in-position window",
        rotary="rad",
        shown="um",
        shown_rotary="arcmin",
        above=0,
        side="load",
        example='"25 um"',
    )
    time: float = quantity(
        "s",
        "Time the drive must stay inside before it reports in position",
        shown="ms",
        at_least=0,
        at_most=60,
        default=0.0,
        example='"5 ms"',
    )
    settle_within: float | None = quantity(
        "s",
        "Settling time that is allowed after the commanded end",
        shown="ms",
        above=0,
        at_most=60,
        default=None,
        example='"30 ms"',
    )
    following_error: float | None = quantity(
        "m",
        "Largest following error allowed",
        rotary="rad",
        shown="mm",
        shown_rotary="deg",
        above=0,
        default=None,
        example='"1 mm"',
    )
    max_overshoot: float | None = quantity(
        "m",
        "Largest overshoot of the load beyond the target",
        rotary="rad",
        shown="um",
        shown_rotary="arcmin",
        at_least=0,
        default=None,
        side="load",
        example='"10 um"',
    )


@dataclass(frozen=True)
class Move:
    """One move of the cycle: by limits or by duration, then a dwell."""

    distance: float | None = quantity(
        "m",
        "Signed distance, relative",
        rotary="rad",
        shown="mm",
        shown_rotary="deg",
        default=None,
        side="load",
        example='"300 mm"',
    )
    to: float | None = quantity(
        "m",
        "Target position, absolute",
        rotary="rad",
        shown="mm",
        shown_rotary="deg",
        default=None,
        side="load",
        example='"300 mm"',
    )
    law: Law = plain(
        "choice",
        "Motion law",
        choices=("jerk_limited", "constant_acceleration"),
        default="jerk_limited",
        example='"jerk_limited"',
    )
    speed: float | None = quantity(
        "m/s",
        "Speed limit of the move",
        rotary="rad/s",
        shown_rotary="deg/s",
        above=0,
        default=None,
        side="load",
        example='"0.6 m/s"',
    )
    acceleration: float | None = quantity(
        "m/s^2",
        "Acceleration limit of the move",
        rotary="rad/s^2",
        shown_rotary="deg/s^2",
        above=0,
        default=None,
        side="load",
        example='"9 m/s^2"',
    )
    deceleration: float | None = quantity(
        "m/s^2",
        "Deceleration limit where it differs",
        rotary="rad/s^2",
        shown_rotary="deg/s^2",
        above=0,
        default=None,
        side="load",
        example='"7 m/s^2"',
    )
    jerk: float | None = quantity(
        "m/s^3",
        "Jerk limit of the move",
        rotary="rad/s^3",
        shown_rotary="deg/s^3",
        above=0,
        default=None,
        side="load",
        example='"300 m/s^3"',
    )
    duration: float | None = quantity(
        "s", "Duration of the move in place of its limits", above=0, at_most=600, default=None, example='"0.42 s"'
    )
    dwell: float = quantity("s", "Rest after the move", at_least=0, at_most=600, default=0.0, example='"0.25 s"')
    payload: str | None = plain("text", "Payload carried", default=None, example='"full tray"')
    force: float = quantity(
        "N", "Process force against positive travel", rotary="N*m", default=0.0, side="load", example='"0 N"'
    )
