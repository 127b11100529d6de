"""Filters, lags and the current loop."""

import cmath
import math
from dataclasses import replace

import numpy as np
import pytest
from scipy.linalg import expm

from axis.description.settings import TorqueFilter
from axis.loops.current import current_delay, current_loop_lag
from axis.loops.filters import delay_at_rest, lowpass, lowpass_share, notch, torque_filter
from axis.loops.lag import velocity_loop_lags
from axis.loops.lifted import open_loop
from axis.loops.sampled import current_sample, sample_plant
from tests.loops.axes import NOMINAL_CONSTANT, THREE_RATES, current_loop, loops, notched, plant

PERIOD = 125e-6


def gain_at(coefficients, frequency, period=PERIOD):
    b0, b1, b2, a1, a2 = coefficients
    z = cmath.exp(-1j * frequency * period)
    return (b0 + b1 * z + b2 * z * z) / (1.0 + a1 * z + a2 * z * z)


def test_filters_pass_constant_signals():
    for one in (lowpass(2000.0, PERIOD), notch(1500.0, 600.0, 0.1, PERIOD)):
        assert gain_at(one, 0.0) == pytest.approx(1.0, rel=1e-13)


@pytest.mark.parametrize("depth", [1.0, 0.5, 0.1, 0.02])
def test_notch_leaves_its_depth_at_the_centre(depth):
    for centre in (300.0, 2639.0, 15000.0):
        assert gain_at(notch(centre, 0.4 * centre, depth, PERIOD), centre) == pytest.approx(depth, rel=1e-10)


def test_notch_width_is_that_of_its_poles():
    """Continuous limit: an infinitely deep notch is 3 dB down at ± half its width (exact in the bilinear variable)."""
    centre, width, period = 1000.0, 100.0, 1e-6
    edges = [-width / 2 + math.sqrt(width**2 / 4 + centre**2), width / 2 + math.sqrt(width**2 / 4 + centre**2)]
    for edge in edges:
        assert abs(gain_at(notch(centre, width, 1e-9, period), edge, period)) == pytest.approx(math.sqrt(0.5), rel=1e-4)


@pytest.mark.parametrize("centre", [0.0, math.pi / PERIOD, 4.0 / PERIOD])
def test_notch_beyond_half_the_rate_is_refused(centre):
    with pytest.raises(ValueError, match="half the sampling rate"):
        notch(centre, 100.0, 0.1, PERIOD)


def test_stored_defaults_of_a_notch():
    bare = torque_filter(TorqueFilter(kind="notch", frequency=1000.0), PERIOD)
    assert bare == notch(1000.0, 1000.0, 0.1, PERIOD)


def test_lowpass_is_the_exact_hold_equivalent():
    """After n samples of a unit step the output is 1 − e^{−n·T/Tf}, one sample ahead of the filter behind a hold."""
    share = lowpass_share(1e-3, PERIOD)
    y = 0.0
    for n in range(1, 30):
        y += share * (1.0 - y)
        assert y == pytest.approx(1.0 - math.exp(-n * PERIOD / 1e-3), rel=1e-12)
    assert lowpass_share(0.0, PERIOD) == 1.0


def test_delay_at_rest_is_the_slope_of_the_phase():
    for one in (lowpass(2000.0, PERIOD), notch(1500.0, 600.0, 0.1, PERIOD), (0.3, 0.2, 0.1, -0.5, 0.1)):
        slope = -cmath.phase(gain_at(one, 1e-2) / gain_at(one, 0.0).real) / 1e-2
        assert delay_at_rest(one, PERIOD) == pytest.approx(slope, rel=1e-6)


def low_frequency_lag(settings, corner, rates, omega=0.5):
    """Phase of the exact sampled loop from torque command to velocity command, beyond that of an integrator."""
    loop = open_loop(sample_plant(corner, rates, settings.current, NOMINAL_CONSTANT), settings)
    z = cmath.exp(1j * omega * rates.velocity_period)
    response = loop.torque @ np.linalg.solve(z * np.eye(len(loop.acting)) - loop.step, loop.acting)
    return -(cmath.phase(-response) + math.pi / 2) / omega


@pytest.mark.parametrize("filtered", [False, True])
def test_lags_add_up_to_the_phase_of_the_sampled_loop(filtered):
    """Tσ item by item against the phase slope of the whole sampled velocity loop at frequency → 0, rigid, no losses."""
    corner = replace(plant(math.inf), viscous=0.0, voltage_constant=1e-9)
    settings = loops(THREE_RATES, ti=1e9, kv=1e-9, weight=0.0)
    if filtered:
        settings = notched(settings)
    lags = velocity_loop_lags(
        corner.inductance, THREE_RATES, settings.current, settings.velocity.filter, settings.filters
    )
    assert len(lags.torque_filters) == len(settings.filters)
    assert lags.total == pytest.approx(low_frequency_lag(settings, corner, THREE_RATES), rel=2e-3)


