"""The designed start: order 4 where its margins hold at every corner, else order 3 slowed until they hold.

The torque filter is chosen with it: of a short ladder of notches at the resonance the shallowest with which the loop is
about as fast as with any.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import lru_cache

from axis.completion import Rates, ShaftPlant
from axis.description.settings import Loops, TorqueFilter
from axis.description.wishes import Tuning
from axis.errors import NotComputable
from axis.loops.design import CascadeGains, order3_design, order4_design, with_gains
from axis.loops.lag import Lags, velocity_loop_lags
from axis.loops.margins import margins_hold
from axis.loops.prototypes import narrow_band_prototype
from axis.loops.response import step_response
from axis.loops.sampled import SampledPlant
from axis.mechanics.compliance import resonance

DEPTHS = (0.5, 0.25, 0.1, 0.05)
POLE_DAMPINGS = (0.3, 0.7)
HIGHEST = 0.8  # of half the sampling rate: above it the bilinear notch is no longer the one that was drawn
SLOWER = 0.95  # fine steps in which the order-3 design is slowed
COARSE = 5  # fine steps in a coarse one
SLOWEST = 1e-3  # of its fastest natural frequency: the end of the search
WORTH = 0.95  # a deeper notch must settle in less than this share of the time


@dataclass(frozen=True)
class Designed:
    """A design whose margins hold at every corner given."""

    loops: Loops
    order: int  # of the prototype, 4 or 3
    natural_frequency: float  # [rad/s]
    settling_time: float  # [s] of the prototype's own step into the band: ranks designs, foretells no move
    lags: Lags


@lru_cache(maxsize=64)
def prototype_settling(order: int, band: float) -> float:
    """Normalised settling time of the narrow-band prototype.

    Parameters
        order: 3 or 4
        band [1]: half width over the step
    Returns [1], at natural frequency 1
    Source: [own]
    """
    return step_response((1.0,), (1.0, *narrow_band_prototype(order, band), 1.0)).settling_time(band)


def notch_ladder(plants: Sequence[ShaftPlant], velocity_period: float) -> list[tuple[TorqueFilter, ...]]:
    """No filter, then notches in the middle of the resonances, from shallow and narrow to deep and wide.

    Parameters
        plants: the corners
        velocity_period [s]: the filters run at it
    Returns the candidates
    Source: [own]
    """
    frequencies = [
        resonance(plant.stiffness, plant.motor_inertia, plant.load_inertia)
        for plant in plants
        if math.isfinite(plant.stiffness)
    ]
    none: tuple[TorqueFilter, ...] = ()
    if not frequencies:
        return [none]
    centre = math.sqrt(min(frequencies) * max(frequencies))
    if centre * velocity_period > HIGHEST * math.pi:
        return [none]
    return [none] + [
        (TorqueFilter(kind="notch", frequency=centre, width=2.0 * damping * centre, depth=depth),)
        for depth in DEPTHS
        for damping in POLE_DAMPINGS
    ]


def design_with_filters(
    loops: Loops, inertia: float, lags: Lags, band: float, corners: Sequence[SampledPlant], wishes: Tuning
) -> Designed | None:
    """Order 4 if its margins hold at every corner, else the fastest order 3 that does; None where none is found.

    Parameters
        loops: settings that stay, the filters among them; its set-point weight is kept
        inertia [kg·m²]: total, at the shaft
        lags: of the velocity loop with these filters
        band [1]: half width of the window over what must settle
        corners: the sampled plants
        wishes: the margins
    Returns the design
    Source: [own]
    """
    weight, lag = loops.velocity.setpoint_weight, lags.total

    def attempt(gains: CascadeGains, order: int, omega: float) -> Designed | None:
        candidate = with_gains(loops, gains)
        if not all(margins_hold(corner, candidate, wishes) for corner in corners):
            return None
        return Designed(candidate, order, omega, prototype_settling(order, band) / omega, lags)

    fourth, third = narrow_band_prototype(4, band), narrow_band_prototype(3, band)
    alpha, beta, gamma = fourth
    if gamma * gamma >= 4.0 * weight * beta:
        found = attempt(order4_design((alpha, beta, gamma), inertia, lag, weight), 4, 1.0 / (alpha * lag))
        if found is not None:
            return found

    def third_order(omega: float) -> Designed | None:
        try:
            return attempt(order3_design((third[0], third[1]), omega, inertia, lag, weight), 3, omega)
        except NotComputable:  # this set-point weight needs a slower design
            return None

    fastest = SLOWER / (third[0] * lag)
    coarse, omega = None, fastest
    while coarse is None and omega > SLOWEST * fastest:
        coarse = third_order(omega)
        omega *= SLOWER**COARSE
    if coarse is None:
        return None
    # Between this coarse step and the one before lies the fastest design: come down again in fine steps.
    above = [coarse.natural_frequency / SLOWER**n for n in range(COARSE - 1, 0, -1)]
    finer = (third_order(omega) for omega in above if omega < fastest)
    return next((found for found in finer if found is not None), coarse)


def designed_start(
    loops: Loops,
    plants: Sequence[ShaftPlant],
    corners: Sequence[SampledPlant],
    rates: Rates,
    inertia: float,
    band: float,
    wishes: Tuning,
) -> Designed:
    """The fastest design that holds the margins at every corner, with the shallowest notch that serves it.

    Parameters
        loops: current loop, velocity filter, feedforward and set-point weight that stay; its torque filters come first
        plants: the corners, for their resonances
        corners: the same, sampled with this current loop
        rates: of the three loops
        inertia [kg·m²]: total of the design, at the shaft
        band [1]: half width of the window over what must settle
        wishes: the margins
    Returns the design
    Source: [own]
    """
    best: Designed | None = None
    for notch in notch_ladder(plants, rates.velocity_period):
        filters = (*loops.filters, *notch)
        lags = velocity_loop_lags(
            max(plant.inductance for plant in plants), rates, loops.current, loops.velocity.filter, filters
        )
        found = design_with_filters(replace(loops, filters=filters), inertia, lags, band, corners, wishes)
        if found is not None and (best is None or found.settling_time < WORTH * best.settling_time):
            best = found
    if best is None:
        raise NotComputable("no design of order 4 or 3 holds the wished margins at every corner")
    return best
