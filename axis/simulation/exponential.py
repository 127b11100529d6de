"""Exact response of a small linear system over a time: the matrix exponential and its first two integrals."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from axis.compiled import compiled_part

Array = npt.NDArray[np.float64]

ORDER = 4  # motor speed, twist, load speed, current
NORM = 0.5  # the series is summed below it, and doubled back from there
TERMS = 18


@compiled_part
def product(left: Array, right: Array, result: Array) -> None:
    """result = left·right."""
    for row in range(ORDER):
        for column in range(ORDER):
            total = 0.0
            for k in range(ORDER):
                total += left[row, k] * right[k, column]
            result[row, column] = total


@compiled_part
def balance(matrix: Array, scales: Array) -> None:
    """Scale the variables by powers of two until rows and columns weigh about the same, as LAPACK's gebal does.

    In place: matrix becomes S⁻¹·matrix·S with S = diag(scales). Without it the stiffness over the inertia alone would
    ask for ten needless doublings.
    """
    for k in range(ORDER):
        scales[k] = 1.0
    for _ in range(60):
        settled = True
        for k in range(ORDER):
            row, column = 0.0, 0.0
            for other in range(ORDER):
                if other != k:
                    row += abs(matrix[k, other])
                    column += abs(matrix[other, k])
            if row == 0.0 or column == 0.0:
                continue
            factor = 1.0
            while column * factor * 2.0 < row / factor:
                factor *= 2.0
            while column * factor > row / factor * 2.0:
                factor *= 0.5
            if factor != 1.0:
                settled = False
                scales[k] *= factor
                for other in range(ORDER):
                    matrix[k, other] /= factor
                for other in range(ORDER):
                    matrix[other, k] *= factor
        if settled:
            break


@compiled_part
def largest(matrix: Array) -> float:
    """Largest row sum."""
    result = 0.0
    for row in range(ORDER):
        total = 0.0
        for column in range(ORDER):
            total += abs(matrix[row, column])
        result = max(result, total)
    return result


@compiled_part
def exponential(matrix: Array, duration: float, once: Array, first: Array, second: Array) -> None:
    """Exponential of a 4×4 system over a time and its two integrals, by a Taylor series and doubling.

    Parameters
        matrix [1/s]: D of ẋ = D·x
        duration [s]: h
        once [1]: result, exp(D·h)
        first [s]: result, ∫₀ʰ exp(D·s) ds, the response to a held input
        second [s²]: result, its own integral
    Source: [moler2003]; units as for states of one kind
    second(h) = Σ Dᵏ·hᵏ⁺²/(k+2)!, first = h·1 + D·second, once = 1 + D·first; doubling: second ← second + h·first +
    once·second, first ← first + once·first, once ← once·once
    """
    scaled = np.empty((ORDER, ORDER))
    for row in range(ORDER):
        for column in range(ORDER):
            scaled[row, column] = matrix[row, column]
    scales = np.empty(ORDER)
    balance(scaled, scales)
    step = duration
    doublings = 0
    norm = largest(scaled) * duration
    while norm > NORM and doublings < 60:
        norm *= 0.5
        step *= 0.5
        doublings += 1
    term = np.zeros((ORDER, ORDER))
    spare = np.empty((ORDER, ORDER))
    for row in range(ORDER):
        term[row, row] = 0.5 * step * step
        for column in range(ORDER):
            second[row, column] = term[row, column]
    for n in range(1, TERMS):
        product(scaled, term, spare)
        for row in range(ORDER):
            for column in range(ORDER):
                term[row, column] = spare[row, column] * (step / (n + 2.0))
                second[row, column] += term[row, column]
    product(scaled, second, first)
    for k in range(ORDER):
        first[k, k] += step
    product(scaled, first, once)
    for k in range(ORDER):
        once[k, k] += 1.0
    for _ in range(doublings):
        product(once, second, spare)
        for row in range(ORDER):
            for column in range(ORDER):
                second[row, column] += spare[row, column] + step * first[row, column]
        product(once, first, spare)
        for row in range(ORDER):
            for column in range(ORDER):
                first[row, column] += spare[row, column]
        product(once, once, spare)
        for row in range(ORDER):
            for column in range(ORDER):
                once[row, column] = spare[row, column]
        step *= 2.0
    for row in range(ORDER):
        for column in range(ORDER):
            back = scales[row] / scales[column]
            once[row, column] *= back
            first[row, column] *= back
            second[row, column] *= back
