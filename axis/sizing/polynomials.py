"""Polynomials in time over the segments of a cycle, as arrays: row n belongs to segment n, ascending powers."""

from __future__ import annotations

from functools import cache

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]
Whole = npt.NDArray[np.int64]

_HALVINGS = 16  # before Newton's steps, which then double the right digits
_NEWTON = 3
_NEAREST = 1e-7  # of a segment: a cut this close to an end is rounding of a value that is zero there


def value(coefficients: Array, time: Array) -> Array:
    """Each row's polynomial at its own time [s]; `time` may hold several columns a row."""
    columns = coefficients.reshape(coefficients.shape + (1,) * (time.ndim - 1))
    result: Array = np.broadcast_to(columns[:, -1], time.shape)
    for power in range(coefficients.shape[1] - 2, -1, -1):
        result = result * time + columns[:, power]
    return result


def product(left: Array, right: Array) -> Array:
    """Row-wise product of two polynomials."""
    result = np.zeros((len(left), left.shape[1] + right.shape[1] - 1))
    for power in range(left.shape[1]):
        result[:, power : power + right.shape[1]] += left[:, power : power + 1] * right
    return result


def derivative(coefficients: Array) -> Array:
    """Row-wise derivative in time."""
    return coefficients[:, 1:] * np.arange(1.0, coefficients.shape[1])


def shifted(coefficients: Array, start: Array) -> Array:
    """The same polynomials with their time counted from `start` [s]."""
    result = coefficients.copy()
    for lowest in range(coefficients.shape[1] - 1):
        for power in range(coefficients.shape[1] - 2, lowest - 1, -1):
            result[:, power] += start * result[:, power + 1]
    return result


def roots(coefficients: Array, duration: Array) -> Array:
    """Where each row changes its sign inside (0, duration); one column a root, not-a-number where there is none.

    A root that only touches zero is no change of sign.
    """
    degree = coefficients.shape[1] - 1
    found = np.full((len(coefficients), degree), np.nan)
    rows = np.flatnonzero(_may_change_sign(coefficients, duration))
    if len(rows) == 0:
        return found
    some, length = coefficients[rows], duration[rows]
    found[rows] = _quadratic_roots(some, length) if degree <= 2 else _roots_between_turns(some, length)
    return found


def _quadratic_roots(coefficients: Array, duration: Array) -> Array:
    """By the formula without cancellation; for degree one and two."""
    c, b = coefficients[:, 0], coefficients[:, 1]
    with np.errstate(divide="ignore", invalid="ignore"):
        if coefficients.shape[1] == 2:
            found = (-c / b)[:, None]
        else:
            a = coefficients[:, 2]
            q = -0.5 * (b + np.copysign(np.sqrt(b * b - 4.0 * a * c), b))
            found = np.stack([q / a, c / q], axis=1)
        return np.where((found > 0.0) & (found < duration[:, None]), found, np.nan)


def _roots_between_turns(coefficients: Array, duration: Array) -> Array:
    """Between the roots of the derivative each stretch is monotone: halved, then polished inside its bracket."""
    slope = derivative(coefficients)
    turns = roots(slope, duration)
    edges = np.concatenate([np.zeros((len(duration), 1)), turns, duration[:, None]], axis=1)
    edges = np.sort(np.where(np.isnan(edges), duration[:, None], edges), axis=1)
    low, high = edges[:, :-1].copy(), edges[:, 1:].copy()
    sign_low, sign_high = np.sign(value(coefficients, low)), np.sign(value(coefficients, high))
    crossing = sign_low * sign_high < 0.0
    for _ in range(_HALVINGS):
        middle = 0.5 * (low + high)
        left = np.sign(value(coefficients, middle)) == sign_low
        low, high = np.where(left, middle, low), np.where(left, high, middle)
    root = 0.5 * (low + high)
    with np.errstate(divide="ignore", invalid="ignore"):
        for _ in range(_NEWTON):
            root = np.clip(root - value(coefficients, root) / value(slope, root), low, high)
    return np.where(crossing, root, np.nan)


def _may_change_sign(coefficients: Array, duration: Array) -> npt.NDArray[np.bool_]:
    """False where the Bernstein coefficients, whose hull holds the polynomial, have one sign."""
    degree = coefficients.shape[1] - 1
    if degree == 0:
        return np.zeros(len(coefficients), dtype=np.bool_)
    scaled = coefficients * duration[:, None] ** np.arange(degree + 1)
    bernstein = scaled @ _to_bernstein(degree).T
    result: npt.NDArray[np.bool_] = (bernstein.min(axis=1) < 0.0) & (bernstein.max(axis=1) > 0.0)
    return result


@cache
def _to_bernstein(degree: int) -> Array:
    """Power basis on (0, 1) to Bernstein basis: b_i = Σ_k C(i,k)/C(n,k)·a_k."""
    from math import comb

    return np.array(
        [[comb(i, k) / comb(degree, k) for k in range(degree + 1)] for i in range(degree + 1)], dtype=np.float64
    )


def cut(duration: Array, cuts: Array) -> tuple[Whole, Array, Array]:
    """Segments cut at the given times: (row each part comes from, its start there [s], its duration [s])."""
    full = duration[:, None]
    inside = (cuts > _NEAREST * full) & (cuts < (1.0 - _NEAREST) * full)
    edges = np.concatenate([np.zeros_like(full), np.where(inside, cuts, full), full], axis=1)
    edges = np.sort(edges, axis=1)
    lengths = np.diff(edges, axis=1)
    row, part = np.nonzero(lengths > 0.0)
    return row.astype(np.int64), edges[row, part], lengths[row, part]


@cache
def gauss_nodes(count: int) -> tuple[Array, Array]:
    """Nodes and weights of Gauss-Legendre quadrature on (0, 1); exact to degree 2·count − 1."""
    nodes, weights = np.polynomial.legendre.leggauss(count)
    return 0.5 * (nodes + 1.0), 0.5 * weights


def largest(coefficients: Array, duration: Array) -> Array:
    """Each row's largest value over its segment: at an end or a turning point."""
    turns = roots(derivative(coefficients), duration)
    times = np.concatenate([np.zeros((len(duration), 1)), np.nan_to_num(turns), duration[:, None]], axis=1)
    return np.asarray(value(coefficients, times).max(axis=1))
