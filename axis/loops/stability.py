"""Two questions asked of a discrete system thousands of times in a search: does it decay, how high does it peak.

Plain loops throughout: they compile in a fraction of the time that array expressions take, and run no slower.
"""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from axis.compiled import compiled

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]

SQUARINGS = 22  # 4 million periods: separates spectral radii that differ by 1e-6
GROWN = 60.0  # logarithm of a norm that no transient of a stable loop reaches


@compiled
def growth(matrix: Real) -> float:
    """Logarithm of the spectral radius, by squaring: negative as soon as a power has a norm below one.

    Where it is negative its sign is certain and its value a bound from above; else the value is an estimate.
    """
    n = matrix.shape[0]
    power = np.empty((n, n))
    square = matrix.copy()
    logarithm = 0.0
    weight = 1.0
    for _ in range(SQUARINGS):
        norm = 0.0
        for i in range(n):
            row = 0.0
            for j in range(n):
                row += abs(square[i, j])
            norm = max(norm, row)
        if norm == 0.0:
            return -1.0
        logarithm += math.log(norm)
        if logarithm < 0.0 or logarithm > GROWN:
            break
        for i in range(n):
            for j in range(n):
                power[i, j] = square[i, j] / norm
                square[i, j] = 0.0
        for i in range(n):
            for k in range(n):
                factor = power[i, k]
                for j in range(n):
                    square[i, j] += factor * power[k, j]
        logarithm *= 2.0
        weight *= 0.5
    return logarithm * weight


@compiled
def to_hessenberg(matrix: Real, inputs: Real, outputs: Real) -> None:
    """Similar system whose matrix has zeros below its first subdiagonal, by elimination with pivots; in place.

    Source: [golub]
    """
    n, m = inputs.shape
    for column in range(n - 2):
        head = column + 1
        pivot = head
        for i in range(head + 1, n):
            if abs(matrix[i, column]) > abs(matrix[pivot, column]):
                pivot = i
        if matrix[pivot, column] == 0.0:
            continue
        for j in range(n):
            matrix[pivot, j], matrix[head, j] = matrix[head, j], matrix[pivot, j]
        for i in range(n):
            matrix[i, pivot], matrix[i, head] = matrix[i, head], matrix[i, pivot]
        for j in range(m):
            inputs[pivot, j], inputs[head, j] = inputs[head, j], inputs[pivot, j]
            outputs[j, pivot], outputs[j, head] = outputs[j, head], outputs[j, pivot]
        for i in range(head + 1, n):
            factor = matrix[i, column] / matrix[head, column]
            for j in range(n):
                matrix[i, j] -= factor * matrix[head, j]
            for j in range(n):
                matrix[j, head] += factor * matrix[j, i]
            for j in range(m):
                inputs[i, j] -= factor * inputs[head, j]
                outputs[j, head] += factor * outputs[j, i]


@compiled
def largest_gain(square: Complex, power: Complex) -> float:
    """Largest singular value of a small matrix G given as its Hermitian square; both arguments are used up.

    tr((GᴴG)^N)^(1/2N) with N = 2^13 by squaring: too large by less than 1e-4 for up to four rows.
    """
    n = square.shape[0]
    logarithm = 0.0
    weight = 1.0
    for _ in range(14):
        trace = 0.0
        for i in range(n):
            trace += square[i, i].real
        logarithm += weight * math.log(trace)
        if n == 1:
            break
        weight *= 0.5
        inverse = 1.0 / trace
        for i in range(n):
            for j in range(n):
                power[i, j] = square[i, j] * inverse
                square[i, j] = 0.0
        for i in range(n):
            for k in range(n):
                for j in range(n):
                    square[i, j] += power[i, k] * power[k, j]
    return math.exp(0.5 * logarithm)


@compiled
def sensitivity_at(angle: float, matrix: Real, inputs: Real, outputs: Real, direct: Real, work: Complex) -> float:
    """Largest singular value of D + C·(z·1 − M)⁻¹·B at z = e^{j·angle}, M in Hessenberg form.

    `angle` [rad] per sample; work: n + 3·m rows and n + m columns, for n states and m inputs.
    Returns [1]
    Source: [own]
    """
    n, m = inputs.shape
    z = complex(math.cos(angle), math.sin(angle))
    for i in range(n):
        for j in range(n):
            work[i, j] = -matrix[i, j]
        work[i, i] += z
        for j in range(m):
            work[i, n + j] = inputs[i, j]
    for i in range(n):
        if i < n - 1 and abs(work[i + 1, i].real) + abs(work[i + 1, i].imag) > abs(work[i, i].real) + abs(
            work[i, i].imag
        ):
            for j in range(i, n + m):
                work[i, j], work[i + 1, j] = work[i + 1, j], work[i, j]
        pivot = work[i, i]
        inverse = pivot.conjugate() * (1.0 / (pivot.real * pivot.real + pivot.imag * pivot.imag))
        for j in range(i + 1, n + m):
            work[i, j] *= inverse
            if i < n - 1:
                work[i + 1, j] -= work[i + 1, i] * work[i, j]
    for j in range(n, n + m):
        for i in range(n - 2, -1, -1):
            for k in range(i + 1, n):
                work[i, j] -= work[i, k] * work[k, j]
    gain = work[n : n + m, :m]
    square = work[n + m : n + 2 * m, :m]
    for i in range(m):
        for j in range(m):
            gain[i, j] = direct[i, j]
            square[i, j] = 0.0
            for k in range(n):
                gain[i, j] += outputs[i, k] * work[k, n + j]
    for k in range(m):
        for i in range(m):
            for j in range(m):
                square[i, j] += gain[k, i].conjugate() * gain[k, j]
    return largest_gain(square, work[n + 2 * m :, :m])


@compiled
def peak_over(angles: Real, matrix: Real, inputs: Real, outputs: Real, direct: Real, refine_above: float) -> float:
    """Largest `sensitivity_at` over increasing angles; peaks above `refine_above` [1] are searched between neighbours.

    Returns [1]
    Source: [own]
    """
    count = angles.shape[0]
    n, m = inputs.shape
    values = np.empty(count)
    work = np.empty((n + 3 * m, n + m), dtype=np.complex128)
    for i in range(count):
        values[i] = sensitivity_at(angles[i], matrix, inputs, outputs, direct, work)
    peak = max(values[0], values[count - 1])
    for i in range(1, count - 1):
        best = values[i]
        peak = max(peak, best)
        if best < refine_above or best < values[i - 1] or best < values[i + 1]:
            continue
        centre = angles[i]
        width = 0.5 * (angles[i + 1] - centre)
        for probe in range(16):
            side = 1.0 if probe % 2 == 0 else -1.0
            value = sensitivity_at(centre + side * width, matrix, inputs, outputs, direct, work)
            if value > best:
                best = value
                centre += side * width
            if side < 0.0:
                width *= 0.5
        peak = max(peak, best)
    return float(peak)
