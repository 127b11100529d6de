"""What is moved: the empty axis, its friction, and named payloads."""

from __future__ import annotations

from dataclasses import dataclass

from axis.units import plain, quantity


@dataclass(frozen=True)
class Friction:
    """Friction acting on the load while it slides and while it rests."""

    coulomb: float = quantity(
        "N",
        "Coulomb friction of the load",
        rotary="N*m",
        at_least=0,
        symbol="F_C",
        side="load",
        example='"22 N"',
    )
    breakaway: float | None = quantity(
        "N",
        "Break-away friction of the load",
        rotary="N*m",
        at_least=0,
        default=None,
        symbol="F_S",
        side="load",
        example='"31 N"',
    )
    viscous: float = quantity(
        "N*s/m",
        "Viscous friction of the load",
        rotary="N*m*s/rad",
        at_least=0,
        default=0.0,
        symbol="B",
        side="load",
        example='"45 N*s/m"',
    )
    stribeck_speed: float | None = quantity(
        "m/s",
        "Speed over which break-away friction fades",
        rotary="rad/s",
        shown="mm/s",
        shown_rotary="deg/s",
        above=0,
        default=None,
        symbol="v_S",
        side="load",
        example='"4 mm/s"',
    )


@dataclass(frozen=True)
class Load:
    """The moving part of the empty axis; `mass` where it travels in a line, `inertia` where it turns."""

    mass: float | None = quantity(
        "kg",
        "Moving mass of the empty axis",
        above=0,
        default=None,
        symbol="m",
        side="load",
        example='"38 kg"',
    )
    inertia: float | None = quantity(
        "kg*m^2",
        "Inertia of the empty axis about its centre of rotation",
        above=0,
        default=None,
        symbol="J_L",
        side="load",
        example='"0.12 kg*m^2"',
    )
    friction: Friction | None = None

    @property
    def inertial(self) -> float:
        """Mass [kg] or inertia [kg·m²], whichever the axis states."""
        value = self.mass if self.mass is not None else self.inertia
        assert value is not None
        return value


@dataclass(frozen=True)
class Payload:
    """A named addition to the load that moves refer to."""

    name: str = plain("text", "Name of the payload", example='"full tray"')
    mass: float | None = quantity(
        "kg", "Mass of the payload", at_least=0, default=None, symbol="m_P", side="load", example='"9 kg"'
    )
    inertia: float | None = quantity(
        "kg*m^2",
        "Inertia of the payload about the axis",
        at_least=0,
        default=None,
        symbol="J_P",
        side="load",
        example='"0.02 kg*m^2"',
    )

    @property
    def inertial(self) -> float:
        """Mass [kg] or inertia [kg·m²], whichever the payload states."""
        value = self.mass if self.mass is not None else self.inertia
        assert value is not None
        return value
