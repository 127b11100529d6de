"""Margins of the friction-free axis: the lifted multi-rate loop, broken at the torque command."""

from __future__ import annotations

import cmath
import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
from scipy.optimize import brentq

from axis.description.settings import Loops
from axis.description.wishes import Tuning
from axis.loops.lifted import OpenLoop, closed_loop, lifted_sensitivity, open_loop
from axis.loops.sampled import SampledPlant
from axis.loops.stability import growth, peak_over, to_hessenberg

SCREEN_ANGLES = 120
EXACT_ANGLES = 800
LIMIT_dB = 60.0  # a loop that bears this factor is said to have no limit
STEP_dB = 0.25
STEP_PHASE = math.radians(0.5)

Real = npt.NDArray[np.float64]


@dataclass(frozen=True)
class Margins:
    """How far the loop is from instability; infinite where nothing was found within 60 dB or 180 degrees."""

    stable: bool
    gain_margin_up_dB: float  # [dB] the torque command may grow by it
    gain_margin_down_dB: float  # [dB] it may shrink by it, as under a larger inertia
    phase_margin_deg: float  # [deg] it may be turned by it, either way
    peak_sensitivity: float  # [1] largest over frequency

    def hold(self, wishes: Tuning) -> bool:
        """Whether they are at least what is wished."""
        return (
            self.stable
            and self.gain_margin_up_dB >= wishes.gain_margin_up
            and self.gain_margin_down_dB >= wishes.gain_margin_down
            and self.phase_margin_deg >= math.degrees(wishes.phase_margin)
            and self.peak_sensitivity <= wishes.peak_sensitivity
        )


UNSTABLE = Margins(False, 0.0, 0.0, 0.0, math.inf)


def spectral_radius(loop: OpenLoop, factor: complex = 1.0) -> float:
    """Largest modulus among the eigenvalues of the lifted closed loop; below 1 it is stable."""
    return float(np.abs(np.linalg.eigvals(closed_loop(loop, factor))).max())


def first_instability(radius: Callable[[float], float], limit: float, step: float) -> float:
    """The smallest positive argument at which a spectral radius passes 1, infinite where none does.

    Parameters
        radius: spectral radius at an argument
        limit [1]: of the arguments tried
        step [1]: between the arguments tried; inside the first bad one the root is refined
    Returns [1], in the unit of the argument
    Source: [own]; stops being true where stability is lost and found again within one step
    """
    for i in range(1, math.ceil(limit / step) + 1):
        if radius(i * step) >= 1.0:
            return float(brentq(lambda x: radius(x) - 1.0, (i - 1) * step, i * step, xtol=1e-12, rtol=1e-14))
    return math.inf


def frequency_grid(loop: OpenLoop, loops: Loops, period: float, count: int) -> Real:
    """Angles per position period, even in the logarithm.

    They begin well below everything that the settings can make happen and end at half the position rate; what a
    resonance above it does is folded down to where the grid is denser.

    Parameters
        loop: the loop
        loops: its settings
        period [s]: velocity period
        count: of the angles
    Returns [rad]
    Source: [own]
    """
    slowest = min(0.1 * min(loops.position.kv, 1.0 / loops.velocity.ti) * period * loop.every, 0.1)
    return np.exp(np.linspace(math.log(slowest), math.log(math.pi), count))


def peak_sensitivity(sampled: SampledPlant, loops: Loops) -> float:
    """Largest singular value of the lifted sensitivity over all frequencies, the closed loop's own among them."""
    loop = open_loop(sampled, loops)
    matrix, inputs, outputs, direct = lifted_sensitivity(loop)
    own = np.abs(np.angle(np.linalg.eigvals(matrix)))
    to_hessenberg(matrix, inputs, outputs)
    grid = frequency_grid(loop, loops, sampled.velocity_period, EXACT_ANGLES)
    angles = np.unique(np.concatenate([grid, own[(own > grid[0]) & (own < math.pi)]]))
    return peak_over(angles, matrix, inputs, outputs, direct, 1.0)


def margins(sampled: SampledPlant, loops: Loops) -> Margins:
    """The margins of one corner: gain up and down, phase, peak of the sensitivity."""
    loop = open_loop(sampled, loops)
    if spectral_radius(loop) >= 1.0:
        return UNSTABLE

    def with_gain(decibel: float) -> float:
        return spectral_radius(loop, 10.0 ** (decibel / 20.0))

    def with_phase(angle: float) -> float:
        return spectral_radius(loop, cmath.rect(1.0, angle))

    return Margins(
        stable=True,
        gain_margin_up_dB=first_instability(with_gain, LIMIT_dB, STEP_dB),
        gain_margin_down_dB=first_instability(lambda x: with_gain(-x), LIMIT_dB, STEP_dB),
        phase_margin_deg=math.degrees(first_instability(with_phase, math.pi, STEP_PHASE)),
        peak_sensitivity=peak_sensitivity(sampled, loops),
    )


def unstable_by(loop: OpenLoop, factor: complex) -> float:
    """0 where the loop with this factor in its torque command is stable, else 1 plus its growth per position period.

    A complex matrix acts on real and imaginary parts as a real one of twice the size.
    """
    period = closed_loop(loop, factor if factor.imag else factor.real)
    if factor.imag:
        period = np.block([[period.real, -period.imag], [period.imag, period.real]])
    grown = growth(np.ascontiguousarray(period))
    return 0.0 if grown < 0.0 else 1.0 + min(grown, 1.0)


def margin_violation(sampled: SampledPlant, loops: Loops, wishes: Tuning) -> float:
    """0 where all wished margins hold; else a graded measure of how badly they fail (unstable: 7 and more).

    Quick, for screening; `margins` has the last word. A peak M of the sensitivity excludes instability for every factor
    k with |1/k − 1| < 1/M, so that only factors which this leaves open are tried.
    """
    loop = open_loop(sampled, loops)
    nominal = unstable_by(loop, 1.0 + 0.0j)
    if nominal:
        return 6.0 + nominal
    matrix, inputs, outputs, direct = lifted_sensitivity(loop)
    to_hessenberg(matrix, inputs, outputs)
    angles = frequency_grid(loop, loops, sampled.velocity_period, SCREEN_ANGLES)
    peak = peak_over(angles, matrix, inputs, outputs, direct, 0.5 * wishes.peak_sensitivity)
    violation = min(max(peak / wishes.peak_sensitivity - 1.0, 0.0), 1.0)
    for factor in (
        complex(10.0 ** (-wishes.gain_margin_down / 20.0)),
        complex(10.0 ** (wishes.gain_margin_up / 20.0)),
        cmath.rect(1.0, wishes.phase_margin),
    ):
        if abs(1.0 / factor - 1.0) * peak >= 1.0:
            violation += unstable_by(loop, factor)
    return violation


def margins_hold(sampled: SampledPlant, loops: Loops, wishes: Tuning) -> bool:
    """Whether all wished margins hold at this corner."""
    return margin_violation(sampled, loops, wishes) == 0.0
