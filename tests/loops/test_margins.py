"""Margins of the lifted loop by other roads: python-control, eigenvalues, stepping, plain linear algebra."""

import cmath
import math
from dataclasses import replace

import control
import numpy as np
import pytest

from axis.completion import Rates
from axis.description.settings import TorqueFilter
from axis.description.wishes import Tuning
from axis.loops.design import order4_design, with_gains
from axis.loops.filters import lowpass_share, torque_filter
from axis.loops.lifted import closed_loop, lifted_sensitivity, open_loop
from axis.loops.margins import (
    UNSTABLE,
    margin_violation,
    margins,
    margins_hold,
    peak_sensitivity,
    spectral_radius,
    unstable_by,
)
from axis.loops.prototypes import FAST_SETTLING
from axis.loops.sampled import current_sample, plant_matrices, sample_plant
from axis.loops.stability import growth, largest_gain
from tests.loops.axes import (
    NOMINAL_CONSTANT,
    SINGLE_RATE,
    SLOW_POSITION,
    THREE_RATES,
    current_loop,
    loops,
    notched,
    plant,
    sampled,
)

CASES = [
    (plant(math.inf), SINGLE_RATE, loops(SINGLE_RATE)),
    (plant(60.0), THREE_RATES, loops(THREE_RATES, kp=0.25)),
    (plant(60.0), THREE_RATES, notched(loops(THREE_RATES, kp=0.2))),
    (plant(200.0, 0.5), SLOW_POSITION, loops(SLOW_POSITION, kp=0.3, weight=1.0)),
]


def loop_by_python_control(corner, rates, settings):
    """Response of the loop, single rate, from blocks of python-control; the delay is one whole period."""
    period = rates.current_period
    a, b = plant_matrices(corner)
    c = np.zeros((3, 5))
    c[0, 4] = c[1, 0] = 1.0  # current, motor angle
    c[2, 1] = 1.0
    keep = [0, 1, 4] if math.isinf(corner.stiffness) else [0, 1, 2, 3, 4]
    continuous = control.ss(a[np.ix_(keep, keep)], b[keep, None], c[:, keep], np.zeros((3, 1)))
    sampled_plant = control.sample_system(continuous, period, "zoh")
    z = control.tf([1.0, 0.0], [1.0], period)
    grid = np.geomspace(1.0, math.pi / period * 0.99999, 4000)
    points = np.exp(1j * grid * period)

    def at(system):
        return system(points, squeeze=False)

    by_voltage = at(sampled_plant)[:, 0, :]
    delay = 1.0 / points
    current = settings.current
    controller = at(current.kp + current.kp / current.ti * period * z / (z - 1.0))[0, 0]
    inner = controller * delay * by_voltage[0]
    angle = controller * delay * by_voltage[1] / (1.0 + inner) / NOMINAL_CONSTANT  # per torque command

    velocity = settings.velocity
    share = lowpass_share(velocity.filter, period)
    smoothing = at(share * z / (z - (1.0 - share)))[0, 0]
    speed = smoothing * (1.0 - delay) / period * angle
    command = settings.position.kv * angle
    integrator = at(velocity.kp / velocity.ti * period * z / (z - 1.0))[0, 0]
    asked = velocity.kp * (velocity.setpoint_weight * command + speed) + integrator * (command + speed)
    for setting in settings.filters:
        b0, b1, b2, a1, a2 = torque_filter(setting, period)
        asked = asked * at(control.tf([b0, b1, b2], [1.0, a1, a2], period))[0, 0]
    return grid, asked


@pytest.mark.parametrize("with_filters", [False, True])
@pytest.mark.parametrize("antiresonance", [math.inf, 70.0, 300.0])
def test_single_rate_against_python_control(antiresonance, with_filters):
    """Gain up, gain down, phase and peak sensitivity from the frequency response that python-control gives."""
    corner = plant(antiresonance)
    settings = loops(SINGLE_RATE, kp=0.3)
    if with_filters:
        settings = notched(settings)
    if antiresonance == 300.0:
        settings = replace(settings, velocity=replace(settings.velocity, kp=0.05))
    ours = margins(sampled(corner, SINGLE_RATE), settings)
    assert ours.stable
    grid, response = loop_by_python_control(corner, SINGLE_RATE, settings)
    gain, phase, _, _, _, _ = control.stability_margins(control.frd(response, grid), returnall=True)
    up = min(20.0 * math.log10(g) for g in gain if g > 1.0)
    down = min((-20.0 * math.log10(g) for g in gain if g < 1.0), default=math.inf)
    assert ours.gain_margin_up_dB == pytest.approx(up, rel=1e-3)
    assert ours.gain_margin_down_dB == pytest.approx(down, rel=1e-3)
    assert ours.phase_margin_deg == pytest.approx(min(abs(p) for p in phase), rel=1e-3)
    assert ours.peak_sensitivity == pytest.approx(np.abs(1.0 / (1.0 + response)).max(), rel=1e-3)  # of their grid


