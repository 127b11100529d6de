"""What is said of a move against the same figures found by brute force on a densely computed record."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.linalg import expm

from axis.simulation.observer import crossing, hermite, turning_point
from axis.simulation.record import Trace
from axis.simulation.run import run, trace
from axis.simulation.scenario import Scenario
from tests.simulation.axes import FRICTION_FREE, LIMITS, LOOPS, PLANT, RATES, RATIO, WINDOW, move, scenario

slope = st.floats(min_value=-3.0, max_value=3.0)


def plain(function):
    return getattr(function, "py_func", function)


@given(e0=slope, d0=slope, e1=slope, d1=slope)
@settings(deadline=None, derandomize=True)
def test_cubic_of_a_step(e0: float, d0: float, e1: float, d1: float) -> None:
    """Turning point and crossing against numpy's roots of the cubic through both ends."""
    rise = e1 - e0
    cubic = np.array([d0 + d1 - 2.0 * rise, 3.0 * rise - 2.0 * d0 - d1, d0, e0])
    for s in (0.0, 0.3, 1.0):
        assert plain(hermite)(s, e0, d0, e1, d1) == pytest.approx(np.polyval(cubic, s), abs=1e-12)
    if d0 * d1 < -1e-3:
        s = plain(turning_point)(e0, d0, e1, d1)
        assert 0.0 <= s <= 1.0
        assert np.polyval(np.polyder(cubic), s) == pytest.approx(0.0, abs=1e-9)
    level = 0.5 * (e0 + e1)
    if abs(rise) > 1e-3:
        s = plain(crossing)(level, 0.0, e0, d0, e1, d1)
        assert np.polyval(cubic, s) == pytest.approx(level, abs=1e-9)


def dense(asked: Scenario, record: Trace, parts: int) -> tuple[np.ndarray, np.ndarray]:
    """Friction-free load position [m] and time at `parts` instants of every sample, by powers of an exact matrix."""
    p = asked.plants[0]
    a = np.zeros((6, 6))
    k, d = p.stiffness, p.damping
    a[0, 1] = a[2, 3] = 1.0
    a[1, :5] = np.array([-k, -d, k, d, p.torque_constant]) / p.motor_inertia
    a[3, :4] = np.array([k, d, -k, -d - p.viscous]) / p.load_inertia
    a[4, [1, 4, 5]] = np.array([-p.voltage_constant, -p.resistance, 1.0]) / p.inductance
    step = expm(a * asked.rates.current_period / parts)
    z = np.vstack(
        [
            record.motor_position * RATIO,
            record.motor_speed,
            record.load_position * RATIO,
            record.load_speed * RATIO,
            record.current,
            record.voltage,
        ]
    )
    found = []
    for _ in range(parts):
        found.append(z[2] / RATIO)
        z = step @ z
    instants = record.time[:, None] + np.arange(parts) * asked.rates.current_period / parts
    return instants.ravel(), np.array(found).T.ravel()


def test_figures_of_the_load_by_brute_force() -> None:
    """A springy loop overshoots, comes back and leaves the window several times."""
    loops = replace(LOOPS, velocity=replace(LOOPS.velocity, kp=0.3, setpoint_weight=1.0), filters=())
    rates = replace(RATES, computation_delay=0.0)
    asked = scenario(move(0.003, 0.02, 0.2), plant=FRICTION_FREE, loops=loops, rates=rates)
    outcome, record = trace(asked, 1)
    parts = 64
    time, load = dense(asked, record, parts)
    error = load - 0.003
    seen = outcome.moves[0]
    outside = time[np.abs(error) > WINDOW][-1]
    assert seen.overshoot > 2.0 * WINDOW  # it does leave the far edge
    assert outside < seen.time_to_window <= outside + 1.01 * rates.current_period / parts
    assert seen.overshoot == pytest.approx(error.max(), rel=1e-6)
    assert seen.undershoot == pytest.approx(-error[np.argmax(error >= 0.0) :].min(), rel=1e-6)
    assert seen.settling_time == seen.time_to_window - 0.02


def brute_signal(asked: Scenario, record: Trace) -> tuple[float, float, int]:
    """First and last assertion and losses, from the measured positions at position samples."""
    every = asked.rates.velocity_every * asked.rates.position_every
    count = 2.0 * math.pi / asked.limits.encoder_counts
    angle = count * np.floor(record.motor_position[::every] * RATIO / count + 0.5)
    time = record.time[::every]
    inside = np.abs(angle - asked.moves[0].distance * RATIO) <= asked.window * RATIO
    since, stands, first, last, losses = None, False, math.inf, math.inf, 0
    for t, within in zip(time, inside, strict=True):
        if t < asked.moves[0].duration:
            continue
        if not within:
            losses += stands
            since, stands = None, False
            continue
        since = t if since is None else since
        if not stands and t - since >= asked.window_time - 1e-12:
            stands, last = True, t
            first = min(first, t)
    return first, last, losses


