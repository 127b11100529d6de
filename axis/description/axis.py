"""The stated axis: everything one axis file says, in SI, before anything is assumed."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from axis.description.drive import Drive
from axis.description.load import Load, Payload
from axis.description.motor import Motor
from axis.description.moves import Move, Window
from axis.description.settings import Loops
from axis.description.transmission import Stage
from axis.description.wishes import Tolerance, Tuning
from axis.units import plain, quantity, table


@dataclass(frozen=True)
class Head:
    """What the axis is and where it stands."""

    name: str = plain("text", "Name of the axis", example='"Tray shuttle, X"')
    travel: Literal["linear", "rotary"] = plain(
        "choice", "Does the load travel in a line or turn", choices=("linear", "rotary"), example='"linear"'
    )
    incline: float = quantity(
        "rad",
        "Angle of positive travel above the horizontal",
        shown="deg",
        at_least=-1.5707963267948968,
        at_most=1.5707963267948968,
        default=0.0,
        example='"90 deg"',
    )
    ambient: float | None = quantity(
        "K", "Ambient temperature", shown="degC", above=0, default=None, example='"30 degC"'
    )
    indexes: bool = plain("flag", "The cycle need not end where it began", default=False)


@dataclass(frozen=True)
class Axis:
    """One stated axis. `loops` is None until settings were typed or tuned."""

    head: Head = table("axis")
    load: Load = table("load")
    motor: Motor = table("motor")
    drive: Drive = table("drive")
    window: Window = table("window")
    moves: tuple[Move, ...] = table("move")
    transmission: tuple[Stage, ...] = ()
    payloads: tuple[Payload, ...] = table("payload", default=())
    tolerance: Tolerance = Tolerance()
    tuning: Tuning = Tuning()
    loops: Loops | None = None

    @property
    def rotary(self) -> bool:
        return self.head.travel == "rotary"
