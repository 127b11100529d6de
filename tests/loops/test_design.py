"""Cascade gains from a prototype, textbook settings, the designed start."""

import math
from dataclasses import replace

import numpy as np
import pytest

from axis.description.wishes import Tuning
from axis.errors import NotComputable
from axis.loops.design import (
    gains_for_denominator,
    largest_setpoint_weight,
    order3_denominator,
    order3_design,
    order4_denominator,
    order4_design,
    with_gains,
)
from axis.loops.lag import velocity_loop_lags
from axis.loops.margins import margins, margins_hold
from axis.loops.prototypes import FAST_SETTLING, narrow_band_prototype
from axis.loops.response import step_response
from axis.loops.start import designed_start, notch_ladder
from axis.loops.textbook import slowed, symmetrical_optimum, textbook_settings
from tests.loops.axes import SINGLE_RATE, THREE_RATES, loops, plant, sampled

INERTIA, LAG = 9e-4, 0.28e-3


def closed_loop_polynomial(gains, inertia, lag):
    """From the blocks: J·s²·θ = u/(Tσ·s + 1), u = Kp·(b·ω_p − ω) + Kp·a/s·(ω_p − ω), ω_p = −Kv·θ, ω = s·θ."""
    s = np.array([1.0, 0.0])
    integral_path = gains.kp / gains.ti * np.array([1.0, gains.kv])  # over s
    direct_path = gains.kp * np.array([1.0, gains.setpoint_weight * gains.kv])
    left = inertia * np.polymul(np.polymul(s, np.polymul(s, s)), [lag, 1.0])
    return np.polyadd(left, np.polyadd(np.polymul(s, direct_path), integral_path)) / (inertia * lag)


@pytest.mark.parametrize("weight", [0.0, 0.2, 0.45])
@pytest.mark.parametrize("prototype", [FAST_SETTLING[4], (2.76717667, 4.06628271, 3.08401404)])
def test_order4_gives_the_prototype(prototype, weight):
    """Closed loop's denominator equal to the scaled prototype, coefficient by coefficient, to 1e-10."""
    gains = order4_design(prototype, INERTIA, LAG, weight)
    omega = 1.0 / (prototype[0] * LAG)
    expected = np.array([1.0, *prototype, 1.0]) * omega ** np.arange(5)
    assert closed_loop_polynomial(gains, INERTIA, LAG) == pytest.approx(expected, rel=1e-10)


@pytest.mark.parametrize("weight", [0.0, 0.3, 0.55])
@pytest.mark.parametrize("share", [0.05, 0.4, 0.7])
def test_order3_gives_the_prototype_and_a_real_pole(share, weight):
    prototype = (2.39152681, 2.49545204)
    omega = share / (prototype[0] * LAG)
    denominator = order3_denominator(prototype, omega, LAG)
    if weight > largest_setpoint_weight(*denominator):
        with pytest.raises(NotComputable):
            order3_design(prototype, omega, INERTIA, LAG, weight)
        return
    gains = order3_design(prototype, omega, INERTIA, LAG, weight)
    cubic = np.array([1.0, *prototype, 1.0]) * omega ** np.arange(4)
    expected = np.polymul(cubic, [1.0, 1.0 / LAG - prototype[0] * omega])
    assert closed_loop_polynomial(gains, INERTIA, LAG) == pytest.approx(expected, rel=1e-10)


def test_weight_zero_by_hand():
    """b = 0: a = γω/β and Kv = ω/γ (the quadratic falls away)."""
    alpha, beta, gamma = FAST_SETTLING[4]
    gains = order4_design((alpha, beta, gamma), INERTIA, LAG, 0.0)
    omega = 1.0 / (alpha * LAG)
    assert 1.0 / gains.ti == pytest.approx(gamma * omega / beta, rel=1e-13)
    assert gains.kv == pytest.approx(omega / gamma, rel=1e-13)
    assert gains.kp == pytest.approx(INERTIA * LAG * beta * omega**2, rel=1e-13)


def test_largest_weights_of_the_published_prototypes():
    """γ²/(4β) = 0.56 for order 4; 0.637 for order 3 as ω → 0 (closed forms)."""
    denominator = order4_denominator(FAST_SETTLING[4], LAG)
    assert largest_setpoint_weight(*denominator) == pytest.approx(0.56, rel=1e-12)
    slow = order3_denominator(FAST_SETTLING[3], 1e-4 / LAG, LAG)
    assert largest_setpoint_weight(*slow) == pytest.approx(2.2**2 / (4 * 1.9), rel=1e-3)
    gains_for_denominator(*denominator, INERTIA, LAG, 0.5599999)
    with pytest.raises(NotComputable):
        gains_for_denominator(*denominator, INERTIA, LAG, 0.5600001)


def test_plain_pi_has_no_fast_prototype():
    for prototype in (FAST_SETTLING[4], narrow_band_prototype(4, 1e-3)):
        with pytest.raises(NotComputable):
            order4_design(prototype, INERTIA, LAG, 1.0)


def test_too_fast_for_the_real_pole():
    with pytest.raises(NotComputable):
        order3_design(FAST_SETTLING[3], 1.001 / (1.9 * LAG), INERTIA, LAG, 0.0)


