"""Prototypes: denominators whose step response enters a band fast and never leaves it again.

The published fast-settling table is good for the ±2 % band only. For narrower bands the fastest prototype is the one
whose error, after its first entry, swings with its first n − 1 extrema alternately from edge to edge of the band.
"""

from __future__ import annotations

import math
from functools import lru_cache

import numpy as np
import numpy.typing as npt

from axis.errors import NotComputable

Real = npt.NDArray[np.float64]

# Coefficients below the leading and above the constant one, both 1: natural frequency 1. Source: [dorf].
FAST_SETTLING: dict[int, tuple[float, ...]] = {
    2: (1.82,),
    3: (1.9, 2.2),
    4: (2.2, 3.5, 2.8),
    5: (2.7, 4.9, 5.4, 3.4),
    6: (3.15, 6.5, 8.7, 7.55, 4.05),
}

SMALLEST_BAND = 1e-6
# Above these the optimum is another one; a prototype for the narrower band holds in the wider one too.
LARGEST_BAND = {3: 0.1, 4: 0.04}
INSIDE = 1.0 - 1e-6  # the ripple aimed at, in bands: on the edge itself rounding would decide

# Where the search starts: coefficients at bands half a decade apart from 0.1 (order 3), 10^-1.5 (order 4) downwards.
_START: dict[int, tuple[tuple[float, ...], ...]] = {
    3: (
        (1.23789, 1.90144),
        (1.65362, 2.09424),
        (1.98082, 2.25158),
        (2.21949, 2.38541),
        (2.39153, 2.49545),
        (2.51676, 2.58377),
        (2.60923, 2.65379),
        (2.67891, 2.70940),
        (2.73223, 2.75367),
        (2.77375, 2.78926),
        (2.80672, 2.81807),
    ),
    4: (
        (1.77248, 3.10036, 2.55499),
        (2.16123, 3.43925, 2.75764),
        (2.49659, 3.76535, 2.93390),
        (2.76718, 4.06628, 3.08401),
        (2.98140, 4.33267, 3.21104),
        (3.15025, 4.56167, 3.31794),
        (3.28427, 4.75603, 3.40798),
        (3.39121, 4.91941, 3.48361),
        (3.47748, 5.05671, 3.54737),
        (3.54769, 5.17216, 3.60123),
    ),
}
_START_EXPONENT = {3: -1.0, 4: -1.5}


def step_extrema(coefficients: npt.ArrayLike, count: int) -> Real:
    """First extrema of the step error of an all-pole prototype with natural frequency 1.

    Parameters
        coefficients [1]: between the leading and the constant 1
        count: of the extrema wanted
    Returns [1]; negative where the response is above its final value
    e(t) = −Σ e^{p·t}/(p·D'(p)) over the poles p; distinct poles
    Source: [own]
    """
    denominator = np.concatenate([[1.0], np.asarray(coefficients, dtype=float), [1.0]])
    poles = np.roots(denominator)
    parts = -1.0 / np.polyval(np.polyder(denominator), poles)  # of the slope; of the error after division by the pole
    times = np.arange(0.05, 40.0 / float(-poles.real.max()), 0.1)
    slope = (np.exp(np.outer(times, poles)) @ parts).real
    places = np.nonzero(slope[:-1] * slope[1:] < 0.0)[0][:count]
    if len(places) < count:
        raise NotComputable(f"the step response of {denominator} has fewer than {count} extrema")
    turns = times[places] + 0.1 * slope[places] / (slope[places] - slope[places + 1])
    for _ in range(6):
        modes = np.exp(np.outer(turns, poles)) * parts
        turns = turns - modes.sum(axis=1).real / (modes @ poles).real
    extrema: Real = (np.exp(np.outer(turns, poles)) @ (parts / poles)).real
    return extrema


def _ripple_excess(coefficients: Real, ripple: float) -> Real:
    """Logarithm of each of the first n − 1 extrema, over the ripple that it should have with its alternating sign."""
    count = len(coefficients)
    signs = np.where(np.arange(count) % 2 == 0, -1.0, 1.0)
    ratio = step_extrema(coefficients, count) * signs / ripple
    return np.log(np.maximum(ratio, 1e-6))


@lru_cache(maxsize=256)
def narrow_band_prototype(order: int, band: float) -> tuple[float, ...]:
    """The prototype that settles first into ± band, overshoot and undershoot inside it for ever after.

    Parameters
        order: 3 or 4
        band [1]: half width over the step, 1e-6 and wider; wider than 0.1 (order 3) or 0.04 (order 4) is taken as that
    Returns the coefficients [1] between the leading and the constant 1, natural frequency 1
    The first n − 1 extrema of the error equal −band, +band, −band …: n − 1 equations, n − 1 unknowns, by Newton
    Source: [own]; slower optima of such ripple exist (order 4, 1e-4: by a quarter): the start chooses the fastest
    """
    if not band >= SMALLEST_BAND:
        raise NotComputable(f"prototypes are computed for bands of {SMALLEST_BAND:g} and wider, not for {band:g}")
    band = min(band, LARGEST_BAND[order])
    exponents = _START_EXPONENT[order] - 0.5 * np.arange(len(_START[order]))
    table = np.array(_START[order])
    place = np.clip(math.log10(band), exponents[-1], exponents[0])
    start = np.array([np.interp(place, exponents[::-1], column[::-1]) for column in table.T])
    return _newton(start, band * INSIDE)


def _newton(coefficients: Real, ripple: float) -> tuple[float, ...]:
    """Newton's method on `_ripple_excess`, derivatives by central differences."""
    count = len(coefficients)
    step = 1e-5
    for _ in range(12):
        excess = _ripple_excess(coefficients, ripple)
        if np.abs(excess).max() < 1e-8:
            return tuple(float(value) for value in coefficients)
        slopes = np.empty((count, count))
        for j in range(count):
            shift = np.zeros(count)
            shift[j] = step
            above, below = _ripple_excess(coefficients + shift, ripple), _ripple_excess(coefficients - shift, ripple)
            slopes[:, j] = (above - below) / (2.0 * step)
        coefficients = coefficients - np.linalg.solve(slopes, excess)
    raise NotComputable(f"the prototype for a ripple of {ripple:g} was not found")
