"""Quantisation of the encoder against its textbook statistics.

Values COMPUTED: least significant bit 2π/2^n, deviation LSB/√12 of the angle and LSB/(T·√6) of the difference quotient
(uniform rounding error), for 20 bit and 125 µs; 9.5367 nm a count on a screw of 10 mm lead.
"""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from axis.mechanics.stages import screw_ratio
from axis.simulation.controller import measured
from axis.simulation.layout import COUNT_ANGLE
from axis.simulation.scenario import limits_vector
from tests.simulation.axes import LIMITS

COUNTS, PERIOD = 2**20, 125e-6
plain = getattr(measured, "py_func", measured)


@pytest.fixture(scope="module")
def count() -> float:
    return float(limits_vector(replace(LIMITS, encoder_counts=float(COUNTS)))[COUNT_ANGLE])


def test_one_count(count: float) -> None:
    assert count == pytest.approx(5.992112e-6, rel=1e-6)
    assert count / screw_ratio(0.010) == pytest.approx(9.5367e-9, rel=1e-5)
    assert limits_vector(replace(LIMITS, encoder_counts=math.inf))[COUNT_ANGLE] == 0.0


def test_deviation_of_angle_and_of_differenced_speed(count: float) -> None:
    angles = np.random.default_rng(5).uniform(0.0, 1.0, 40_000)
    error = np.array([plain(angle, count) - angle for angle in angles])
    assert np.abs(error).max() <= count / 2.0 * (1.0 + 1e-9)
    assert error.std() == pytest.approx(1.729774e-6, rel=0.01)
    speed = np.diff(error.reshape(-1, 2), axis=1) / PERIOD
    assert speed.std() == pytest.approx(0.0195702, rel=0.02)
