"""The unknowns of the search: a point of the unit cube to settings, each scaled by what the axis is."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt

from axis.completion import CompletedAxis, ShaftPlant, move_profile
from axis.description.settings import Feedforward, Loops, PositionLoop, TorqueFilter, VelocityLoop
from axis.mechanics.compliance import antiresonance, resonance

Array = npt.NDArray[np.float64]

DIGITS = 4  # significant digits kept of every setting


@dataclass(frozen=True)
class Variable:
    """One unknown between its bounds."""

    name: str
    low: float
    high: float
    logarithmic: bool

    def value(self, share: float) -> float:
        """The value at `share` of the way from `low` to `high`."""
        if self.logarithmic:
            return float(self.low * (self.high / self.low) ** share)
        return self.low + share * (self.high - self.low)

    def share(self, value: float) -> float:
        """The way back, clipped to the bounds."""
        clipped = min(max(value, self.low), self.high)
        if self.logarithmic:
            return math.log(clipped / self.low) / math.log(self.high / self.low)
        return (clipped - self.low) / (self.high - self.low)


@dataclass(frozen=True)
class Space:
    """All unknowns of one axis; `start` carries what is not searched: current loop and velocity filter."""

    axis: CompletedAxis
    start: Loops
    variables: tuple[Variable, ...]

    def loops(self, point: Array) -> Loops:
        """The settings at a point of the unit cube."""
        at = {one.name: one.value(float(share)) for one, share in zip(self.variables, point, strict=True)}
        filters = [TorqueFilter(kind="lowpass", frequency=at["lowpass"])]
        if "notch" in at:
            centre = at["notch"]
            width = 2.0 * at["notch_damping"] * centre
            filters.append(TorqueFilter(kind="notch", frequency=centre, width=width, depth=at["notch_depth"]))
        jerk = self.start.move_jerk
        if "jerk_time" in at:
            jerk = jerks(self.axis, at["jerk_time"])
        return Loops(
            current=self.start.current,
            velocity=VelocityLoop(
                kp=at["kp"], ti=at["ti"], setpoint_weight=at["weight"], filter=self.start.velocity.filter
            ),
            position=PositionLoop(kv=at["kv"]),
            feedforward=Feedforward(velocity=at["velocity_feedforward"], torque=at["torque_feedforward"]),
            filters=tuple(filters),
            move_jerk=jerk,
        )

    def point(self, loops: Loops, jerk_time: float) -> Array:
        """The point of the unit cube nearest to settings."""
        lowpass = next((one for one in loops.filters if one.kind == "lowpass"), None)
        notch = next((one for one in loops.filters if one.kind == "notch"), None)
        at = {
            "kp": loops.velocity.kp,
            "ti": loops.velocity.ti,
            "kv": loops.position.kv,
            "weight": loops.velocity.setpoint_weight,
            "velocity_feedforward": loops.feedforward.velocity,
            "torque_feedforward": loops.feedforward.torque,
            "lowpass": lowpass.frequency if lowpass is not None else math.inf,
            "notch": notch.frequency if notch is not None else 0.0,
            "notch_depth": (notch.depth if notch is not None else None) or 1.0,
            "notch_damping": 0.5 * (notch.width or notch.frequency) / notch.frequency if notch is not None else 0.1,
            "jerk_time": jerk_time,
        }
        return np.array([one.share(at[one.name]) for one in self.variables])


def jerks(axis: CompletedAxis, jerk_time: float) -> tuple[float, ...]:
    """One jerk a move: full acceleration after `jerk_time` [s] where the jerk is open, else as stated.

    A move without a jerk limit takes a placeholder of its acceleration over the jerk time, which no law uses.
    Returns [m/s³ or rad/s³]
    Source: [own]
    """
    values = []
    for move in axis.moves:
        if move.jerk is not None and not move.jerk_open:
            values.append(move.jerk)
        else:
            values.append((move.acceleration or 1.0) / jerk_time)
    return tuple(values)


def space(axis: CompletedAxis, start: Loops, lag: float) -> Space:
    """The unknowns of an axis, their bounds scaled by inertia, lag [s], resonance and moves.

    Source: [own]
    """
    plant = axis.plant(axis.heaviest_payload)
    empty = axis.plant()
    nyquist = math.pi / axis.drive.rates.velocity_period
    most = 2.0 * empty.total_inertia / lag
    variables = [
        Variable("kp", most * 0.0015, most, True),
        Variable("ti", 1e-3, 1.0, True),
        Variable("kv", 3.0, 800.0, True),
        Variable("weight", 0.0, 1.0, False),
        Variable("velocity_feedforward", 0.5, 1.3, False),
        Variable("torque_feedforward", 0.0, 1.3, False),
        Variable("lowpass", 2.0 * math.pi * 80.0, min(2.0 * math.pi * 3000.0, 0.9 * nyquist), True),
    ]
    if math.isfinite(plant.stiffness):
        variables += _notch(plant, empty, nyquist)
    if any(move.jerk_open for move in axis.moves):
        longest = 0.45 * min(move_profile(move).duration for move in axis.moves if move.jerk_open)
        variables.append(Variable("jerk_time", 0.5e-3, longest, True))
    return Space(axis, start, tuple(variables))


def _notch(plant: ShaftPlant, empty: ShaftPlant, nyquist: float) -> list[Variable]:
    low = antiresonance(plant.stiffness, plant.load_inertia)
    high = 2.5 * resonance(empty.stiffness, empty.motor_inertia, empty.load_inertia)
    return [
        Variable("notch", min(low, 0.5 * nyquist), min(high, 0.8 * nyquist), True),
        Variable("notch_depth", 0.02, 1.0, True),
        Variable("notch_damping", 0.1, 1.5, True),
    ]


def rounded(loops: Loops, rotary: bool = False) -> Loops:
    """The settings with the digits a person types: frequencies in hertz, the jerk of a turning axis in degrees."""

    def keep(value: float) -> float:
        return float(f"{value:.{DIGITS}g}")

    def hertz(value: float) -> float:
        return 2.0 * math.pi * keep(value / (2.0 * math.pi))

    def jerk(value: float) -> float:
        return math.radians(keep(math.degrees(value))) if rotary else keep(value)

    return Loops(
        current=replace(loops.current, kp=keep(loops.current.kp), ti=keep(loops.current.ti)),
        velocity=VelocityLoop(
            kp=keep(loops.velocity.kp),
            ti=keep(loops.velocity.ti),
            setpoint_weight=keep(loops.velocity.setpoint_weight),
            filter=keep(loops.velocity.filter),
        ),
        position=PositionLoop(kv=keep(loops.position.kv)),
        feedforward=Feedforward(keep(loops.feedforward.velocity), keep(loops.feedforward.torque)),
        filters=tuple(
            replace(
                one,
                frequency=hertz(one.frequency),
                width=None if one.width is None else hertz(one.width),
                depth=None if one.depth is None else keep(one.depth),
            )
            for one in loops.filters
        ),
        move_jerk=None if loops.move_jerk is None else tuple(jerk(value) for value in loops.move_jerk),
    )
