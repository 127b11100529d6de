"""Step responses against closed forms and other roads; published tables stand in tests/published."""

import math

import control
import numpy as np
import pytest

from axis.errors import NotComputable
from axis.loops.prototypes import FAST_SETTLING
from axis.loops.response import delayed_integrator_step, step_response


def test_critically_damped_closed_form():
    """y = 1 − e^{−t}·Σ t^k/k! of 1/(s + 1)^n: repeated poles, which sums of modes cannot do."""
    for order in range(1, 7):
        denominator = [math.comb(order, k) for k in range(order + 1)]
        response = step_response([1.0], denominator)
        for t in (0.3, 1.7, 6.0, 15.0):
            expected = math.exp(-t) * sum(t**k / math.factorial(k) for k in range(order))
            assert response.error(t) == pytest.approx(expected, rel=1e-9, abs=1e-13)
        assert response.overshoot == 0.0


def test_peak_of_double_pole_with_zero():
    """ζ = 1: the peak lies at t = 2 exactly (closed form y = 1 − e^{−t}(1 − t))."""
    response = step_response([2.0, 1.0], [1.0, 2.0, 1.0])
    assert response.turns[1] == pytest.approx(2.0, rel=1e-12)


def test_against_python_control():
    """A second road on a fine grid: a transfer function with two zeros, feedthrough and a weakly damped pair."""
    numerator, denominator = [0.3, 1.0, 2.0, 5.0], [1.0, 2.2, 9.0, 6.0]
    response = step_response(numerator, denominator)
    times = np.linspace(0.0, 20.0, 4001)
    theirs = control.step_response(control.tf(numerator, denominator), times).outputs / (5.0 / 6.0)
    ours = np.array([1.0 - response.error(t) for t in times])
    assert ours == pytest.approx(theirs, abs=1e-9)


def test_time_unit_scales():
    slow = step_response([1.0], [1.0, 1.9, 2.2, 1.0])
    w = 730.0
    fast = step_response([w**3], [1.0, 1.9 * w, 2.2 * w**2, w**3])
    assert fast.settling_time(0.02) * w == pytest.approx(slow.settling_time(0.02), rel=1e-11)
    assert fast.overshoot == pytest.approx(slow.overshoot, rel=1e-11)


def test_unstable_is_refused():
    with pytest.raises(NotComputable):
        step_response([1.0], [1.0, -0.1, 1.0])
    with pytest.raises(NotComputable):
        step_response([1.0, 0.0], [1.0, 1.0, 1.0])


def test_fast_responses_as_common_practice_has_them():
    """No steady-state error, overshoot 0.1 to 2 %, undershoot at most 2 %: once in ±2 % it stays (common practice)."""
    for inner in FAST_SETTLING.values():
        response = step_response([1.0], [1.0, *inner, 1.0])
        assert 0.001 <= response.overshoot <= 0.02
        assert response.undershoot <= 0.02
        settled = response.settling_time(0.02)
        later = np.linspace(settled * (1 + 1e-9), settled + 60, 6000)
        assert max(abs(response.error(t)) for t in later) <= 0.02
        assert abs(response.error(60.0)) < 1e-6


def test_integrator_with_true_delay():
    """K·T_d = 1/2: peak and settling time, COMPUTED by method of steps and time stepping."""
    times = np.linspace(4.0, 5.5, 15001)
    values = [delayed_integrator_step(0.5, 1.0, t) for t in times]
    peak = int(np.argmax(values))
    assert values[peak] - 1.0 == pytest.approx(0.040519599737940615, rel=1e-6)
    assert times[peak] == pytest.approx(4.740079028136165, abs=2e-4)
    outside = [t for t in np.linspace(0.0, 20.0, 20001) if abs(delayed_integrator_step(0.5, 1.0, t) - 1.0) > 0.02]
    assert outside[-1] == pytest.approx(6.0565, abs=1.2e-3)
    lag = step_response([1.0], [2.0, 2.0, 1.0])
    assert lag.overshoot == pytest.approx(0.0432139, rel=1e-6)


def test_true_delay_by_stepping():
    """Independent: Euler steps of ẏ = K·(1 − y(t − T_d)) at 1e-4 T_d."""
    gain, delay, step = 800.0, 5e-4, 5e-8
    n = round(delay / step)
    y = np.zeros(8 * n)
    for k in range(1, len(y)):
        past = y[k - 1 - n] if k - 1 >= n else 0.0
        y[k] = y[k - 1] + step * gain * ((1.0 if k - 1 >= n else 0.0) - past)
    for multiple in (1.5, 3.0, 6.0):
        assert delayed_integrator_step(gain, delay, multiple * delay) == pytest.approx(y[round(multiple * n)], abs=2e-4)