@pytest.mark.parametrize(("corner", "rates", "settings"), CASES)
def test_eigenvalues_at_the_margin(corner, rates, settings):
    """At each margin one eigenvalue of the lifted closed loop has modulus 1; a little less is stable, more is not."""
    here = sampled(corner, rates)
    loop = open_loop(here, settings)
    found = margins(here, settings)
    assert found.stable
    for limit, factor in (
        (found.gain_margin_up_dB, lambda x: 10.0 ** (x / 20.0)),
        (found.gain_margin_down_dB, lambda x: 10.0 ** (-x / 20.0)),
        (math.radians(found.phase_margin_deg), lambda x: cmath.rect(1.0, x)),
    ):
        assert spectral_radius(loop, factor(limit)) == pytest.approx(1.0, abs=1e-9)
        assert spectral_radius(loop, factor(0.99 * limit)) < 1.0
        assert spectral_radius(loop, factor(1.01 * limit)) > 1.0
    turned_back = closed_loop(loop, cmath.rect(1.0, -math.radians(found.phase_margin_deg)))
    assert np.abs(np.linalg.eigvals(turned_back)).max() == pytest.approx(1.0, abs=1e-9)


def step_through(corner, rates, settings, factor, periods):
    """The sampled loop executed sample by sample in its stated order; the motor angle at each position sample."""
    step, per_ampere = current_sample(corner, rates, settings.current)
    share = lowpass_share(settings.velocity.filter, rates.velocity_period)
    filters = [(torque_filter(one, rates.velocity_period), [0.0, 0.0]) for one in settings.filters]
    x = np.zeros(7)
    x[0] = x[2] = 1.0
    last, speed, integral, command, torque = 1.0, 0.0, 0.0, 0.0, 0.0
    angles = []
    velocity = settings.velocity
    for k in range(periods * rates.velocity_every * rates.position_every):
        if k % (rates.velocity_every * rates.position_every) == 0:
            command = -settings.position.kv * x[0]
            angles.append(x[0])
        if k % rates.velocity_every == 0:
            speed += share * ((x[0] - last) / rates.velocity_period - speed)
            last = x[0]
            integral += velocity.kp / velocity.ti * rates.velocity_period * (command - speed)
            torque = velocity.kp * (velocity.setpoint_weight * command - speed) + integral
            for (b0, b1, b2, a1, a2), memory in filters:
                out = b0 * torque + memory[0]
                memory[0] = b1 * torque - a1 * out + memory[1]
                memory[1] = b2 * torque - a2 * out
                torque = out
        x = step @ x + per_ampere * (factor * torque / NOMINAL_CONSTANT)
    return np.array(angles)


@pytest.mark.parametrize(("corner", "rates", "settings"), CASES)
def test_lifted_loop_equals_execution_sample_by_sample(corner, rates, settings):
    """The same records from one matrix power and from the loop carried out in its stated order."""
    here = sampled(corner, rates)
    period = closed_loop(open_loop(here, settings))
    state = np.zeros(len(period))
    state[[0, 2, 7]] = 1.0
    lifted = []
    for _ in range(200):
        lifted.append(state[0])
        state = period @ state
    assert np.array(lifted) == pytest.approx(step_through(corner, rates, settings, 1.0, 200), abs=1e-9)


def test_stepping_decays_below_the_margin_and_grows_above():
    corner, rates, settings = CASES[1]
    limit = margins(sampled(corner, rates), settings).gain_margin_up_dB
    for share, decays in ((0.9, True), (1.1, False)):
        angles = np.abs(step_through(corner, rates, settings, 10.0 ** (share * limit / 20.0), 4000))
        assert bool(angles[-500:].max() < 0.5 * angles[500:1000].max()) == decays