def test_ignored_zero_overshoots_and_included_zero_does_not():
    """Position step through the whole loop: (b·s + a)·Kp·Kv/(J·Tσ)/D. With b = 0 the prototype's promise is kept.

    Common practice; the numbers are our own, COMPUTED by the response function, which the published tables check.
    """
    prototype = narrow_band_prototype(4, 1e-3)
    promise = step_response([1.0], [1.0, *prototype, 1.0]).overshoot

    def overshoot(weight):
        gains = order4_design(prototype, INERTIA, LAG, weight)
        gain = gains.kp * gains.kv / (INERTIA * LAG)
        numerator = [gain * weight, gain / gains.ti]
        return step_response(numerator, closed_loop_polynomial(gains, INERTIA, LAG)).overshoot

    assert overshoot(0.0) == pytest.approx(promise, rel=1e-6)
    assert promise < 1.0001e-3
    assert overshoot(0.5) > 0.02


def test_velocity_loop_with_and_without_its_zero():
    """Same on the velocity loop alone: a PI on an integrator at ζ = 0.9 promises 0.15 %, its zero makes 15.5 %."""
    promise = step_response([1.0], [1.0, 1.8, 1.0]).overshoot
    assert promise == pytest.approx(math.exp(-math.pi * 0.9 / math.sqrt(1 - 0.81)), rel=1e-9)
    assert step_response([1.8, 1.0], [1.0, 1.8, 1.0]).overshoot > 100 * promise


def test_with_gains_keeps_the_rest():
    start = loops(THREE_RATES)
    changed = with_gains(start, symmetrical_optimum(INERTIA, LAG))
    assert changed.velocity.filter == start.velocity.filter
    assert changed.velocity.setpoint_weight == 0.0
    assert (changed.current, changed.filters, changed.feedforward) == (start.current, start.filters, start.feedforward)


def test_textbook_is_the_least_slowed_that_holds():
    wishes = Tuning()
    corners = [sampled(plant(60.0), THREE_RATES), sampled(plant(90.0, 1.5), THREE_RATES)]
    start = loops(THREE_RATES, velocity_filter=0.0)
    lag = velocity_loop_lags(4.2e-3, THREE_RATES, start.current).total
    found = textbook_settings(start, INERTIA, lag, corners, wishes, 1.0)
    assert found.slowed_by > 1.0
    assert all(margins(corner, found.loops).hold(wishes) for corner in corners)
    one_less = with_gains(found.loops, slowed(symmetrical_optimum(INERTIA, lag), found.slowed_by / 1.01))
    assert not all(margins_hold(corner, one_less, wishes) for corner in corners)
    assert (found.loops.feedforward.velocity, found.loops.feedforward.torque) == (1.0, 1.0)
    assert found.loops.velocity.setpoint_weight == 0.0
    product = found.loops.velocity.ti * found.loops.position.kv  # the common factor leaves it: 4·Tσ/(16·Tσ)
    assert product == pytest.approx(0.25, rel=1e-12)


def test_textbook_says_when_nothing_holds():
    wishes = replace(Tuning(), phase_margin=math.radians(100.0))
    with pytest.raises(NotComputable):
        textbook_settings(loops(SINGLE_RATE), INERTIA, 0.5e-3, [sampled(plant(math.inf), SINGLE_RATE)], wishes, 1.0)


def start_for(plants, wishes, rates=THREE_RATES):
    corners = [sampled(corner, rates) for corner in plants]
    settings = loops(rates, velocity_filter=0.0, weight=0.0)
    return designed_start(settings, plants, corners, rates, INERTIA, 1e-3, wishes), corners


def test_designed_start_holds_exactly():
    wishes = Tuning()
    nominal = plant(120.0)
    plants = [replace(nominal, stiffness=share * nominal.stiffness) for share in (0.8, 1.0, 1.2)]
    found, corners = start_for(plants, wishes)
    assert found.order == 3
    assert all(margins(corner, found.loops).hold(wishes) for corner in corners)
    assert len(found.loops.filters) == 1


def test_designed_start_takes_order_4_where_it_may():
    lax = Tuning(gain_margin_up=0.0, gain_margin_down=0.0, phase_margin=0.0, peak_sensitivity=50.0)
    found, _ = start_for([plant(math.inf)], lax)
    assert found.order == 4
    assert found.loops.filters == ()
    alpha = narrow_band_prototype(4, 1e-3)[0]
    assert found.natural_frequency == pytest.approx(1.0 / (alpha * found.lags.total), rel=1e-12)


def test_wider_margins_are_slower():
    plants = [plant(120.0)]
    usual, _ = start_for(plants, Tuning())
    careful, _ = start_for(plants, Tuning(phase_margin=math.radians(45.0), peak_sensitivity=1.6))
    assert careful.settling_time > usual.settling_time


def test_notch_ladder():
    assert notch_ladder([plant(math.inf)], 125e-6) == [()]
    candidates = notch_ladder([plant(60.0), plant(90.0)], 125e-6)
    assert candidates[0] == ()
    centre = candidates[1][0].frequency
    assert centre == pytest.approx(2 * math.pi * math.sqrt(60.0 * 90.0) * math.sqrt(3.0), rel=1e-9)
    assert notch_ladder([plant(2000.0)], 125e-6) == [()]  # above what a filter at 8 kHz can act on