def test_no_item_of_the_lag_can_be_left_out():
    """Each of them is more than the bar of the test above."""
    settings = notched(loops(THREE_RATES))
    lags = velocity_loop_lags(4.2e-3, THREE_RATES, settings.current, settings.velocity.filter, settings.filters)
    items = (
        lags.current_loop,
        lags.velocity_hold,
        lags.differencing,
        lags.velocity_filter,
        *lags.torque_filters,
    )
    assert min(items) > 0.01 * lags.total
    assert sum(items) == pytest.approx(lags.total, rel=1e-14)


def test_current_loop_lag_at_the_modulus_optimum():
    delay = current_delay(THREE_RATES.computation_delay, THREE_RATES.current_period)
    assert current_loop_lag(4.2e-3, current_loop(THREE_RATES).kp) == pytest.approx(2.0 * delay, rel=1e-14)


def test_sampled_current_loop_of_a_pure_inductance():
    """With one period of computation z² − z + k·K·T = 0, so it becomes unstable at K·T = 1: three times the design."""
    rates = replace(THREE_RATES, computation_delay=THREE_RATES.current_period)
    corner = replace(plant(math.inf), resistance=1e-12, voltage_constant=1e-12, torque_constant=1e-12)
    current = current_loop(rates)
    for factor, stable in ((2.999, True), (3.001, False)):
        transition, _ = current_sample(corner, rates, replace(current, kp=factor * current.kp, ti=1e9))
        modes = np.abs(np.linalg.eigvals(transition[np.ix_([4, 6], [4, 6])]))
        assert bool(modes.max() < 1.0) == stable


def test_current_sample_against_sub_steps():
    """The sample by 500 explicit pieces of the continuous winding and mechanics, the voltage switched in between."""
    corner, rates = plant(), THREE_RATES
    current = current_loop(rates)
    transition, command = current_sample(corner, rates, current)
    state = np.array([0.1, 2.0, 0.09, 1.5, 3.0, 0.7, 12.0])
    wanted = 4.0
    integral = state[5] + current.kp / current.ti * rates.current_period * (wanted - state[4])
    voltage = current.kp * (wanted - state[4]) + integral
    step = rates.current_period / 500
    spring = corner.stiffness, corner.damping

    def derivative(x, v):
        torque = spring[0] * (x[0] - x[2]) + spring[1] * (x[1] - x[3])
        return np.array(
            [
                x[1],
                (corner.torque_constant * x[4] - torque) / corner.motor_inertia,
                x[3],
                (torque - corner.viscous * x[3]) / corner.load_inertia,
                (v - corner.resistance * x[4] - corner.voltage_constant * x[1]) / corner.inductance,
            ]
        )

    x = state[:5].copy()
    for n in range(500):
        v = state[6] if (n + 0.5) * step < rates.computation_delay else voltage
        x = x + step * derivative(x + step / 2 * derivative(x, v), v)  # midpoint rule
    expected = np.concatenate([x, [integral, voltage]])
    assert transition @ state + command * wanted == pytest.approx(expected, rel=1e-7)


def test_stiff_spring_becomes_rigid():
    """A coupling a million times stiffer moves both inertias as the rigid plant does."""
    rates = THREE_RATES
    stiff = replace(plant(), stiffness=1e9, damping=1e3)
    state = np.array([0.0, 1.0, 0.0, 1.0, 2.0, 0.0, 5.0])
    rigid = sample_plant(replace(plant(), stiffness=math.inf), rates, current_loop(rates), NOMINAL_CONSTANT)
    soft = sample_plant(stiff, rates, current_loop(rates), NOMINAL_CONSTANT)
    picked = [0, 1, 4, 5, 6]
    assert (soft.transition @ state)[picked] == pytest.approx((rigid.transition @ state)[picked], rel=1e-4)
    assert soft.command[picked] == pytest.approx(rigid.command[picked], rel=1e-3, abs=1e-12)


def test_exponential_of_the_whole_plant():
    """Without current loop the sampled plant is the plain exponential: computation delay 0 and gains → 0."""
    rates = replace(THREE_RATES, computation_delay=0.0, velocity_every=1)
    nearly_off = replace(current_loop(rates), kp=1e-12, ti=1.0)
    transition, _ = current_sample(plant(), rates, nearly_off)
    corner = plant()
    a = np.zeros((5, 5))
    a[0, 1] = a[2, 3] = 1.0
    a[1] = np.array([-corner.stiffness, -corner.damping, corner.stiffness, corner.damping, corner.torque_constant])
    a[1] /= corner.motor_inertia
    a[3, :4] = np.array([corner.stiffness, corner.damping, -corner.stiffness, -corner.damping - corner.viscous])
    a[3] /= corner.load_inertia
    a[4, [1, 4]] = -corner.voltage_constant / corner.inductance, -corner.resistance / corner.inductance
    assert transition[:5, :5] == pytest.approx(expm(a * rates.current_period), rel=1e-9, abs=1e-12)
