"""The kernel against scipy's solvers with located events, against scipy's expm and against python-control."""

from __future__ import annotations

import math
from dataclasses import replace

import control
import numpy as np
import pytest
from scipy.linalg import expm

from axis.completion import Rates
from axis.description.settings import Feedforward
from axis.simulation.run import trace
from axis.simulation.scenario import Scenario
from tests.simulation.axes import FRICTION_FREE, LIMITS, LOOPS, NO_LIMITS, PLANT, RATES, RATIO, WINDOW, move, scenario
from tests.simulation.reference import simulate

# Two solutions by different formulas differ by rounding: measured 2e-17 m on travels of 8 mm, asked 1e-9 of the window.
EXACT = 1e-9 * WINDOW


def differences(asked: Scenario, cycles: int = 1, **solver) -> tuple[float, float, int]:
    """Largest difference of load and motor position [m] from the reference, and its stops and starts."""
    record = simulate(asked, cycles, **solver)
    rows = record.array()
    _, mine = trace(asked, cycles)
    load = np.abs(rows[:, 3] / asked.ratio - mine.load_position).max()
    motor = np.abs(rows[:, 1] / asked.ratio - mine.motor_position).max()
    return float(load), float(motor), record.stops + record.starts


VERTICAL = replace(PLANT, load_torque=0.4)
CASES = {
    "ordinary stick-slip": scenario(),
    "friction at the load alone": scenario(plant=replace(PLANT, motor_coulomb=0.0)),
    "severe: twice Coulomb, 0.4 mm/s": scenario(
        plant=replace(PLANT, breakaway=2.0 * PLANT.coulomb, stribeck_speed=4e-4 * RATIO)
    ),
    "Coulomb alone": scenario(plant=replace(PLANT, breakaway=PLANT.coulomb)),
    "break-away that vanishes at once": scenario(plant=replace(PLANT, stribeck_speed=0.0)),
    "rigid": scenario(plant=replace(PLANT, stiffness=math.inf)),
    "new voltage inside the sample": scenario(rates=replace(RATES, computation_delay=2e-5)),
    "new voltage at once": scenario(rates=replace(RATES, computation_delay=0.0)),
    "there with a payload, back without, lifting": scenario(
        move(0.003, 0.04, 0.02),
        move(-0.003, 0.04, 0.02),
        plants=(replace(VERTICAL, load_inertia=1.2 * PLANT.load_inertia, load_torque=0.48), VERTICAL),
        ratio=-RATIO,
    ),
}


@pytest.mark.parametrize("name", CASES)
def test_equals_located_events(name: str) -> None:
    load, motor, events = differences(CASES[name])
    assert events >= 2  # the case does stop and start
    assert max(load, motor) < EXACT


def test_limits_and_quantiser_against_the_reference() -> None:
    """All limits bite; the encoder is coarse. One count at a rounding tie is allowed."""
    limits = replace(LIMITS, peak_current=2.2, continuous_current=1.0, drive_peak_current=2.2, peak_time=0.01)
    asked = scenario(move(0.004, 0.04, 0.03), limits=replace(limits, voltage=12.0, encoder_counts=2.0**16))
    load, motor, _ = differences(asked)
    outcome, _ = trace(asked, 1)
    assert outcome.moves[0].tripped
    assert outcome.moves[0].current_saturated > 1e-3
    assert outcome.moves[0].voltage_saturated > 1e-3
    assert max(load, motor) < 2.0 * math.pi / 2.0**16 / RATIO


