"""The stages between motor and load, in order from the motor."""

from __future__ import annotations

from dataclasses import dataclass

from axis.units import plain, quantity


@dataclass(frozen=True)
class Gearbox:
    """A gear stage. Inertia, drag and speed limit at its input; stiffness, damping and torque limits at its output."""

    kind: str = plain("choice", "Kind of stage", choices=("gearbox",), default="gearbox", example='"gearbox"')
    use: str | None = plain("text", "Row of a gearbox catalogue", default=None, example='"DG-064-05"')
    ratio: float | None = plain(
        "ratio",
        "Input speed over output speed; negative where the output turns the other way",
        default=None,
        symbol="i",
        example="3",
    )
    inertia: float | None = quantity(
        "kg*m^2",
        "Inertia of the gearbox at its input",
        shown="kg*cm^2",
        at_least=0,
        default=None,
        example='"0.3 kg*cm^2"',
    )
    efficiency: float | None = plain(
        "ratio",
        "Efficiency while the motor drives the load",
        above=0,
        at_most=1,
        default=None,
        symbol="η",
        example="0.96",
    )
    efficiency_back: float | None = plain(
        "ratio",
        "Efficiency while the load drives the motor",
        above=0,
        at_most=1,
        default=None,
        example="0.95",
    )
    stiffness: float | None = quantity(
        "N*m/rad",
        "Torsional stiffness at the output",
        shown="N*m/arcmin",
        above=0,
        default=None,
        symbol="k",
        example='"9 N*m/arcmin"',
    )
    damping_ratio: float | None = plain(
        "ratio",
        "Damping ratio of the stage's spring against the load",
        at_least=0,
        at_most=1,
        default=None,
        symbol="ζ",
        example="0.02",
    )
    drag: float | None = quantity(
        "N*m", "Load-free drag torque at the input", at_least=0, default=None, example='"0.06 N*m"'
    )
    nominal_torque: float | None = quantity(
        "N*m", "Nominal torque at the output", above=0, default=None, example='"45 N*m"'
    )
    peak_torque: float | None = quantity(
        "N*m", "Acceleration (peak) torque at the output", above=0, default=None, example='"70 N*m"'
    )
    max_input_speed: float | None = quantity(
        "rad/s", "Highest input speed", shown="rpm", above=0, default=None, example='"6000 rpm"'
    )


@dataclass(frozen=True)
class BallScrew:
    """A ball screw. Inertia, drag and speed limit at the screw; stiffness, damping and force limits at the nut."""

    kind: str = plain("choice", "Kind of stage", choices=("ball_screw",), default="ball_screw", example='"ball_screw"')
    lead: float | None = quantity(
        "m", "Lead of the screw", shown="mm", above=0, default=None, symbol="h", example='"20 mm"'
    )
    left_hand: bool = plain("flag", "Left-hand thread: positive rotation moves the nut backwards", default=False)
    diameter: float | None = quantity(
        "m", "Diameter of the screw", shown="mm", above=0, default=None, symbol="d", example='"25 mm"'
    )
    length: float | None = quantity("m", "Length of the screw", shown="mm", above=0, default=None, example='"1.1 m"')
    inertia: float | None = quantity(
        "kg*m^2", "Inertia of the screw", shown="kg*cm^2", at_least=0, default=None, example='"1.1 kg*cm^2"'
    )
    efficiency: float | None = plain(
        "ratio",
        "Efficiency while the motor drives the load",
        above=0,
        at_most=1,
        default=None,
        symbol="η",
        example="0.92",
    )
    efficiency_back: float | None = plain(
        "ratio",
        "Efficiency while the load drives the motor",
        above=0,
        at_most=1,
        default=None,
        example="0.90",
    )
    stiffness: float | None = quantity(
        "N/m",
        "Axial stiffness of screw, nut and bearings at the nut",
        shown="N/um",
        above=0,
        default=None,
        symbol="k",
        example='"60 N/um"',
    )
    damping_ratio: float | None = plain(
        "ratio",
        "Damping ratio of the stage's spring against the load",
        at_least=0,
        at_most=1,
        default=None,
        symbol="ζ",
        example="0.02",
    )
    drag: float | None = quantity(
        "N*m",
        "Load-free drag torque of nut and bearings at the screw",
        at_least=0,
        default=None,
        example='"0.06 N*m"',
    )
    max_input_speed: float | None = quantity(
        "rad/s", "Highest speed of the screw", shown="rpm", above=0, default=None, example='"3000 rpm"'
    )
    max_force: float | None = quantity("N", "Highest axial force", above=0, default=None, example='"6 kN"')


Stage = Gearbox | BallScrew
