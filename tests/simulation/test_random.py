"""Random small axes, with everything on but the quantiser, against the event-located reference."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from axis.completion import Limits, Rates, ShaftPlant
from axis.description.settings import CurrentLoop, Feedforward, Loops, PositionLoop, TorqueFilter, VelocityLoop
from axis.simulation.run import run, trace
from axis.simulation.scenario import Scenario
from tests.simulation.axes import move
from tests.simulation.reference import simulate

COUNT = 20


def random_axis(seed: int) -> Scenario:
    """An axis of random size, stiffness, friction, load, rates and settings; most stop and start within the record."""
    r = np.random.default_rng(seed)

    def spread(low: float, high: float) -> float:
        return float(low * (high / low) ** r.random())

    motor = spread(1e-5, 1e-3)
    load = motor * spread(0.3, 8.0)
    reduced = motor * load / (motor + load)
    stiffness = load * (2.0 * math.pi * spread(15.0, 150.0)) ** 2
    ratio = spread(50.0, 1000.0) * (1.0 if r.random() < 0.5 else -1.0)
    distance = spread(0.3, 3.0) / ratio
    time = spread(0.02, 0.04)
    torque = 8.0 * (motor + load) * abs(distance * ratio) / time**2
    constant = spread(0.1, 1.5)
    coulomb = torque * spread(0.02, 0.5) if r.random() < 0.9 else 0.0
    plant = ShaftPlant(
        motor_inertia=motor,
        load_inertia=load,
        stiffness=stiffness if r.random() < 0.85 else math.inf,
        damping=2.0 * spread(0.005, 0.1) * math.sqrt(stiffness * reduced),
        motor_coulomb=torque * spread(0.005, 0.1) if r.random() < 0.6 else 0.0,
        coulomb=coulomb,
        breakaway=coulomb * float(r.uniform(1.0, 2.0)),
        viscous=torque * 1e-4,
        stribeck_speed=abs(ratio) * spread(2e-4, 1e-2),
        load_torque=torque * float(r.uniform(-0.5, 0.5)) if r.random() < 0.5 else 0.0,
        torque_constant=constant,
        voltage_constant=constant / 1.5,
        resistance=spread(0.3, 5.0),
        inductance=spread(1e-3, 1e-2),
        pole_pairs=4,
    )
    period = float(r.choice([1e-4, 1.25e-4]))
    rates = Rates(period, int(r.choice([1, 2])), int(r.choice([1, 2])), period * float(r.choice([0.0, 0.4, 1.0])))
    lag = 6.0 * period + 2e-4
    kp = (motor + load) / (spread(2.5, 8.0) * lag)
    filters = (TorqueFilter("lowpass", spread(2000.0, 8000.0)),) if r.random() < 0.5 else ()
    loops = Loops(
        CurrentLoop(plant.inductance / (3.0 * period), plant.inductance / plant.resistance),
        VelocityLoop(kp, lag * spread(6.0, 20.0), float(r.random()), float(r.choice([0.0, 1e-4]))),
        PositionLoop(1.0 / (lag * spread(5.0, 15.0))),
        Feedforward(float(r.uniform(0.5, 1.0)), float(r.uniform(0.0, 1.0))),
        filters,
    )
    peak = torque / constant * float(r.uniform(0.9, 3.0))
    speed = 2.0 * abs(distance * ratio) / time
    limits = Limits(
        0.6 * peak, peak, 0.005, peak, plant.voltage_constant * speed * float(r.uniform(0.9, 3.0)), math.inf
    )
    window = abs(distance) * spread(1e-3, 1e-1)
    moves = (move(distance, time, 0.03),)
    return Scenario(
        plants=(plant,),
        rates=rates,
        limits=limits,
        loops=loops,
        nominal_torque_constant=constant * float(r.uniform(0.95, 1.05)),
        nominal_inertia=motor + load,
        ratio=ratio,
        window=window,
        window_time=0.003,
        moves=moves,
    )


@pytest.mark.parametrize("seed", range(COUNT))
def test_random_axis(seed: int) -> None:
    asked = random_axis(seed)
    outcome, mine = trace(asked, 1)
    rows = simulate(asked, rtol=1e-10, max_step=1e-4).array()
    theirs = rows[:, 3] / asked.ratio
    assert np.abs(theirs - mine.load_position).max() < 1e-6 * asked.window
    seen = outcome.moves[0]
    error = theirs - asked.moves[0].distance
    outside = np.nonzero(np.abs(error) > asked.window)[0][-1]
    if outside == len(error) - 1:
        assert seen.time_to_window > mine.time[-1] or math.isinf(seen.time_to_window)
    else:
        assert mine.time[outside] < seen.time_to_window <= mine.time[outside] + 1.001 * asked.rates.position_period


def test_the_random_axes_are_no_easy_ones() -> None:
    """Of the same axes many stick, many never settle, and some meet each limit."""
    outcomes = [(random_axis(seed), run(random_axis(seed), 1).moves[0]) for seed in range(COUNT)]
    stuck = [bool(np.any(trace(asked, 1)[1].load_speed[20:] == 0.0)) for asked, _ in outcomes]
    assert sum(stuck) >= 0.3 * COUNT
    assert sum(math.isinf(seen.time_to_window) for _, seen in outcomes) >= 0.25 * COUNT
    assert sum(math.isfinite(seen.time_to_window) for _, seen in outcomes) >= 0.25 * COUNT
    assert any(seen.current_saturated > 0.0 for _, seen in outcomes)
    assert any(seen.voltage_saturated > 0.0 for _, seen in outcomes)
    assert any(math.isinf(asked.plants[0].stiffness) for asked, _ in outcomes)
    assert len({replace(asked.rates) for asked, _ in outcomes}) > 5