@pytest.mark.parametrize("window_time", [0.0, 0.002, 0.0101])
@pytest.mark.parametrize("kp", [0.15, 0.5])
def test_signal_by_brute_force(window_time: float, kp: float) -> None:
    loops = replace(LOOPS, velocity=replace(LOOPS.velocity, kp=kp, setpoint_weight=1.0), filters=())
    asked = scenario(move(0.003, 0.02, 0.2), loops=loops, limits=LIMITS, window_time=window_time)
    outcome, record = trace(asked, 1)
    first, last, losses = brute_signal(asked, record)
    seen = outcome.moves[0]
    assert (seen.signal, seen.signal_last) == pytest.approx((first, last))
    assert seen.signal_losses == losses
    early = seen.time_to_window - seen.signal if math.isfinite(seen.signal) else -math.inf
    assert seen.signal_early == early


def test_peaks_and_following_error_are_those_of_the_trace() -> None:
    asked = scenario(limits=replace(LIMITS, encoder_counts=math.inf))
    outcome, record = trace(asked, 1)
    seen = outcome.moves[0]
    error = (record.setpoint - record.motor_position)[::4]
    assert seen.following_error == pytest.approx(np.abs(error).max(), rel=1e-9)
    assert seen.peak_current == np.abs(record.current).max()
    assert seen.peak_torque == pytest.approx(np.abs(record.torque).max(), rel=1e-12)
    assert seen.peak_speed == np.abs(record.motor_speed).max()
    assert seen.current_square_time == pytest.approx((record.current**2).sum() * 62.5e-6, rel=1e-12)
    quiet = record.current[record.time >= 0.06 - 0.005]
    assert seen.current_ripple == pytest.approx(np.ptp(quiet), rel=1e-12)


def test_current_time_bucket() -> None:
    """Level by the rule of `docs/model.md`, with the current held at the continuous one until a tenth has drained."""
    limits = replace(LIMITS, continuous_current=1.0, peak_current=3.0, drive_peak_current=3.0, peak_time=0.004)
    asked = scenario(move(0.02, 0.06, 0.1), limits=limits)
    outcome, record = trace(asked, 1)
    capacity = 8.0 * 0.004
    level, full, peak = 0.0, False, 0.0
    for n, (current, command) in enumerate(zip(record.current, record.current_command, strict=True)):
        if n % 2 == 0:
            assert abs(command) <= (1.0 if full else 3.0) * (1.0 + 1e-12)
        level = max(0.0, level + (current**2 - 1.0) * 62.5e-6)
        full = level >= capacity or (full and level > 0.9 * capacity)
        peak = max(peak, level)
    assert outcome.moves[0].tripped
    assert outcome.moves[0].bucket_peak == pytest.approx(peak / capacity, rel=1e-9)


def test_worst_of_the_last_five_counts_where_no_two_cycles_agree() -> None:
    """A coarse encoder hunts: with a window of a hundredth of a count no two records agree within 1 % of it."""
    limits = replace(LIMITS, encoder_counts=4096.0)
    asked = scenario(move(0.003, 0.03, 0.03), move(-0.003, 0.03, 0.0301), limits=limits, window=4.88e-6 / 100.0)
    all_of_them = run(asked)
    assert not all_of_them.repeated
    assert all_of_them.cycles == 20
    records = [trace(asked, cycles)[1] for cycles in range(16, 21)]
    speeds = [np.abs(record.motor_speed[record.time < record.starts[1]]).max() for record in records]
    assert len(set(speeds)) > 1
    assert all_of_them.moves[0].peak_speed == max(speeds)


def test_repeated_cycle_counts_its_last_record() -> None:
    asked = scenario(move(0.003, 0.04, 0.3), move(-0.003, 0.04, 0.3), plant=PLANT, limits=LIMITS)
    outcome, record = trace(asked)
    assert outcome.repeated
    assert outcome.cycles >= 2
    there = record.time < record.starts[1]
    assert outcome.moves[0].peak_current == np.abs(record.current[there]).max()
    once_more = trace(asked, outcome.cycles - 1)[1] if outcome.cycles > 2 else None
    if once_more is not None:
        assert np.abs(once_more.load_position - record.load_position).max() <= 0.0101 * WINDOW


def test_each_move_starts_on_a_position_sample() -> None:
    asked = scenario(move(0.003, 0.0401, 0.02), move(-0.003, 0.04, 0.02))
    outcome, record = trace(asked, 1)
    assert record.starts[1] == pytest.approx(math.ceil(0.0601 / 250e-6) * 250e-6)
    assert outcome.moves[0].observed == pytest.approx(record.starts[1])
    assert outcome.moves[0].commanded_end == pytest.approx(0.0401)
