"""Profiles of pieces: evaluated and integrated exactly, joined to cycles."""

import numpy as np
import pytest

from axis.compiled import compiled
from axis.motion.cycle import chain
from axis.motion.jerk_limited import jerk_limited
from axis.motion.pieces import Profile, evaluate_piece, from_rest, speed_zeros


@pytest.fixture
def move():
    return jerk_limited(0.3, 0.6, 9.0, 300.0, 7.0)


def test_evaluation_is_the_piece_by_hand():
    """p = 1 + 2·0.5 + 3·0.125 + 6·0.125/6, and its derivatives."""
    assert evaluate_piece(0.5, 1.0, 2.0, 3.0, 6.0) == (2.5, 4.25, 6.0)


def test_compiled_evaluation_gives_the_same_digits():
    plain, machine = (f(0.37, 1.1, -2.3, 3.7, 61.0) for f in (evaluate_piece, compiled(evaluate_piece)))
    assert plain == machine


def test_derivatives_agree(move):
    """Central differences of position give speed, of speed acceleration: second order in the step."""
    times, step = np.linspace(0.01, move.duration - 0.01, 97), 1e-6
    ahead, behind, here = move.evaluate(times + step), move.evaluate(times - step), move.evaluate(times)
    assert np.allclose((ahead[0] - behind[0]) / (2 * step), here[1], atol=1e-8)
    assert np.allclose((ahead[1] - behind[1]) / (2 * step), here[2], atol=2e-3)  # jerk steps inside a difference


def test_at_rest_outside(move):
    p, v, a, j = move.evaluate(np.array([-1.0, 0.0, move.duration, 9.0]))
    assert p == pytest.approx([0.0, 0.0, 0.3, 0.3], rel=1e-14)
    assert np.all(v == 0.0)
    assert np.all(a == 0.0)
    assert j.tolist() == [0.0, 300.0, 0.0, 0.0]


def test_integrals_equal_quadrature(move):
    """Gauss-Legendre with four nodes a piece is exact to degree seven, two roads to the same integral."""
    nodes, weights = np.polynomial.legendre.leggauss(4)
    squared_speed = squared_acceleration = 0.0
    for t, p, v, a, j in move.pieces:
        for node, weight in zip(nodes, weights, strict=True):
            _, speed, acceleration = evaluate_piece(t * (node + 1) / 2, p, v, a, j)
            squared_speed += weight * t / 2 * speed**2
            squared_acceleration += weight * t / 2 * acceleration**2
    assert move.squared_speed == pytest.approx(squared_speed, rel=1e-13)
    assert move.squared_acceleration == pytest.approx(squared_acceleration, rel=1e-13)


def test_mean_speed_counts_both_ways():
    """A piece that turns round inside: v = 1 − t over two seconds covers 1/2 forwards and 1/2 back."""
    there_and_back = Profile(np.array([[2.0, 0.0, 1.0, -1.0, 0.0]]))
    assert there_and_back.mean_speed == pytest.approx(0.5, rel=1e-14)
    assert there_and_back.end == 0.0


def test_peak_speed_inside_a_piece():
    """v = 3·t − 3·t²/2·2: largest at t = 1/2 with 3/4."""
    inside = Profile(np.array([[1.0, 0.0, 0.0, 3.0, -6.0]]))
    assert inside.peak_speed == pytest.approx(0.75, rel=1e-14)


@pytest.mark.parametrize(
    ("speed", "acceleration", "jerk", "zeros"),
    [
        (2.0, -1.0, 0.0, [2.0]),
        (1.0, 0.0, 0.0, []),
        (3.0, -4.0, 2.0, [1.0, 3.0]),  # (t − 1)·(t − 3)
        (1.0, 0.0, 2.0, []),
        (0.0, 0.0, 2.0, [0.0]),
        (0.0, -2.0, 2.0, [0.0, 2.0]),
    ],
)
def test_speed_zeros(speed, acceleration, jerk, zeros):
    assert speed_zeros(speed, acceleration, jerk) == pytest.approx(zeros)


def test_cycle_times_and_closing(move):
    back = jerk_limited(-0.3, 0.4, 5.0, 100.0)
    cycle = chain([move, back], [0.25, 0.1])
    assert cycle.closes
    assert cycle.starts == pytest.approx((0.0, move.duration + 0.25))
    assert cycle.commanded_ends == pytest.approx((move.duration, move.duration + 0.25 + back.duration))
    assert cycle.duration == pytest.approx(move.duration + back.duration + 0.35)
    assert cycle.profile.duration == pytest.approx(cycle.duration)
    assert float(cycle.profile.evaluate(move.duration + 0.1)[0]) == pytest.approx(0.3, rel=1e-14)
    middle = 0.5 * (cycle.starts[1] + cycle.commanded_ends[1])  # of a symmetric move: half way back
    assert float(cycle.profile.evaluate(middle)[0]) == pytest.approx(0.15, rel=1e-13)
    assert cycle.profile.end == pytest.approx(0.0, abs=1e-15)
    assert cycle.profile.mean_speed == pytest.approx(0.6 / cycle.duration, rel=1e-13)
    squared = move.squared_acceleration + back.squared_acceleration
    assert cycle.profile.squared_acceleration == pytest.approx(squared, rel=1e-13)


def test_thirds_of_a_decimal_still_close():
    """0.1 + 0.2 − 0.3 is not zero in floats, yet the cycle closes; one that indexes does not."""
    moves = [jerk_limited(d, 0.6, 9.0, 300.0) for d in (0.1, 0.2, -0.3)]
    assert chain(moves, [0.0, 0.1, 0.0]).closes
    assert not chain(moves[:2], [0.0, 0.1]).closes


def test_phases_without_duration_are_left_out():
    profile = from_rest(0.5, [(0.0, 3.0, 0.0), (1.0, 2.0, 0.0), (0.0, 0.0, 5.0), (1.0, -2.0, 0.0)])
    assert len(profile.pieces) == 2
    assert profile.start == 0.5
    assert profile.end == pytest.approx(2.5)
