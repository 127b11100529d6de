"""The chain of the mechanics, motor to load, as boxes in a row."""

from __future__ import annotations

from axis.description.drive import Drive
from axis.description.load import Load
from axis.description.motor import Motor
from axis.description.transmission import BallScrew, Gearbox
from axis.screens.look import Markup, text
from axis.sheet.shown import NOTHING, quantity_text
from axis.study import Study
from axis.units import digits_of


def chain(study: Study) -> Markup:
    """Drive, motor, every stage and the load, each with the figure that matters first."""
    axis = study.document.axis
    drive, motor = axis.drive, axis.motor
    boxes = [
        ("Drive", drive.use or quantity_text(drive.continuous_current, Drive, "continuous_current")),
        ("Motor", motor.use or quantity_text(motor.rated_torque, Motor, "rated_torque")),
    ]
    for stage in axis.transmission:
        boxes.append(_stage(stage))
    inertial = "inertia" if axis.rotary else "mass"
    load = quantity_text(getattr(axis.load, inertial), Load, inertial)
    heaviest = f" + up to {_payload(study)} payload" if axis.payloads else ""
    boxes.append(("Load", load + heaviest))
    inside = '<span aria-hidden="true">━</span>'.join(
        f"<div><b>{text(title)}</b>{text(figure)}</div>" for title, figure in boxes
    )
    return Markup(f'<div class="sp-chain" role="img" aria-label="{text(_in_words(boxes))}">{inside}</div>')


def _stage(stage: Gearbox | BallScrew) -> tuple[str, str]:
    if isinstance(stage, BallScrew):
        return "Ball screw", f"{quantity_text(stage.lead, BallScrew, 'lead')} a turn"
    return "Gearbox", f"{digits_of(stage.ratio, 4) if stage.ratio is not None else NOTHING} : 1"


def _payload(study: Study) -> str:
    rotary = study.document.axis.rotary
    return quantity_text(study.axis.heaviest_payload, Load, "inertia" if rotary else "mass")


def _in_words(boxes: list[tuple[str, str]]) -> str:
    return "From the drive to the load: " + "; ".join(f"{title}, {figure}" for title, figure in boxes)
