"""The designed start: order 4 where its margins hold at every corner, else order 3, slowed until they do."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass

from axis.completion import CompletedAxis
from axis.description.settings import Feedforward, Loops, PositionLoop, VelocityLoop
from axis.errors import NotComputable
from axis.loops.current import design_current_loop
from axis.loops.design import (
    CascadeGains,
    largest_setpoint_weight,
    order3_denominator,
    order3_design,
    order4_denominator,
    order4_design,
    with_gains,
)
from axis.loops.lag import velocity_loop_lags
from axis.loops.prototypes import FAST_SETTLING, narrow_band_prototype

SLOWING = 0.9  # of the natural frequency, per try
SLOWEST = 1.0  # [rad/s]
OF_LARGEST_WEIGHT = 0.95  # kept below the largest set-point weight a prototype allows

Holds = Callable[[Loops], bool]


@dataclass(frozen=True)
class Candidate:
    """Designed settings and where they come from."""

    name: str
    loops: Loops


def bare_loops(axis: CompletedAxis) -> tuple[Loops, float]:
    """Current loop by the modulus optimum, everything else neutral; and Tσ [s] of the velocity loop round it."""
    plant = axis.plant()
    rates = axis.drive.rates
    current = design_current_loop(axis.motor.resistance, axis.motor.saturated_inductance, rates)
    velocity_filter = rates.velocity_period
    lag = velocity_loop_lags(axis.motor.inductance, rates, current, velocity_filter).total
    loops = Loops(
        current=current,
        velocity=VelocityLoop(kp=plant.total_inertia / (2.0 * lag), ti=4.0 * lag, filter=velocity_filter),
        position=PositionLoop(kv=1.0 / (16.0 * lag)),
        feedforward=Feedforward(velocity=1.0, torque=1.0),
    )
    return loops, lag


def designs(axis: CompletedAxis, loops: Loops, lag: float, band: float, holds: Holds) -> Iterator[Candidate]:
    """The designs that hold the margins, for the published ±2 % band and for a band [1] of the axis's own."""
    inertia = axis.plant().total_inertia
    for name, quartic, cubic in _prototypes(band):
        try:
            gains = _order4(quartic, inertia, lag)
            if holds(with_gains(loops, gains)):
                yield Candidate(f"order 4, {name}", with_gains(loops, gains))
                continue
        except NotComputable:
            pass
        omega = 0.95 / (cubic[0] * lag)
        while omega > SLOWEST:
            slowed = with_gains(loops, _order3(cubic, omega, inertia, lag))
            if holds(slowed):
                yield Candidate(f"order 3 with a real pole, {name}, at {omega:.3g} rad/s", slowed)
                break
            omega *= SLOWING


def _prototypes(band: float) -> list[tuple[str, tuple[float, float, float], tuple[float, float]]]:
    published = (FAST_SETTLING[4], FAST_SETTLING[3])
    own = (narrow_band_prototype(4, band), narrow_band_prototype(3, band))
    named = (("published band of 2 %", published), (f"own band of {band * 100:.2g} %", own))
    return [(name, (q[0], q[1], q[2]), (c[0], c[1])) for name, (q, c) in named]


def _order4(prototype: tuple[float, float, float], inertia: float, lag: float) -> CascadeGains:
    weight = min(OF_LARGEST_WEIGHT * largest_setpoint_weight(*order4_denominator(prototype, lag)), 1.0)
    return order4_design(prototype, inertia, lag, weight)


def _order3(prototype: tuple[float, float], omega: float, inertia: float, lag: float) -> CascadeGains:
    weight = min(OF_LARGEST_WEIGHT * largest_setpoint_weight(*order3_denominator(prototype, omega, lag)), 1.0)
    return order3_design(prototype, omega, inertia, lag, weight)


def own_band(window: float, excited: float) -> float:
    """The band a prototype is asked for: the window over the error that the move itself leaves behind.

    Parameters
        window [m]: half width, less what is kept back
        excited [m]: largest error on the move
    Returns [1]
    window/excited, between 1e-5 and 0.1
    Source: [own]; a profiled move with feedforward is no step, so never window over stroke
    """
    return min(max(window / excited, 1e-5), 0.1) if excited > 0.0 and math.isfinite(excited) else 0.02