@pytest.mark.parametrize(("corner", "rates", "settings"), CASES)
def test_peak_sensitivity_from_the_open_loop(corner, rates, settings):
    """S = (1 − L)⁻¹ from the lifted open loop, solved densely at 3000 angles, largest singular value by numpy."""
    here = sampled(corner, rates)
    loop = open_loop(here, settings)
    n, every = len(loop.acting), rates.position_every
    powers = [np.linalg.matrix_power(loop.step, k) for k in range(every + 1)]
    matrix = powers[every] @ loop.draw
    inputs = np.column_stack([powers[every - 1 - s] @ loop.acting for s in range(every)])
    outputs = np.array([loop.torque @ powers[s] @ loop.draw for s in range(every)])
    direct = np.zeros((every, every))
    for row in range(every):
        for column in range(row):
            direct[row, column] = loop.torque @ powers[row - column - 1] @ loop.acting
    largest = 0.0
    for angle in np.geomspace(1e-4, math.pi, 3000):
        gain = direct + outputs @ np.linalg.solve(
            cmath.exp(1j * angle) * np.eye(n - 1) - matrix[:-1], inputs[:-1].astype(complex)
        )
        largest = max(largest, np.linalg.norm(np.linalg.inv(np.eye(every) - gain), 2))
    assert peak_sensitivity(here, settings) == pytest.approx(largest, rel=2e-3)
    assert peak_sensitivity(here, settings) >= largest * (1.0 - 1e-6)


def test_lifting_does_not_change_a_single_rate_loop():
    """A velocity loop without position loop has one rate; lifted to 1 or 4 samples it has the same margins."""
    settings = loops(SINGLE_RATE, kv=1e-9, weight=0.0)
    four = replace(SINGLE_RATE, position_every=4)
    single, lifted = (margins(sampled(plant(70.0), rates), settings) for rates in (SINGLE_RATE, four))
    assert lifted.gain_margin_up_dB == pytest.approx(single.gain_margin_up_dB, rel=1e-6)
    assert lifted.phase_margin_deg == pytest.approx(single.phase_margin_deg, rel=1e-6)
    assert lifted.peak_sensitivity == pytest.approx(single.peak_sensitivity, rel=1e-3)


def test_published_order_4_has_nine_decibels_downwards():
    """1/k = γ(αβ − γ)/α² = 2.834 by Routh: a total inertia 2.83 times the designed one destabilises it.

    The lag is made a true first-order one: a torque low-pass of 20 ms, everything else thousands of times faster.
    """
    rates = Rates(current_period=4e-6, velocity_every=1, position_every=1, computation_delay=0.0)
    corner = replace(plant(math.inf), viscous=0.0, voltage_constant=1e-9)
    current = current_loop(rates)
    lag = 20e-3
    lowpass = TorqueFilter(kind="lowpass", frequency=1.0 / lag)
    settings = loops(rates, velocity_filter=0.0, filters=(lowpass,))
    gains = order4_design(FAST_SETTLING[4], corner.total_inertia, lag, 0.0)
    found = margins(sample_plant(corner, rates, current, NOMINAL_CONSTANT), with_gains(settings, gains))
    alpha, beta, gamma = FAST_SETTLING[4]
    assert gamma * (alpha * beta - gamma) / alpha**2 == pytest.approx(2.83, abs=0.005)
    expected = 20.0 * math.log10(gamma * (alpha * beta - gamma) / alpha**2)
    assert found.gain_margin_down_dB == pytest.approx(expected, abs=0.05)


def test_a_heavier_load_is_a_smaller_gain():
    """Rigid: inertia times x and torque divided by x are the same loop."""
    settings = loops(SINGLE_RATE)
    free = replace(plant(math.inf), viscous=0.0, voltage_constant=1e-12)
    down = margins(sampled(free, SINGLE_RATE), settings).gain_margin_down_dB
    for share, stable in ((0.98, True), (1.02, False)):
        x = 10.0 ** (share * down / 20.0)
        heavy = replace(free, motor_inertia=x * free.motor_inertia, load_inertia=x * free.load_inertia)
        assert margins(sampled(heavy, SINGLE_RATE), settings).stable == stable


def test_a_true_torque_constant_scales_the_loop():
    """A motor 5 % stronger than the drive believes has 20·log10(1.05) less margin upwards (no back EMF)."""
    settings = loops(THREE_RATES, kp=0.25)
    corner = replace(plant(60.0), voltage_constant=1e-12)
    strong = replace(corner, torque_constant=1.05 * corner.torque_constant)
    weaker, stronger = (margins(sampled(one, THREE_RATES), settings) for one in (corner, strong))
    difference = weaker.gain_margin_up_dB - stronger.gain_margin_up_dB
    assert difference == pytest.approx(20.0 * math.log10(1.05), rel=1e-6)


