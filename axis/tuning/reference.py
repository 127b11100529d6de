"""Settings with their margins and their verdict at every computed corner."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence

from axis.completion import CompletedAxis
from axis.description.corners import SHARES
from axis.description.settings import Loops
from axis.loops.margins import Margins, margins, margins_hold
from axis.loops.sampled import SampledPlant, sample_plant
from axis.settling.verdict import Settled
from axis.tuning.objective import margin_corners
from axis.tuning.result import Reference


def judged(axis: CompletedAxis, loops: Loops, settled: Settled) -> Reference:
    """Settings and their verdict, with the margins."""
    found, corner = smallest_margins(axis, loops)
    return Reference(loops, found, corner, settled)


def smallest_margins(axis: CompletedAxis, loops: Loops) -> tuple[Margins, Mapping[str, float]]:
    """The smallest of each margin over the extreme plants, and the corner where the sensitivity peaks highest."""
    at = [(corner, margins(plant, loops)) for corner, plant in _sampled(axis, loops, (-1.0, 1.0))]
    corner, _ = max(at, key=lambda pair: pair[1].peak_sensitivity)
    every = [found for _, found in at]
    smallest = Margins(
        stable=all(found.stable for found in every),
        gain_margin_up_dB=min(found.gain_margin_up_dB for found in every),
        gain_margin_down_dB=min(found.gain_margin_down_dB for found in every),
        phase_margin_deg=min(found.phase_margin_deg for found in every),
        peak_sensitivity=max((found.peak_sensitivity for found in every), default=math.inf),
    )
    return smallest, corner


def margins_everywhere(axis: CompletedAxis, loops: Loops) -> bool:
    """Whether the asked margins hold at every corner."""
    wishes = axis.stated.tuning
    return all(margins_hold(plant, loops, wishes) for _, plant in _sampled(axis, loops, SHARES))


def _sampled(
    axis: CompletedAxis, loops: Loops, steps: Sequence[float]
) -> list[tuple[Mapping[str, float], SampledPlant]]:
    rates, constant = axis.drive.rates, axis.motor.torque_constant
    return [
        (corner, sample_plant(plant, rates, loops.current, constant)) for corner, plant in margin_corners(axis, steps)
    ]
