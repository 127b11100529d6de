"""What must hold whatever the numbers are: energy, mirror image, true rest, bits that do not depend on the compiler."""

from __future__ import annotations

import math
import os
import subprocess
import sys
from dataclasses import replace

import numpy as np
import pytest

from axis.completion import ShaftPlant
from axis.mechanics.friction import stribeck
from axis.simulation.run import run, trace
from tests.simulation.axes import FRICTION_FREE, LIMITS, PLANT, RATES, RATIO, move, scenario


def powers(plant: ShaftPlant, motor: float, twist: float, load: float, current: float) -> np.ndarray:
    """Motor power less all losses and the load's: what goes into inertias and spring [W]."""
    sign = float(np.sign(load))
    friction = sign * stribeck(load, plant.coulomb, plant.breakaway, plant.stribeck_speed) if sign else 0.0
    lost = plant.damping * (motor - load) ** 2 + plant.viscous * load**2 + friction * load
    lost += plant.motor_coulomb * abs(motor) + plant.load_torque * load
    return np.array([plant.torque_constant * current * motor, lost])


def slopes(plant: ShaftPlant, state: np.ndarray, voltage: float) -> np.ndarray:
    """Rates of motor speed, twist, load speed and current."""
    motor, twist, load, current = state
    spring = plant.stiffness * twist + plant.damping * (motor - load)
    at_motor = plant.torque_constant * current - spring - plant.motor_coulomb * np.sign(motor)
    at_load = spring - plant.load_torque - plant.viscous * load
    at_load -= np.sign(load) * stribeck(load, plant.coulomb, plant.breakaway, plant.stribeck_speed)
    return np.array(
        [
            at_motor / plant.motor_inertia if motor else 0.0,
            motor - load,
            at_load / plant.load_inertia if load else 0.0,
            (voltage - plant.resistance * current - plant.voltage_constant * motor) / plant.inductance,
        ]
    )


def energy_residual(period: float) -> float:
    """|motor work − losses − stored energy| over the integral of |motor power|, by a trapezoid with end corrections."""
    plant = replace(PLANT, load_torque=0.3)
    rates = replace(RATES, current_period=period, computation_delay=0.0)
    _, t = trace(scenario(plant=plant, rates=rates), 1)
    twist = (t.motor_position - t.load_position) * RATIO + plant.load_torque / plant.stiffness
    states = np.column_stack([t.motor_speed, twist, t.load_speed * RATIO, t.current])
    work = lost = size = 0.0
    for before, after, voltage in zip(states[:-1], states[1:], t.voltage[:-1], strict=True):
        ends = [powers(plant, *before), powers(plant, *after)]
        rates_of_power = []
        for state in (before, after):
            step = 1e-6 * slopes(plant, state, voltage)
            rates_of_power.append((powers(plant, *(state + step)) - powers(plant, *(state - step))) / 2e-6)
        part = period / 2 * (ends[0] + ends[1]) + period**2 / 12 * (rates_of_power[0] - rates_of_power[1])
        work, lost, size = work + part[0], lost + part[1], size + abs(part[0])
    motor, twist_end, load, _ = states[-1]
    stored = plant.motor_inertia * motor**2 + plant.load_inertia * load**2
    stored += plant.stiffness * (twist_end**2 - twist[0] ** 2)
    return float(abs(work - lost - stored / 2) / size)


def test_energy_balance() -> None:
    """The quadrature is the coarser side; what is left comes from the samples in which a side stops."""
    residuals = [energy_residual(62.5e-6), energy_residual(15.625e-6)]
    assert residuals[0] < 2e-6
    assert residuals[1] < residuals[0] / 3.5 or residuals[1] < 1e-8