def random_settings(random):
    filters = ()
    if random.random() < 0.5:
        centre = 2.0 * math.pi * random.uniform(50.0, 500.0)
        filters = (
            TorqueFilter(
                kind="notch",
                frequency=centre,
                width=centre * random.uniform(0.2, 1.5),
                depth=random.uniform(0.05, 1.0),
            ),
        )
    return loops(
        THREE_RATES,
        kp=10.0 ** random.uniform(-1.7, -0.2),
        ti=10.0 ** random.uniform(-2.3, -0.5),
        kv=10.0 ** random.uniform(1.0, 2.4),
        weight=random.uniform(0.0, 1.0),
        velocity_filter=random.choice([0.0, 0.3e-3]),
        filters=filters,
    )


def test_screening_agrees_with_the_exact_margins():
    """Seeded random settings: the quick verdict equals the exact one, except within 1 % of a limit."""
    random = np.random.default_rng(7)
    wishes = Tuning()
    held = refused = 0
    for _ in range(70):
        corner = plant(random.choice([30.0, 60.0, 150.0, math.inf]), random.uniform(0.3, 5.0))
        here, settings = sampled(corner, THREE_RATES), random_settings(random)
        quick, exact = margins_hold(here, settings, wishes), margins(here, settings)
        if quick == exact.hold(wishes):
            held += quick
            refused += not quick
            continue
        near = [
            exact.gain_margin_up_dB / wishes.gain_margin_up,
            exact.gain_margin_down_dB / wishes.gain_margin_down,
            math.radians(exact.phase_margin_deg) / wishes.phase_margin,
            wishes.peak_sensitivity / exact.peak_sensitivity,
        ]
        assert min(abs(ratio - 1.0) for ratio in near) < 0.01, (exact, settings)
    assert held > 7
    assert refused > 7


def test_violation_is_graded():
    """Unstable is worse than stable without margins, and that is worse the more peak there is."""
    wishes = Tuning()
    here = sampled(plant(math.inf), THREE_RATES)
    levels = [margin_violation(here, loops(THREE_RATES, kp=kp), wishes) for kp in (0.35, 2.2, 3.0, 4.0, 6.0, 8.0)]
    assert levels[0] == 0.0
    assert levels == sorted(levels)
    assert len(set(levels)) == 6
    assert levels[-2] >= 7.0 > levels[-3]
    assert margins(here, loops(THREE_RATES, kp=8.0)) == UNSTABLE


def test_growth_is_the_sign_of_the_spectral_radius():
    random = np.random.default_rng(1)
    for _ in range(40):
        matrix = random.standard_normal((12, 12))
        matrix *= random.choice([0.9, 0.999, 1.001, 1.3]) / np.abs(np.linalg.eigvals(matrix)).max()
        logarithm = math.log(np.abs(np.linalg.eigvals(matrix)).max())
        found = growth(matrix)
        assert (found < 0.0) == (logarithm < 0.0)
        if logarithm > 0.0:
            assert found == pytest.approx(logarithm, rel=0.2)
    assert growth(np.zeros((3, 3))) < 0.0


def test_complex_factor_as_a_real_matrix_of_twice_the_size():
    corner, rates, settings = CASES[1]
    loop = open_loop(sampled(corner, rates), settings)
    for angle in np.radians([5.0, 20.0, 60.0, 120.0]):
        factor = cmath.rect(1.0, angle)
        assert (unstable_by(loop, factor) > 0.0) == (spectral_radius(loop, factor) >= 1.0)


@pytest.mark.parametrize("size", [1, 2, 4])
def test_largest_gain_is_the_largest_singular_value(size):
    random = np.random.default_rng(size)
    for _ in range(20):
        matrix = random.standard_normal((size, size)) + 1j * random.standard_normal((size, size))
        found = largest_gain(matrix.conj().T @ matrix, np.zeros((size, size), dtype=complex))
        assert found == pytest.approx(np.linalg.norm(matrix, 2), rel=1e-4)


def test_sensitivity_of_a_still_loop_is_one():
    """Without gain nothing answers: S is the identity."""
    settings = loops(THREE_RATES, kp=1e-12)
    _, _, _, direct = lifted_sensitivity(open_loop(sampled(plant(60.0), THREE_RATES), settings))
    assert direct == pytest.approx(np.eye(THREE_RATES.position_every), abs=1e-9)