def lifted(asked: Scenario) -> np.ndarray:
    """Load positions [m] of the friction-free loop at every current sample, by powers of exact matrices alone.

    State: motor angle, motor speed, load angle, load speed, current, old voltage, voltage integral, last angle,
    filtered speed, torque integral, current command, speed command; filters are left out.
    """
    plant, rates, loops = asked.plants[0], asked.rates, asked.loops
    a = np.zeros((6, 6))
    k, d, jm, jl = plant.stiffness, plant.damping, plant.motor_inertia, plant.load_inertia
    a[0, 1] = a[2, 3] = 1.0
    a[1, :5] = np.array([-k, -d, k, d, plant.torque_constant]) / jm
    a[3, :4] = np.array([k, d, -k, -d - plant.viscous]) / jl
    a[4, [1, 4, 5]] = np.array([-plant.voltage_constant, -plant.resistance, 1.0]) / plant.inductance
    early, late = expm(a * rates.computation_delay), expm(a * (rates.current_period - rates.computation_delay))
    share = 1.0 - math.exp(-rates.velocity_period / loops.velocity.filter)
    kp, tn, tv = loops.velocity.kp, loops.velocity.ti, rates.velocity_period
    z = np.zeros(12)
    found = []
    samples = math.ceil((asked.moves[0].duration + asked.moves[0].dwell) / rates.position_period - 1e-9)
    for n in range(samples * rates.velocity_every * rates.position_every):
        found.append(z[2] / asked.ratio)
        if n % (rates.velocity_every * rates.position_every) == 0:
            p, v, acceleration = at(asked, n * rates.current_period)
            z[11] = loops.position.kv * (asked.ratio * p - z[0])
        if n % rates.velocity_every == 0:
            z[8] += share * ((z[0] - z[7]) / tv - z[8])
            z[7] = z[0]
            error = z[11] + loops.feedforward.velocity * asked.ratio * v - z[8]
            z[9] += kp * tv / tn * error
            torque = kp * (error - (1.0 - loops.velocity.setpoint_weight) * z[11]) + z[9]
            torque += loops.feedforward.torque * asked.nominal_inertia * asked.ratio * acceleration
            z[10] = torque / asked.nominal_torque_constant
        z[6] += loops.current.kp / loops.current.ti * rates.current_period * (z[10] - z[4])
        before, z[5] = z[5], loops.current.kp * (z[10] - z[4]) + z[6]
        inside = early @ np.array([*z[:5], before])
        z[:5] = (late @ np.array([*inside[:5], z[5]]))[:5]
    return np.array(found)


def at(asked: Scenario, t: float) -> tuple[float, float, float]:
    for duration, p, v, a, j in asked.moves[0].pieces:
        if t < duration:
            return p + v * t + a * t**2 / 2 + j * t**3 / 6, v + a * t + j * t**2 / 2, a + j * t
        t -= duration
    return asked.moves[0].distance, 0.0, 0.0


@pytest.mark.parametrize("wait", [0.0, 2e-5, 62.5e-6])
@pytest.mark.parametrize("stiffness", [1.0, 0.04, 400.0])  # antiresonance 55 Hz, 11 Hz, 1.1 kHz
def test_linear_equals_the_lifted_system(wait: float, stiffness: float) -> None:
    plant = replace(FRICTION_FREE, stiffness=PLANT.stiffness * stiffness)
    asked = scenario(
        move(0.2, 0.5, 0.2),
        plant=plant,
        loops=replace(LOOPS, filters=()),
        rates=replace(RATES, computation_delay=wait),
    )
    _, mine = trace(asked, 1)
    bar = max(EXACT, 50.0 * np.spacing(0.2))
    assert np.abs(mine.load_position - lifted(asked)).max() < bar