def test_mirrored_axis_gives_the_mirrored_record() -> None:
    there = scenario(plant=replace(PLANT, load_torque=0.3), limits=LIMITS)
    back = scenario(move(-0.003, 0.04, 0.02), plant=replace(PLANT, load_torque=-0.3), limits=LIMITS)
    turned = replace(there, ratio=-RATIO, plants=back.plants)
    (_, one), (outcome, two), (same, three) = trace(there, 1), trace(back, 1), trace(turned, 1)
    assert np.array_equal(one.load_position, -two.load_position)
    assert np.array_equal(one.current, -two.current)
    assert np.array_equal(one.load_position, three.load_position)
    first = run(there, 1).moves[0]
    assert outcome.moves[0] == replace(first, rest_error=-first.rest_error)
    assert same.moves[0] == first


def test_rest_is_rest() -> None:
    """Held by friction the load does not creep, to the last bit, however long it is watched."""
    asked = scenario(move(0.003, 0.04, 0.5), limits=LIMITS)
    _, record = trace(asked, 1)
    still = np.nonzero(record.load_speed == 0.0)[0]
    runs = np.split(still, np.nonzero(np.diff(still) > 1)[0] + 1)
    longest = max(runs, key=len)
    assert len(longest) > 100
    positions = record.load_position[longest]
    # Position is motor angle less twist: each is rounded once a sample while the motor creeps on the wound-up spring.
    assert np.ptp(positions) <= len(longest) * np.spacing(0.003)
    both = longest[np.isin(longest, np.nonzero(record.motor_speed == 0.0)[0])]
    assert len(both) == 0 or np.ptp(record.load_position[both[-10:]]) == 0.0


def test_friction_above_the_motors_torque_never_moves_the_load() -> None:
    weak = replace(LIMITS, peak_current=1.0)
    outcome, record = trace(scenario(plant=replace(PLANT, breakaway=5.0, coulomb=4.0), limits=weak), 1)
    assert np.all(record.load_speed == 0.0)
    assert math.isinf(outcome.moves[0].time_to_window)
    assert math.isinf(outcome.moves[0].signal)
    assert outcome.moves[0].rest_error == pytest.approx(-0.003, rel=1e-12)


def test_quantiser_costs_one_count_at_most() -> None:
    """Friction-free with feedforward off, the quantised record stays within a few counts of the exact one."""
    counts = 2.0**20
    asked = scenario(plant=FRICTION_FREE)
    _, exact = trace(asked, 1)
    _, coarse = trace(replace(asked, limits=replace(asked.limits, encoder_counts=counts)), 1)
    count = 2.0 * math.pi / counts / RATIO
    assert 0.0 < np.abs(exact.motor_position - coarse.motor_position).max() < 1.5 * count


def test_a_loop_beyond_stability_is_told() -> None:
    asked = scenario(plant=FRICTION_FREE)
    wild = replace(asked.loops, velocity=replace(asked.loops.velocity, kp=100.0))
    outcome = run(replace(asked, loops=wild, moves=(move(0.003, 0.04, 20.0),)))
    assert outcome.diverged
    assert math.isinf(outcome.moves[0].time_to_window)


def test_cycle_that_indexes_repeats_too() -> None:
    """A cycle that does not close is the same one cycle further on."""
    outcome = run(scenario(move(0.003, 0.04, 0.4), limits=LIMITS))
    assert outcome.repeated
    assert outcome.cycles < 20


BITS = """
import hashlib
from axis.simulation.run import trace
from tests.simulation.axes import LIMITS, move, scenario
outcome, record = trace(scenario(move(0.0005, 0.02, 0.01), limits=LIMITS), 1)
digest = hashlib.sha256()
for name in ("load_position", "motor_position", "motor_speed", "current", "voltage"):
    digest.update(getattr(record, name).tobytes())
print(digest.hexdigest(), outcome)
"""


def test_uncompiled_source_gives_the_same_bits() -> None:
    answers = []
    for uncompiled in ("0", "1"):
        environment = {**os.environ, "SETTLEPOINT_UNCOMPILED": uncompiled}
        done = subprocess.run(
            [sys.executable, "-c", BITS], capture_output=True, text=True, env=environment, check=False
        )
        assert done.returncode == 0, done.stderr
        answers.append(done.stdout)
    assert answers[0] == answers[1]
