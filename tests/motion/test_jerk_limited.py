"""Jerk-limited moves: against ruckig in bulk, against limits, laws of scaling, and given times."""

import itertools
import math
from dataclasses import dataclass

import numpy as np
import pytest
import ruckig

from axis.errors import NotComputable
from axis.motion.jerk_limited import jerk_limited, jerk_limited_for_duration, peak_speed, ramp_time
from axis.motion.pieces import evaluate_piece

MOVES = 3000
SEED = 20


@dataclass(frozen=True)
class Asked:
    distance: float  # [m]
    speed: float  # [m/s]
    acceleration: float  # [m/s²]
    jerk: float  # [m/s³]
    deceleration: float  # [m/s²]

    def move(self):
        return jerk_limited(self.distance, self.speed, self.acceleration, self.jerk, self.deceleration)


def random_moves():
    """Seeded moves over six decades of distance, so that every degenerate case turns up; a third symmetric."""
    draw = np.random.default_rng(SEED)
    for n in range(MOVES):
        acceleration = 10.0 ** draw.uniform(-1, 2)
        deceleration = acceleration if n % 3 == 0 else acceleration * 10.0 ** draw.uniform(-1, 1)
        yield Asked(
            distance=math.copysign(10.0 ** draw.uniform(-5, 1), draw.uniform(-1, 1)),
            speed=10.0 ** draw.uniform(-2, 1),
            acceleration=acceleration,
            jerk=10.0 ** draw.uniform(0, 4),
            deceleration=deceleration,
        )


def boundary_moves():
    """Moves that stand exactly on a border between two cases."""
    a, j, v = 4.0, 100.0, 0.16  # v = a²/j: the ramp just reaches its acceleration
    for dec in (4.0, 2.0, 8.0):
        yield Asked(1.0, v, a, j, dec)
        ramps = v / 2.0 * (ramp_time(v, a, j) + ramp_time(v, dec, j))
        yield Asked(ramps, v, a, j, dec)  # the cruise just vanishes
        yield Asked(0.99 * ramps, v, a, j, dec)
    yield Asked(2.0 * a**3 / j**2, 10.0, a, j, a)  # triangle of acceleration that just reaches it


ALL = [*random_moves(), *boundary_moves()]


def case(asked):
    """Which of speed, acceleration and deceleration the move reaches."""
    move = asked.move()
    top = move.peak_speed
    return (
        math.isclose(top, asked.speed, rel_tol=1e-12),
        top >= asked.acceleration**2 / asked.jerk,
        top >= asked.deceleration**2 / asked.jerk,
    )


def test_every_case_is_among_the_random_moves():
    assert len({case(asked) for asked in ALL}) == 8


def test_durations_equal_those_of_ruckig():
    """ruckig 0.14 or later is the independent reference; durations to 1e-9."""
    for asked in ALL:
        wanted = ruckig.InputParameter(1)
        wanted.target_position = [abs(asked.distance)]
        wanted.max_velocity, wanted.max_jerk = [asked.speed], [asked.jerk]
        wanted.max_acceleration, wanted.min_acceleration = [asked.acceleration], [-asked.deceleration]
        reference = ruckig.Trajectory(1)
        assert ruckig.Ruckig(1).calculate(wanted, reference) == ruckig.Result.Working
        assert asked.move().duration == pytest.approx(reference.duration, rel=1e-9), asked


def test_limits_are_kept_and_targets_reached():
    for asked in ALL:
        move, sign = asked.move(), math.copysign(1.0, asked.distance)
        assert move.end == pytest.approx(asked.distance, rel=1e-12), asked
        t, p, v, a, j = move.pieces[-1]
        _, speed, acceleration = evaluate_piece(t, p, v, a, j)
        assert abs(speed) <= 1e-12 * move.peak_speed, asked
        assert abs(acceleration) <= 1e-12 * move.peak_acceleration, asked
        starts = move.pieces[:, 3]
        accelerations = sign * np.concatenate([starts, starts + move.pieces[:, 4] * move.pieces[:, 0]])
        assert move.peak_speed <= asked.speed * (1.0 + 1e-12), asked
        assert accelerations.max() <= asked.acceleration * (1.0 + 1e-12), asked
        assert accelerations.min() >= -asked.deceleration * (1.0 + 1e-12), asked
        assert move.peak_jerk == asked.jerk, asked


def test_pieces_join_without_a_step():
    for asked in ALL[::10]:
        pieces = asked.move().pieces
        for before, after in itertools.pairwise(pieces):
            p, v, a = evaluate_piece(*before)
            assert p == pytest.approx(after[1], rel=1e-12, abs=1e-15)
            assert v == pytest.approx(after[2], rel=1e-12, abs=1e-15)
            assert a == pytest.approx(after[3], rel=1e-9, abs=1e-12 * asked.acceleration)


