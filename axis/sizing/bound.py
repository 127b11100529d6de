"""The physical bound of a move: bang-bang of the rigid axis, stopping at the far edge of the window.

No set-point and no loop can bring the rigid axis into its window earlier. The move speeds up as hard as torque and the
user's limits allow, cruises, brakes as hard as they allow so as to rest at the far edge, and is counted when it passes
the near edge. Times and distances are integrals over the speed; the speed where braking begins is a root.
"""

from __future__ import annotations

import math
from bisect import bisect_right
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from itertools import accumulate, pairwise

from axis.completion import CompletedAxis, CompletedMove, at_corner
from axis.mechanics.friction import steady_friction
from axis.mechanics.reflection import input_speeds, shaft_torque
from axis.sizing.available import available_torque
from axis.sizing.polynomials import gauss_nodes

_NODES = 7  # of Gauss-Legendre in one panel of speed
_ACCURATE = 1e-10  # of the whole integral, when a panel is not halved any further
_DEEPEST = 40
_STRIBECK_EDGES = (0.5, 1.0, 2.0, 3.0, 6.0)  # times the Stribeck speed: too narrow a bump to be met by chance
_SHORT_OF_LIMIT = 1e-6  # of a speed that torque allows to be approached but not to be reached
_ITERATIONS = 200  # enough to halve any bracket down to one float


def bounds(axis: CompletedAxis, corners: Sequence[Mapping[str, float]]) -> tuple[float, float]:
    """Sum over the moves, each at its own corner, of the bound under the user's limits and of the machine's own bound.

    Parameters
        axis: nominal
        corners [1]: one a move, tolerance name to signed share
    Returns [s], [s]
    Σ `move_bound`
    Source: [own]
    """
    own = machine = 0.0
    for n, corner in enumerate(corners):
        there = at_corner(axis, corner)
        own += move_bound(there, there.moves[n])
        machine += move_bound(there, there.moves[n], own_limits=False)
    return own, machine


def move_bound(axis: CompletedAxis, move: CompletedMove, own_limits: bool = True) -> float:
    """Earliest time at which the rigid axis can be inside the window for good; infinite where it cannot move.

    Parameters
        axis: completed, at a corner; its nominal bus is the one in force
        move: distance, payload and process force; its limits count where `own_limits`
        own_limits: False leaves the machine alone: torque-speed envelope and speed limits of its parts
    Returns [s]
    t = ∫₀^v̂ dv/a(v) + cruise + ∫_v_e^v̂ dv/b(v) with ∫₀^v̂ v·(1/a + 1/b) dv = |d| + w and ∫₀^v_e v/b dv = 2·w
    Source: [own]; a compliant load that leads the motor while braking can beat it by some per cent
    """
    window = axis.stated.window.position
    distance = abs(move.distance)
    if distance <= window:
        return 0.0
    speeding, braking = _ramps(axis, move, own_limits)
    top = _top_speed(axis, move, own_limits, speeding, braking)
    if top <= 0.0:
        return math.inf
    breaks = [step * axis.stribeck_speed for step in _STRIBECK_EDGES if step * axis.stribeck_speed < top]
    up, down = (_Ramp.of(rate, [0.0, *breaks, top]) for rate in (speeding, braking))
    whole, near = distance + window, distance - window
    peak = top
    if up.distance(top) + down.distance(top) > whole:
        peak = _root(lambda speed: up.distance(speed) + down.distance(speed) - whole, top)
    cruise = max(whole - up.distance(peak) - down.distance(peak), 0.0)
    if near < up.distance(peak):
        return up.time(_root(lambda speed: up.distance(speed) - near, peak))
    if near < up.distance(peak) + cruise:
        return up.time(peak) + (near - up.distance(peak)) / peak
    entry = _root(lambda speed: down.distance(speed) - 2.0 * window, peak)
    return up.time(peak) + cruise / peak + down.time(peak) - down.time(entry)


def _ramps(
    axis: CompletedAxis, move: CompletedMove, own_limits: bool
) -> tuple[Callable[[float], float], Callable[[float], float]]:
    """[m/s²] Largest acceleration and deceleration at a speed [m/s], both counted along the move."""
    along = math.copysign(1.0, move.distance)
    forward = math.copysign(1.0, move.distance * axis.ratio)
    inertial = axis.load_inertial + move.payload
    against = inertial * axis.gravity + move.force
    voltage = axis.limits().voltage
    counts = own_limits and move.duration is None
    limits = (move.acceleration if counts else None, move.deceleration if counts else None)

    def torque(speed: float, acceleration: float) -> float:
        friction = steady_friction(speed, axis.coulomb, axis.breakaway, axis.stribeck_speed, axis.viscous)
        force = along * (inertial * acceleration + friction) + against
        rotor = axis.motor.inertia * axis.ratio * along * acceleration
        return forward * (shaft_torque(axis.stages, force, along * speed, along * acceleration) + rotor)

    def speeding(speed: float) -> float:
        limit = available_torque(axis, axis.ratio * speed, False, voltage)
        found = _acceleration(lambda acceleration: torque(speed, acceleration) - limit)
        return found if limits[0] is None else min(found, limits[0])

    def braking(speed: float) -> float:
        limit = available_torque(axis, axis.ratio * speed, True, voltage)
        found = -_acceleration(lambda acceleration: torque(speed, acceleration) + limit)
        return found if limits[1] is None else min(found, limits[1])

    return speeding, braking


