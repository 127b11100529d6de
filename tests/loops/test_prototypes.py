"""Narrow-band prototypes: the published ratios, a second simulation, an independent optimiser."""

import control
import numpy as np
import pytest
from scipy.optimize import differential_evolution

from axis.errors import NotComputable
from axis.loops.prototypes import FAST_SETTLING, INSIDE, narrow_band_prototype, step_extrema
from axis.loops.response import step_response


def response(coefficients):
    return step_response([1.0], [1.0, *coefficients, 1.0])


# How much faster than the published coefficients, at equal natural frequency and at equal lag: an earlier converged
# trial with an optimiser of its own, COMPUTED, printed to two decimals.
RATIOS = [(3, 1e-3, 1.80, None), (3, 1e-4, 1.85, None), (4, 1e-3, 1.77, 1.41), (4, 1e-4, 2.18, 1.53)]


@pytest.mark.parametrize(("order", "band", "at_equal_frequency", "at_equal_lag"), RATIOS)
def test_ratio_to_the_published_prototype(order, band, at_equal_frequency, at_equal_lag):
    narrow = narrow_band_prototype(order, band)
    published = FAST_SETTLING[order]
    ratio = response(published).settling_time(band) / response(narrow).settling_time(band)
    assert ratio == pytest.approx(at_equal_frequency, abs=0.0051)
    if at_equal_lag is not None:
        assert ratio * published[0] / narrow[0] == pytest.approx(at_equal_lag, abs=0.0051)


def test_the_optimum_stands_on_the_edge():
    """Order 3, 1e-3: 6.24, and a band just under its ripple is reached at 9.34 only (converged trial, COMPUTED)."""
    narrow = response(narrow_band_prototype(3, 1e-3))
    assert narrow.settling_time(1e-3) == pytest.approx(6.24, abs=0.005)
    assert narrow.settling_time(1e-3 * (INSIDE - 1e-9)) == pytest.approx(9.34, abs=0.01)


@pytest.mark.parametrize("order", [3, 4])
@pytest.mark.parametrize("band", [3.3e-2, 1e-2, 2.2e-3, 1e-3, 7e-5, 1e-5, 3.162e-6, 1e-6])
def test_inside_the_band_for_ever_after(order, band):
    """Exact response, and python-control on a fine grid as the second road."""
    narrow = narrow_band_prototype(order, band)
    exact = response(narrow)
    assert exact.overshoot == pytest.approx(band * INSIDE, rel=1e-6)
    assert exact.undershoot == pytest.approx(band * INSIDE, rel=1e-6)
    settled = exact.settling_time(band)
    assert settled == pytest.approx(exact.crossings(band)[0], rel=1e-12)  # entered once, never left
    times = np.linspace(0.0, 40.0, 8001)
    error = 1.0 - control.step_response(control.tf([1.0], [1.0, *narrow, 1.0]), times).outputs
    assert np.abs(error[times >= settled]).max() <= band * (1.0 + 1e-6)
    assert np.abs(error[times < settled - 0.01][-1]) > band


def settling_on_grid(coefficients, band, times):
    """Independent of the package: modes on a grid, last grid point outside, interpolated."""
    denominator = np.concatenate([[1.0], coefficients, [1.0]])
    poles = np.roots(denominator)
    if poles.real.max() > -0.05:
        return 1e3
    parts = 1.0 / (poles * np.polyval(np.polyder(denominator), poles))
    error = np.abs((np.exp(np.outer(times, poles)) @ parts).real)
    outside = np.nonzero(error > band)[0]
    last = int(outside[-1])
    if last + 1 == len(times):
        return 1e3
    share = (error[last] - band) / (error[last] - error[last + 1])
    return float(times[last] + share * (times[1] - times[0]))


@pytest.mark.parametrize(
    ("order", "band", "bounds", "generations"),
    [
        (3, 1e-3, [(1.0, 4.0), (1.0, 5.0)], 60),
        (3, 1e-2, [(1.0, 4.0), (1.0, 5.0)], 60),
        (4, 1e-3, [(1.0, 5.0), (1.5, 9.0), (1.0, 6.0)], 110),
        (4, 1e-2, [(1.0, 5.0), (1.5, 9.0), (1.0, 6.0)], 110),
    ],
)
def test_no_independent_search_finds_a_faster_one(order, band, bounds, generations):
    """Differential evolution from random starts: never faster than ours, and near it, so that it could have been."""
    times = np.arange(0.0, 25.0, 0.05)
    found = differential_evolution(
        settling_on_grid, bounds, args=(band, times), popsize=16, maxiter=generations, seed=5, tol=0.0, polish=False
    )
    ours = response(narrow_band_prototype(order, band)).settling_time(band)
    assert found.fun >= ours * (1.0 - 1e-3)  # the grid's own error
    assert found.fun <= ours * 1.03


@pytest.mark.parametrize("order", [3, 4])
@pytest.mark.parametrize("band", [1e-2, 1e-4])
def test_no_neighbour_is_better(order, band):
    best = np.array(narrow_band_prototype(order, band))
    ours = response(best).settling_time(band)
    random = np.random.default_rng(11)
    for size in (1e-3, 1e-2):
        for _ in range(15):
            shift = size * random.standard_normal(len(best))
            assert response(best + shift).settling_time(band) > ours * (1.0 - 1e-5)


def test_the_local_optimum_is_a_quarter_slower():
    """Order 4 at 1e-4: another vertex of the same ripple, COMPUTED by quadratic programming from 60 starts."""
    other = response((2.60094426, 4.05314776, 3.22112216))
    ours = response(narrow_band_prototype(4, 1e-4))
    assert other.overshoot == pytest.approx(1e-4, rel=1e-3)
    ratio = other.settling_time(1.001e-4) / ours.settling_time(1e-4)
    assert ratio == pytest.approx(1.26, abs=0.01)


@pytest.mark.parametrize(("order", "widest"), [(3, 0.1), (4, 0.04)])
def test_continuous_in_the_band(order, widest):
    bands = np.geomspace(1e-6, widest, 70)
    found = np.array([narrow_band_prototype(order, float(band)) for band in bands])
    steps = np.abs(np.diff(found, axis=0))
    assert steps.max() < 0.08
    assert np.all(np.diff(found[:, 0]) < 0.0)
    middle = narrow_band_prototype(order, 1e-3)
    close = narrow_band_prototype(order, 1e-3 * (1 + 1e-6))
    assert close == pytest.approx(middle, abs=1e-6)


def test_wider_bands_take_the_widest_computed():
    assert narrow_band_prototype(3, 0.5) == narrow_band_prototype(3, 0.1)
    assert narrow_band_prototype(4, 0.1) == narrow_band_prototype(4, 0.04)


@pytest.mark.parametrize("band", [0.0, -1.0, 9e-7, float("nan")])
def test_too_narrow_a_band_is_refused(band):
    with pytest.raises(NotComputable):
        narrow_band_prototype(3, band)


def test_extrema_agree_with_the_exact_response():
    for coefficients in FAST_SETTLING.values():
        exact = response(coefficients)
        found = step_extrema(coefficients, 1)
        assert found[0] == pytest.approx(exact.error(exact.turns[1]), rel=1e-9)
    with pytest.raises(NotComputable):
        step_extrema((2.5,), 1)  # two real poles: no extremum at all