def test_looser_limits_are_never_slower():
    for asked in ALL[::5]:
        slow = asked.move().duration
        for name in ("speed", "acceleration", "jerk", "deceleration"):
            looser = Asked(**{**asked.__dict__, name: 1.1 * getattr(asked, name)})
            assert looser.move().duration <= slow * (1.0 + 1e-12), (asked, name)


def test_mirrored_move_is_the_mirror():
    for asked in ALL[::10]:
        mirror = Asked(**{**asked.__dict__, "distance": -asked.distance})
        assert np.array_equal(mirror.move().pieces[:, 1:], -asked.move().pieces[:, 1:])


def test_move_backwards_in_time_swaps_the_ramps():
    """Time reversal: the same duration with acceleration and deceleration exchanged."""
    for asked in ALL[::10]:
        swapped = Asked(asked.distance, asked.speed, asked.deceleration, asked.jerk, asked.acceleration)
        assert swapped.move().duration == pytest.approx(asked.move().duration, rel=1e-12)


def test_scaling_laws():
    """Length λ and time τ in other units: limits scale by λ/τ, λ/τ², λ/τ³, the duration by τ."""
    stretch, slower = 3.7, 0.23
    for asked in ALL[::10]:
        other = Asked(
            asked.distance * stretch,
            asked.speed * stretch / slower,
            asked.acceleration * stretch / slower**2,
            asked.jerk * stretch / slower**3,
            asked.deceleration * stretch / slower**2,
        )
        assert other.move().duration == pytest.approx(slower * asked.move().duration, rel=1e-11)


def test_zero_distance_takes_no_time():
    move = jerk_limited(0.0, 1.0, 10.0, 200.0)
    assert move.duration == 0.0
    assert move.pieces.shape == (1, 5)
    assert move.end == 0.0
    assert move.peak_speed == 0.0


def test_peak_speed_is_continuous_where_the_cases_meet():
    """Either side of each border the reached speed differs by the step in distance alone."""
    acceleration, deceleration, jerk = 3.0, 7.0, 120.0
    for limit in (acceleration, deceleration):
        top = limit**2 / jerk
        border = top / 2.0 * (ramp_time(top, acceleration, jerk) + ramp_time(top, deceleration, jerk))
        below, above = (peak_speed(border * f, acceleration, deceleration, jerk) for f in (1 - 1e-9, 1 + 1e-9))
        assert below < above
        assert above / below - 1.0 < 2e-9


def test_move_in_a_given_time_takes_it():
    fastest = jerk_limited(-0.3, 0.6, 9.0, 300.0, 7.0)
    for longer in (1.0, 1.3, 10.0):
        move = jerk_limited_for_duration(-0.3, longer * fastest.duration, 0.6, 9.0, 300.0, 7.0)
        assert move.duration == pytest.approx(longer * fastest.duration, rel=1e-14)
        assert move.end == pytest.approx(-0.3, rel=1e-13)
        assert move.peak_speed == pytest.approx(fastest.peak_speed / longer, rel=1e-13)
        assert move.peak_acceleration == pytest.approx(fastest.peak_acceleration / longer**2, rel=1e-13)
        assert move.peak_jerk == pytest.approx(fastest.peak_jerk / longer**3, rel=1e-13)


def test_too_short_a_time_says_which_would_do():
    with pytest.raises(NotComputable, match=r"at least 0\.65 s"):
        jerk_limited_for_duration(0.5, 0.6, 1.0, 10.0, 200.0)


def test_time_alone_gives_thirds_of_thirds():
    """d = 9·9·9 units of length per nine units of time: v = 1.5·d/T, a = 6.75·d/T², j = 60.75·d/T³ by hand."""
    move = jerk_limited_for_duration(2.0, 0.5)
    assert move.duration == pytest.approx(0.5, rel=1e-14)
    assert move.end == pytest.approx(2.0, rel=1e-14)
    assert move.peak_speed == pytest.approx(1.5 * 2.0 / 0.5, rel=1e-14)
    assert move.peak_acceleration == pytest.approx(6.75 * 2.0 / 0.5**2, rel=1e-14)
    assert move.peak_jerk == pytest.approx(60.75 * 2.0 / 0.5**3, rel=1e-14)
    assert np.allclose(move.pieces[:, 0], [0.5 / 9.0] * 3 + [0.5 / 3.0] + [0.5 / 9.0] * 3)


def test_time_alone_still_keeps_a_limit_beside_it():
    with pytest.raises(NotComputable, match="speed of 6, above its limit of 5"):
        jerk_limited_for_duration(2.0, 0.5, speed=5.0)
    assert jerk_limited_for_duration(2.0, 0.5, speed=6.0).duration == pytest.approx(0.5)


def test_no_distance_in_a_given_time_is_a_rest():
    for move in (jerk_limited_for_duration(0.0, 0.4), jerk_limited_for_duration(0.0, 0.4, 1.0, 1.0, 1.0)):
        assert move.duration == pytest.approx(0.4)
        assert move.peak_speed == 0.0
