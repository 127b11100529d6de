"""What is missing, or contradicts another value, once the parts of a stated axis stand together."""

from __future__ import annotations

import math
from collections.abc import Iterator

from axis.completion import CompletedMove, move_profile
from axis.description.axis import Axis
from axis.description.drive import Drive
from axis.description.motor import Motor
from axis.description.settings import Loops
from axis.description.transmission import BallScrew
from axis.errors import InputError, Problem
from axis.machine.motor_constants import (
    CrossCheck,
    cross_check,
    torque_constant_to_peak,
    voltage_constant_to_phase_peak,
)
from axis.units import Quantity, declarations, show

CURRENT_PERIOD = 62.5e-6  # [s] taken where the drive states none
LONGEST_MOVE = 600.0  # [s]


def contradictions(axis: Axis) -> list[Problem]:
    """What is missing or contradicts another value once the parts stand together.

    Also told of an axis of which not everything could be read: a part is then None, a value not a number.
    """
    found = [
        Problem(f"{path}.{name}", "is missing; the axis cannot be computed without it", example=f"{name} = {example}")
        for path, part, name, example in _needed(axis)
        if part is not None and getattr(part, name) is None
    ]
    if axis.drive is not None and axis.drive.supply_voltage is None and axis.drive.dc_link_nominal is None:
        rule = "is missing, and so is dc_link_nominal; the axis cannot be computed without one of them"
        found.append(Problem("drive.supply_voltage", rule, example='supply_voltage = "400 V"'))
    if axis.motor is not None:
        found += _motor_contradictions(axis.motor)
    if axis.loops is not None and axis.drive is not None:
        found += _notch_contradictions(axis.loops, axis.drive)
    return found


def _needed(axis: Axis) -> Iterator[tuple[str, object, str, str]]:
    """Path, part, key and example of every value that has no default."""
    for name, example in (("resistance", '"2.6 ohm"'), ("inductance", '"9.4 mH"'), ("inertia", '"1.5 kg*cm^2"')):
        yield "motor", axis.motor, name, example
    yield "drive", axis.drive, "continuous_current", '"8 A"'
    for n, stage in enumerate(axis.transmission, start=1):
        needed = ("lead", '"20 mm"') if isinstance(stage, BallScrew) else ("ratio", "3")
        yield f"transmission[{n}]", stage, *needed


def _notch_contradictions(loops: Loops, drive: Drive) -> list[Problem]:
    """A notch above half the sampling rate of the velocity loop cannot be set."""
    period = drive.velocity_period or 2.0 * (drive.current_period or CURRENT_PERIOD)
    found = []
    for n, one in enumerate(loops.filters, start=1):
        if one is not None and one.kind == "notch" and one.frequency >= math.pi / period:
            rule = f"is not below half the sampling rate of the velocity loop, {0.5 / period:.4g} Hz"
            value = f"{one.frequency / (2.0 * math.pi):.4g} Hz"
            found.append(Problem(f"loops.filters[{n}].frequency", rule, value, 'frequency = "210 Hz"'))
    return found


def _motor_contradictions(motor: Motor) -> list[Problem]:
    found = []
    if motor.torque_constant is None and motor.voltage_constant is None:
        rule = "is missing, and so is voltage_constant; the axis cannot be computed without one of them"
        right = 'torque_constant = "0.72 N*m/A" with torque_constant_basis = "rms"'
        found.append(Problem("motor.torque_constant", rule, example=right))
    if motor.peak_current is None and motor.peak_torque is None:
        rule = "is missing, and so is peak_torque; the axis cannot be computed without one of them"
        found.append(Problem("motor.peak_current", rule, example='peak_current = "13 A"'))
    checked = cross_checked(motor)
    if checked is not None and checked.kind == "error" and math.isfinite(checked.ratio):
        stated = _in_words(motor, "torque_constant", motor.torque_constant_basis)
        against = _in_words(motor, "voltage_constant", motor.voltage_constant_basis)
        right = ", ".join(
            f'torque_constant_basis = "{torque}" with voltage_constant_basis = "{voltage}"'
            for torque, voltage in checked.readings
        )
        text = checked.text.partition("; they would")[0]
        rule = f"contradicts the voltage constant, {against}: {text}"
        found.append(Problem("motor.torque_constant", rule, stated, right or "one of the two constants left out"))
    return found


def _in_words(motor: Motor, name: str, basis: str | None) -> str:
    declared = declarations(Motor)[name]
    assert isinstance(declared, Quantity)
    return f"{show(getattr(motor, name), declared, digits=4)} ({basis})"


def cross_checked(motor: Motor) -> CrossCheck | None:
    """The two constants against each other, where both are stated with their bases."""
    if motor.torque_constant is None or motor.voltage_constant is None:
        return None
    if not motor.torque_constant_basis or not motor.voltage_constant_basis:
        return None
    return cross_check(
        torque_constant_to_peak(motor.torque_constant, motor.torque_constant_basis),
        voltage_constant_to_phase_peak(motor.voltage_constant, motor.voltage_constant_basis),
        motor.torque_constant_basis,
        motor.voltage_constant_basis,
    )


def refuse_endless(moves: tuple[CompletedMove, ...]) -> None:
    """A slip in a speed or an acceleration makes a move of years: told, and not simulated sample by sample."""
    problems = []
    for n, move in enumerate(moves, start=1):
        lasts = move_profile(move).duration if move.duration is None else move.duration
        if not lasts <= LONGEST_MOVE:
            rule = f"takes {lasts:.3g} s with these limits; a move takes at most {LONGEST_MOVE:g} s"
            problems.append(Problem(f"move[{n}]", rule, "the move", 'speed = "0.6 m/s" and acceleration = "9 m/s^2"'))
    if problems:
        raise InputError(problems)