def test_linear_single_rate_equals_python_control() -> None:
    """All three loops at one rate, no delay, no feedforward: one discrete system of python-control."""
    rates = Rates(current_period=1e-4, velocity_every=1, position_every=1, computation_delay=0.0)
    loops = replace(LOOPS, filters=(), feedforward=Feedforward(0.0, 0.0))
    asked = scenario(move(0.004, 0.05, 0.05), plant=FRICTION_FREE, rates=rates, loops=loops)
    p, t = FRICTION_FREE, rates.current_period
    k, d = p.stiffness, p.damping
    a = [
        [0, 1, 0, 0, 0],
        [-k / p.motor_inertia, -d / p.motor_inertia, k / p.motor_inertia, d / p.motor_inertia, 0],
        [0, 0, 0, 1, 0],
        [k / p.load_inertia, d / p.load_inertia, -k / p.load_inertia, -(d + p.viscous) / p.load_inertia, 0],
        [0, -p.voltage_constant / p.inductance, 0, 0, -p.resistance / p.inductance],
    ]
    a[1][4] = p.torque_constant / p.motor_inertia
    plant = control.ss(a, [[0]] * 4 + [[1 / p.inductance]], np.eye(5)[[0, 2, 4]], np.zeros((3, 1)))
    plant = control.sample_system(plant, t, "zoh")
    plant.set_inputs(["v"])
    plant.set_outputs(["motor", "load", "current"])
    share = 1.0 - math.exp(-t / loops.velocity.filter)
    kp, tn, kv, b = loops.velocity.kp, loops.velocity.ti, loops.position.kv, loops.velocity.setpoint_weight
    # w = kv·(r − θ); ω from differences through the filter; u = kp·(b·w − ω) + x with x updated first.
    z = control.tf("z")
    speed = control.tf2ss(share * (z - 1) / t / (z - (1 - share)), inputs=["motor"], outputs=["omega"])
    integral = control.tf2ss(kp * t / tn * z / (z - 1), inputs=["e"], outputs=["x"])
    current = control.tf2ss(
        (loops.current.kp * (1 + t / loops.current.ti) * z - loops.current.kp) / (z - 1), inputs=["ei"], outputs=["v"]
    )
    for system in (speed, integral, current):
        system.dt = t
    position = control.summing_junction(["r", "-motor"], "ep")
    static = control.ss([], [], [], [[kv]], dt=t, inputs=["ep"], outputs=["w"])
    error = control.summing_junction(["w", "-omega"], "e")
    command = control.ss(
        [], [], [], np.array([[kp * b, -kp, 1.0]]) / asked.nominal_torque_constant, dt=t,
        inputs=["w", "omega", "x"], outputs=["i"],
    )  # fmt: skip
    current_error = control.summing_junction(["i", "-current"], "ei")
    closed = control.interconnect(
        [plant, speed, integral, current, position, static, error, command, current_error],
        inputs=["r"],
        outputs=["load"],
        dt=t,
    )
    _, mine = trace(asked, 1)
    r = np.array([asked.ratio * at(asked, n * t)[0] for n in range(len(mine.time))])
    theirs = control.forced_response(closed, mine.time, r).outputs / asked.ratio
    assert np.abs(mine.load_position).max() > 0.0035
    # The realisations of python-control differ by rounding of differences of shaft angles over 0.1 ms.
    assert np.abs(mine.load_position - theirs).max() < 1e-6 * WINDOW


def test_stiffness_to_infinity_tends_to_the_rigid_axis() -> None:
    """The difference is the wind-up, which falls as 1/stiffness; the damping ratio is kept."""
    plant = replace(PLANT, motor_coulomb=0.0)
    reduced = plant.motor_inertia * plant.load_inertia / plant.total_inertia
    _, rigid = trace(scenario(plant=replace(plant, stiffness=math.inf)), 1)
    errors = []
    for stiffness in (1e6 * plant.stiffness, 1e8 * plant.stiffness):
        near = replace(plant, stiffness=stiffness, damping=0.6 * math.sqrt(stiffness * reduced))
        errors.append(np.abs(trace(scenario(plant=near), 1)[1].load_position - rigid.load_position).max())
    assert errors[1] < 1e-6 * WINDOW
    assert errors[0] / errors[1] == pytest.approx(100.0, rel=0.05)


def test_richer_model_falls_back_to_the_plainer_one() -> None:
    """Unlimited current and voltage equal limits that are never met; zero friction equals a vanishing one."""
    _, free = trace(scenario(limits=NO_LIMITS), 1)
    _, wide = trace(scenario(limits=replace(LIMITS, encoder_counts=math.inf)), 1)
    assert np.array_equal(free.load_position, wide.load_position)
    tiny = replace(PLANT, motor_coulomb=0.0, coulomb=0.0, breakaway=1e-300)
    _, none = trace(scenario(plant=FRICTION_FREE), 1)
    _, next_to_none = trace(scenario(plant=tiny), 1)
    assert np.abs(none.load_position - next_to_none.load_position).max() < 50.0 * np.spacing(0.004)