def _acceleration(excess: Callable[[float], float]) -> float:
    """Root of a torque that grows with the acceleration in straight pieces: secants from both sides (Illinois)."""
    low, high = -1.0, 1.0
    while excess(low) > 0.0:
        low *= 4.0
    while excess(high) < 0.0:
        high *= 4.0
    at_low, at_high = excess(low), excess(high)
    side = 0
    for _ in range(_ITERATIONS):
        if at_low == 0.0 or high - low <= 1e-14 * max(abs(low), abs(high)):
            return low
        middle = (low * at_high - high * at_low) / (at_high - at_low)
        found = excess(middle)
        if found == 0.0 or not low < middle < high:
            return middle
        if found > 0.0:
            high, at_high = middle, found
            at_low = at_low / 2.0 if side == 1 else at_low
            side = 1
        else:
            low, at_low = middle, found
            at_high = at_high / 2.0 if side == -1 else at_high
            side = -1
    return 0.5 * (low + high)


def _top_speed(
    axis: CompletedAxis,
    move: CompletedMove,
    own_limits: bool,
    speeding: Callable[[float], float],
    braking: Callable[[float], float],
) -> float:
    """[m/s] The lowest speed limit, or the speed at which torque to speed up or to brake gives out."""
    speeds = input_speeds(axis.stages, 1.0)
    parts = [stage.max_input_speed / abs(speed) for stage, speed in zip(axis.stages, speeds, strict=True)]
    motor = axis.motor.max_speed if axis.motor.max_speed is not None else math.inf
    emf = axis.limits().voltage / axis.motor.voltage_constant
    top = min([min(motor, emf) / abs(axis.ratio), *parts])
    if own_limits and move.duration is None and move.speed is not None:
        top = min(top, move.speed)

    def left(speed: float) -> float:
        return min(speeding(speed), braking(speed))

    if left(top) > 0.0:
        return top
    if left(_SHORT_OF_LIMIT * top) <= 0.0:
        return 0.0
    return _root(lambda speed: -left(speed), top) * (1.0 - _SHORT_OF_LIMIT)


def _root(function: Callable[[float], float], high: float) -> float:
    """Where a function that is negative at zero and positive at `high` changes its sign."""
    low = 0.0
    for _ in range(_ITERATIONS):
        middle = 0.5 * (low + high)
        if not low < middle < high:
            break
        if function(middle) < 0.0:
            low = middle
        else:
            high = middle
    return high


@dataclass(frozen=True)
class _Ramp:
    """Time and distance from rest to a speed, as cumulated integrals over panels of the speed."""

    rate: Callable[[float], float]  # [m/s²] at a speed [m/s]
    edges: tuple[float, ...]  # [m/s]
    times: tuple[float, ...]  # [s] from rest to each edge
    distances: tuple[float, ...]  # [m] from rest to each edge

    @staticmethod
    def of(rate: Callable[[float], float], edges: list[float]) -> _Ramp:
        coarse = [_panel(rate, low, high) for low, high in pairwise(edges)]
        scale = (_ACCURATE * sum(time for time, _ in coarse), _ACCURATE * sum(distance for _, distance in coarse))
        panels = [
            panel
            for (low, high), whole in zip(pairwise(edges), coarse, strict=True)
            for panel in _halved(rate, low, high, whole, scale, _DEEPEST)
        ]
        times = tuple(accumulate((time for _, time, _ in panels), initial=0.0))
        distances = tuple(accumulate((distance for _, _, distance in panels), initial=0.0))
        return _Ramp(rate, (0.0, *(edge for edge, _, _ in panels)), times, distances)

    def time(self, speed: float) -> float:
        return self._to(speed)[0]

    def distance(self, speed: float) -> float:
        return self._to(speed)[1]

    def _to(self, speed: float) -> tuple[float, float]:
        n = max(bisect_right(self.edges, speed) - 1, 0)
        n = min(n, len(self.edges) - 1)
        if speed == self.edges[n]:
            return self.times[n], self.distances[n]
        time, distance = _panel(self.rate, self.edges[n], speed)
        return self.times[n] + time, self.distances[n] + distance


def _panel(rate: Callable[[float], float], low: float, high: float) -> tuple[float, float]:
    """∫dv/a and ∫v·dv/a over one panel."""
    time = distance = 0.0
    nodes, weights = gauss_nodes(_NODES)
    for node, weight in zip(nodes.tolist(), weights.tolist(), strict=True):
        speed = low + (high - low) * node
        part = weight * (high - low) / rate(speed)
        time += part
        distance += part * speed
    return time, distance


def _halved(
    rate: Callable[[float], float],
    low: float,
    high: float,
    whole: tuple[float, float],
    scale: tuple[float, float],
    depth: int,
) -> list[tuple[float, float, float]]:
    """Panels (upper edge, time, distance), halved until the halves agree with the whole."""
    middle = 0.5 * (low + high)
    left, right = _panel(rate, low, middle), _panel(rate, middle, high)
    close = all(abs(whole[n] - left[n] - right[n]) <= scale[n] for n in (0, 1))
    if close or depth == 0:
        return [(middle, *left), (high, *right)]
    return [
        *_halved(rate, low, middle, left, scale, depth - 1),
        *_halved(rate, middle, high, right, scale, depth - 1),
    ]
