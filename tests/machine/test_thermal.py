"""Two thermal bodies: energy, repetition, and a hottest instant inside a piece."""

import numpy as np
import pytest
from scipy.integrate import solve_ivp

from axis.machine.temperature import copper_resistance_ratio, magnet_ratio
from axis.machine.thermal import TwoBody, heat_capacity, periodic_rises, rises_after, steady_rises

BODY = TwoBody(0.35, 0.75, 180.0, 2600.0)
LOSSES, DURATIONS = [300.0, 20.0, 120.0, 0.0], [12.0, 40.0, 25.0, 60.0]


def test_cycle_repeats_itself():
    rises = periodic_rises(BODY, LOSSES, DURATIONS)
    state = (rises.winding[0], rises.housing[0])
    for loss, duration in zip(LOSSES, DURATIONS, strict=True):
        state = rises_after(BODY, state, loss, duration)
    assert state == pytest.approx((rises.winding[0], rises.housing[0]), rel=1e-12)


def test_short_cycle_comes_to_the_mean_loss():
    """A cycle far below both time constants: rises of the mean loss, ripple of P·t/C_w."""
    rises = periodic_rises(BODY, [200.0, 0.0], [0.05, 0.15])
    assert rises.peak_winding == pytest.approx(steady_rises(BODY, 50.0)[0], rel=5e-4)
    ripple = rises.winding[1] - rises.winding[0]
    assert ripple == pytest.approx((200.0 - 50.0) * 0.05 / 180.0, rel=1e-3)


def test_hottest_instant_is_where_two_pieces_meet():
    """Random cycles walked in fine steps: nowhere hotter, though the winding does turn inside pieces."""
    draw, turned = np.random.default_rng(3), 0
    for _ in range(60):
        body = TwoBody(*(float(one) for one in 10.0 ** draw.uniform([-1, -1, 0.5, 1.5], [0.5, 0.5, 2, 3.5])))
        losses = [float(one) for one in draw.uniform(0.0, 300.0, 4)]
        durations = [float(one) for one in 10.0 ** draw.uniform(0, 3, 4)]
        rises = periodic_rises(body, losses, durations)
        for start, loss, duration in zip(
            zip(rises.winding, rises.housing, strict=True), losses, durations, strict=True
        ):
            fine = [rises_after(body, start, loss, float(t))[0] for t in np.linspace(0.0, duration, 41)]
            assert max(fine) <= rises.peak_winding * (1.0 + 1e-12)
            turned += max(fine) > max(fine[0], fine[-1]) * (1.0 + 1e-9)
    assert turned > 0


def test_against_an_adaptive_solver():
    """Second road: scipy's LSODA from rest at rtol 1e-10."""

    def flow(_, x):
        across = (x[0] - x[1]) / 0.35
        return [(260.0 - across) / 180.0, (across - x[1] / 0.75) / 2600.0]

    reference = solve_ivp(flow, (0.0, 700.0), [5.0, 2.0], method="LSODA", rtol=1e-10, atol=1e-12).y[:, -1]
    assert rises_after(BODY, (5.0, 2.0), 260.0, 700.0) == pytest.approx(tuple(reference), rel=1e-8)


def test_capacity_from_the_time_constant():
    assert heat_capacity(63.0, 0.35) == pytest.approx(180.0, rel=1e-14)


def test_copper_there_and_back():
    """Referred from 25 °C to 120 °C and back is no change."""
    up, down = copper_resistance_ratio(393.15, 298.15), copper_resistance_ratio(298.15, 393.15)
    assert up * down == pytest.approx(1.0, rel=1e-14)
    assert up > 1.0


def test_magnets_lose_eleven_per_cent_over_a_hundred_kelvin():
    """−0.11 %/K over 100 K: 0.89, typical of NdFeB."""
    assert magnet_ratio(393.15) == pytest.approx(0.89, rel=1e-12)
