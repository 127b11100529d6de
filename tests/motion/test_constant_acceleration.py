"""Trapezoid and triangle of speed, against their closed forms."""

import math

import numpy as np
import pytest

from axis.errors import NotComputable
from axis.motion.constant_acceleration import constant_acceleration, constant_acceleration_for_duration
from axis.motion.jerk_limited import jerk_limited


def test_trapezoid():
    """T = d/v + v/2·(1/a + 1/a_dec) = 0.8/1.2 + 0.6·(1/8 + 1/5), by hand."""
    move = constant_acceleration(0.8, 1.2, 8.0, 5.0)
    assert move.duration == pytest.approx(0.8 / 1.2 + 0.6 * (1 / 8 + 1 / 5), rel=1e-14)
    assert move.end == pytest.approx(0.8, rel=1e-14)
    assert move.peak_speed == pytest.approx(1.2, rel=1e-14)
    assert len(move.pieces) == 3


def test_triangle():
    """d = 0.02, a = 10 both ways: v = √(d·a), T = 2·√(d/a)."""
    move = constant_acceleration(-0.02, 5.0, 10.0)
    assert move.duration == pytest.approx(2.0 * math.sqrt(0.02 / 10.0), rel=1e-14)
    assert move.peak_speed == pytest.approx(math.sqrt(0.02 * 10.0), rel=1e-14)
    assert move.end == pytest.approx(-0.02, rel=1e-14)
    assert len(move.pieces) == 2


def test_speed_just_reached_has_no_cruise_and_no_gap():
    move = constant_acceleration(0.1, 1.0, 10.0)  # v²/a = d
    assert move.duration == pytest.approx(0.2, rel=1e-14)
    assert move.end == pytest.approx(0.1, rel=1e-14)


def test_zero_distance():
    assert constant_acceleration(0.0, 1.0, 10.0).duration == 0.0


def test_is_the_limit_of_large_jerk():
    """A jerk-limited move with a very large jerk is a + a_dec over 2·j longer and no more."""
    plain = constant_acceleration(0.8, 1.2, 8.0, 5.0)
    assert jerk_limited(0.8, 1.2, 8.0, 1e6, 5.0).duration == pytest.approx(plain.duration + 13.0 / 2e6, rel=1e-12)


def test_random_moves_reach_their_target_within_limits():
    draw = np.random.default_rng(4)
    for _ in range(500):
        distance, speed, up, down = (float(one) for one in 10.0 ** draw.uniform(-3, 1, 4))
        move = constant_acceleration(distance, speed, up, down)
        assert move.end == pytest.approx(distance, rel=1e-12)
        assert move.peak_speed <= speed * (1.0 + 1e-12)
        time, _, v, a, _ = move.pieces[-1]
        assert abs(v + a * time) <= 1e-12 * move.peak_speed


def test_given_time():
    thirds = constant_acceleration_for_duration(0.9, 0.3)
    assert thirds.peak_speed == pytest.approx(1.5 * 0.9 / 0.3, rel=1e-14)
    assert thirds.peak_acceleration == pytest.approx(4.5 * 0.9 / 0.09, rel=1e-14)
    stretched = constant_acceleration_for_duration(0.8, 1.81, 1.2, 8.0, 5.0)
    assert stretched.duration == pytest.approx(1.81, rel=1e-14)
    assert stretched.end == pytest.approx(0.8, rel=1e-14)
    with pytest.raises(NotComputable, match="too short"):
        constant_acceleration_for_duration(0.8, 0.8, 1.2, 8.0, 5.0)
    with pytest.raises(NotComputable, match="acceleration of 45, above its limit of 40"):
        constant_acceleration_for_duration(0.9, 0.3, acceleration=40.0)
