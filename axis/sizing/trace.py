"""The exact course of speed and torque over one cycle, moves and dwells, as polynomials in time.

Between two set-point pieces the acceleration is linear and the speed quadratic in time, so that every torque of the
chain is quadratic too as long as no friction and no flow of power turns round. Segments are cut where one does.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
import numpy.typing as npt

from axis.completion import CompletedAxis, move_profile
from axis.mechanics.reflection import StageFloats
from axis.mechanics.stages import transmitted
from axis.sizing.polynomials import Array, Whole, cut, gauss_nodes, largest, roots, shifted, value


@dataclass(frozen=True)
class Trace:
    """One cycle at the motor shaft and at the output of every stage; row n of each array belongs to segment n."""

    duration: Array  # [s]
    move: Whole  # to which move, counted from 0, the segment belongs, its dwell included
    resting: npt.NDArray[np.bool_]  # commanded rest
    speed: Array  # [rad/s] of the motor, polynomial
    torque: Array  # [N·m] of the motor, polynomial
    stage_speeds: tuple[Array, ...]  # [rad/s] at each stage's input, polynomials
    stage_outputs: tuple[Array, ...]  # [N·m] or [N] at each stage's output, polynomials

    @cached_property
    def cycle_time(self) -> float:
        """[s]"""
        return float(self.duration.sum())

    def integral(self, polynomial: Array) -> Array:
        """Integral of a polynomial over each segment."""
        powers = np.arange(1.0, polynomial.shape[1] + 1.0)
        return np.asarray((polynomial / powers * self.duration[:, None] ** powers).sum(axis=1))

    def mean_square(self, polynomial: Array) -> float:
        """Mean of the square of a quadratic over the cycle; Gauss-Legendre with three nodes is exact to degree 5."""
        nodes, weights = gauss_nodes(3)
        values = value(polynomial, self.duration[:, None] * nodes)
        return float((self.duration * (values**2 @ weights)).sum() / self.cycle_time)

    def peaks(self, polynomial: Array) -> Array:
        """Largest absolute value in each segment."""
        return np.abs(np.maximum(largest(polynomial, self.duration), largest(-polynomial, self.duration)))

    @cached_property
    def peak_torques(self) -> Array:
        """[N·m] largest |torque| of the motor in each segment."""
        return self.peaks(self.torque)

    @cached_property
    def peak_speeds(self) -> Array:
        """[rad/s] largest |speed| of the motor in each segment."""
        return self.peaks(self.speed)

    @cached_property
    def rms_torque(self) -> float:
        """[N·m] of the motor, over moves and dwells."""
        return math.sqrt(self.mean_square(self.torque))

    def mean_absolute_speed(self) -> float:
        """[rad/s] mean of |speed| over the cycle."""
        return float(np.abs(self.integral(self.speed)).sum() / self.cycle_time)


@dataclass(frozen=True)
class _Course:
    """Segments on the way from the load to the motor."""

    duration: Array
    move: Whole
    resting: npt.NDArray[np.bool_]
    speed: Array  # of the load
    acceleration: Array  # of the load
    torque: Array  # where the way has come to
    outputs: tuple[Array, ...]

    def cut_where(self, polynomial: Array) -> _Course:
        """The same course, cut where the polynomial changes its sign."""
        found = roots(polynomial, self.duration)
        if np.isnan(found).all():
            return self
        row, start, duration = cut(self.duration, found)

        def part(coefficients: Array) -> Array:
            return shifted(coefficients[row], start)

        return _Course(
            duration,
            self.move[row],
            self.resting[row],
            part(self.speed),
            part(self.acceleration),
            part(self.torque),
            tuple(part(output) for output in self.outputs),
        )

    def sign(self, polynomial: Array) -> Array:
        return np.asarray(np.sign(value(polynomial, 0.5 * self.duration)))


def _commanded(axis: CompletedAxis) -> _Course:
    """The set-points of the cycle: [duration, speed, acceleration] of every piece and dwell, at the load."""
    pieces, moves = [], []
    for n, move in enumerate(axis.moves):
        profile = np.asarray(move_profile(move).pieces)
        profile = profile[profile[:, 0] > 0.0]
        pieces.append(profile)
        moves += [n] * len(profile)
        if move.dwell > 0.0:
            pieces.append(np.array([[move.dwell, 0.0, 0.0, 0.0, 0.0]]))
            moves.append(n)
    table = np.concatenate(pieces)
    nothing = np.zeros(len(table))
    return _Course(
        duration=table[:, 0],
        move=np.array(moves, dtype=np.int64),
        resting=np.asarray(~table[:, 2:].any(axis=1)),
        speed=np.stack([table[:, 2], table[:, 3], 0.5 * table[:, 4]], axis=1),
        acceleration=np.stack([table[:, 3], table[:, 4], nothing], axis=1),
        torque=np.zeros((len(table), 3)),
        outputs=(),
    )


def trace(axis: CompletedAxis) -> Trace:
    """The axis over its cycle: force at the load, then stage by stage up to the motor."""
    course = _commanded(axis)
    course = course.cut_where(course.speed)
    course = replace(course, torque=_load_force(axis, course))
    rate = 1.0  # speed of the stage's output over the speed of the load
    rates = []
    for stage in reversed(axis.stages):
        course = course.cut_where(course.torque)
        power = course.sign(course.torque) * course.sign(rate * course.speed)
        factor = _factors(power, stage)
        output = course.torque
        rate *= stage.ratio
        rates.append(rate)
        torque = output / stage.ratio * factor[:, None] + stage.inertia * rate * course.acceleration
        torque[:, 0] += stage.drag * course.sign(rate * course.speed)
        course = replace(course, torque=torque, outputs=(*course.outputs, output))
    torque = course.torque + axis.motor.inertia * rate * course.acceleration
    course = replace(course, torque=torque).cut_where(torque)
    return Trace(
        duration=course.duration,
        move=course.move,
        resting=course.resting,
        speed=rate * course.speed,
        torque=course.torque,
        stage_speeds=tuple(each * course.speed for each in reversed(rates)),
        stage_outputs=tuple(reversed(course.outputs)),
    )


def _factors(power: Array, stage: StageFloats) -> Array:
    """`transmitted` for the sign of the power that flows in each segment."""
    forward, back, rest = (transmitted(sign, stage.efficiency, stage.efficiency_back) for sign in (1.0, -1.0, 0.0))
    return np.where(power > 0.0, forward, np.where(power < 0.0, back, rest))


def _load_force(axis: CompletedAxis, course: _Course) -> Array:
    """[N] or [N·m] that the last stage must give to the load: inertia, gravity, process force, sliding friction."""
    payload = np.array([move.payload for move in axis.moves])[course.move]
    inertial = axis.load_inertial + payload
    force = inertial[:, None] * course.acceleration + axis.viscous * course.speed
    force[:, 0] += inertial * axis.gravity + np.array([move.force for move in axis.moves])[course.move]
    force[:, 0] += axis.coulomb * course.sign(course.speed)
    return force
