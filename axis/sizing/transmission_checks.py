"""Checks of every transmission stage: speed at its input, torque or force at its output."""

from __future__ import annotations

import math
from functools import partial

import numpy as np

from axis.description.transmission import BallScrew, Gearbox
from axis.sizing.finding import Corner, Finding, Rule
from axis.sizing.motor_checks import RPM, at_least, peaks
from axis.sizing.polynomials import gauss_nodes, value


def _stated(corner: Corner, stage: int) -> Gearbox | BallScrew:
    return corner.axis.stated.transmission[stage]


def _speed(stage: int, corner: Corner) -> Finding:
    limit = _stated(corner, stage).max_input_speed
    if limit is None:
        return Finding(missing=f"transmission[{stage + 1}].max_input_speed")
    course = corner.load.trace
    return peaks(corner, course.peaks(course.stage_speeds[stage]), limit)


def _peak(stage: int, key: str, corner: Corner) -> Finding:
    limit = getattr(_stated(corner, stage), key)
    if limit is None:
        return Finding(missing=f"transmission[{stage + 1}].{key}")
    course = corner.load.trace
    return peaks(corner, course.peaks(course.stage_outputs[stage]), limit)


def _nominal(stage: int, corner: Corner) -> Finding:
    limit = getattr(_stated(corner, stage), "nominal_torque", None)
    if limit is None:
        return Finding(missing=f"transmission[{stage + 1}].nominal_torque")
    return Finding(equivalent_torque(corner, stage), limit)


def equivalent_torque(corner: Corner, stage: int) -> float:
    """Cubic mean of the output torque over the turns of a gear stage.

    Parameters
        corner: the axis at one corner
        stage: counted from 0
    Returns [N·m]
    T = (∫|ω|·|T|³ dt/∫|ω| dt)^(1/3)
    Source: [common-practice]; by the life exponent 3 of bearings with balls
    """
    course = corner.load.trace
    nodes, weights = gauss_nodes(5)
    times = course.duration[:, None] * nodes
    speeds = np.abs(value(course.stage_speeds[stage], times))
    cubes = np.abs(value(course.stage_outputs[stage], times)) ** 3
    turns = float((course.duration * (speeds @ weights)).sum())
    return math.cbrt(float((course.duration * ((speeds * cubes) @ weights)).sum()) / turns) if turns > 0.0 else 0.0


def stage_rules(stage: int, kind: str) -> tuple[Rule, ...]:
    """The checks of stage number `stage`, counted from 0."""
    number = f"[{stage + 1}]"
    speed = Rule(
        f"stage_speed{number}",
        f"Input speed of stage {stage + 1}",
        "rad/s",
        "own",
        partial(_speed, stage),
        ("speed", "duration"),
        at_least("a stage for an input speed of at least {} rpm", RPM),
    )
    if kind == "ball_screw":
        force = Rule(
            f"screw_force{number}",
            f"Axial force of the ball screw, stage {stage + 1}",
            "N",
            "own",
            partial(_peak, stage, "max_force"),
            ("acceleration", "duration"),
            at_least("a screw for an axial force of at least {} N"),
        )
        return (speed, force)
    peak = Rule(
        f"gearbox_peak_torque{number}",
        f"Peak torque at the output of gearbox, stage {stage + 1}",
        "N*m",
        "own",
        partial(_peak, stage, "peak_torque"),
        ("acceleration", "duration"),
        at_least("a gearbox with a peak torque of at least {} N·m"),
    )
    nominal = Rule(
        f"gearbox_nominal_torque{number}",
        f"Cubic mean torque at the output of gearbox, stage {stage + 1}",
        "N*m",
        "common-practice",
        partial(_nominal, stage),
        ("acceleration", "duration"),
        at_least("a gearbox with a nominal torque of at least {} N·m"),
    )
    return (speed, peak, nominal)
