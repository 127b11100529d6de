"""Demand of a cycle against closed forms, against a second road, and against what must not change it."""

import csv
import math
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from scipy.integrate import quad

from axis.completion import move_profile
from axis.description.axis import Axis, Head
from axis.description.load import Friction, Load
from axis.description.moves import Move
from axis.description.transmission import BallScrew, Gearbox
from axis.sizing.demand import Load as Course
from axis.sizing.demand import demand, inertia_ratio
from axis.sizing.trace import trace
from tests.sizing.axes import BACK, CARRIAGE, MOTOR, RPM, THERE, completed, random_axis

PUBLISHED = Path(__file__).parent.parent / "published"


def published(name):
    lines = (PUBLISHED / name).read_text(encoding="utf-8").splitlines()
    (row,) = csv.DictReader(line for line in lines if not line.startswith("#"))
    return {key: float(value) for key, value in row.items()}


def direct(inertia, friction, move):
    """A rotary load on the motor's shaft; the rotor is a negligible part of the inertia."""
    return completed(
        Axis(
            head=Head(name="direct", travel="rotary", indexes=True, ambient=303.15),
            load=Load(inertia=inertia - 1e-12, friction=Friction(coulomb=friction)),
            motor=replace(MOTOR, inertia=1e-12),
            drive=CARRIAGE.drive,
            window=replace(CARRIAGE.window, position=1e-3),
            moves=(move,),
        )
    )


def test_rms_of_a_trapezoid():
    """tests/published/rms_trapezoid.csv, worked out by hand from Σ T²·t."""
    case = published("rms_trapezoid.csv")
    speed, ramp, run = case["speed [rpm]"] * RPM, case["accelerate [s]"], case["run [s]"]
    move = Move(
        distance=speed * (ramp + run),
        law="constant_acceleration",
        speed=speed,
        acceleration=speed / ramp,
        dwell=case["dwell [s]"],
    )
    axis = direct(case["inertia [kg*m^2]"], case["friction [N*m]"], move)
    found = demand(Course(axis))
    assert found.rms_torque == pytest.approx(case["=rms [N*m]"], rel=1e-9)
    assert found.peak_torque == pytest.approx(case["=accelerating [N*m]"], rel=1e-9)
    assert trace(axis).torque[2, 0] == pytest.approx(case["=decelerating [N*m]"], rel=1e-9)
    period = 2.0 * ramp + run + case["dwell [s]"]
    assert found.cycle_time == pytest.approx(period, rel=1e-12)
    assert found.mean_speed == pytest.approx(speed * (ramp + run) / period, rel=1e-12)


def test_torques_of_a_vertical_screw():
    """tests/published/vertical_screw.csv: hoisting, lowering and holding, the last with η = 1."""
    case = published("vertical_screw.csv")
    eta = case["efficiency"]
    screw = BallScrew(lead=case["lead [mm]"] * 1e-3, inertia=0.0, drag=0.0, efficiency=eta, efficiency_back=eta)
    slow = {"law": "constant_acceleration", "speed": 0.1, "acceleration": 1.0, "dwell": 0.3}
    axis = completed(
        replace(
            CARRIAGE,
            head=replace(CARRIAGE.head, incline=math.pi / 2.0),
            load=Load(mass=case["mass [kg]"]),
            transmission=(screw,),
            moves=(Move(distance=0.2, **slow), Move(distance=-0.2, **slow)),
        )
    )
    course = trace(axis)
    steady = (course.speed[:, 1] == 0.0) & (course.torque[:, 1] == 0.0)
    by_direction = {
        float(np.sign(speed)): torque
        for speed, torque in zip(course.speed[steady, 0], course.torque[steady, 0], strict=True)
    }
    assert by_direction[1.0] == pytest.approx(case["=up [N*m]"], rel=1e-9)
    assert by_direction[-1.0] == pytest.approx(case["=down [N*m]"], rel=1e-9)
    assert by_direction[0.0] == pytest.approx(case["=hold [N*m]"], rel=1e-9)
    assert demand(Course(axis)).standstill_torque == pytest.approx(case["=hold [N*m]"], rel=1e-9)


def torque_by_power(axis, move, time):
    """Motor torque and speed at one instant by a balance of power instead of torque: another writing of the physics."""
    _, v, a, _ = (float(each) for each in move_profile(move).evaluate(time))
    mass = axis.load_inertial + move.payload
    static = mass * 9.80665 * math.sin(axis.stated.head.incline) + move.force
    motor_speed = axis.ratio * v
    if v == 0.0:  # at the ends of a move there is no power; the torque follows as the limit of a creeping speed
        v, motor_speed = math.copysign(1e-9, move.distance), axis.ratio * math.copysign(1e-9, move.distance)
    power = (mass * a + static) * v + axis.coulomb * abs(v) + axis.viscous * v * v
    rate = v
    for stage in reversed(axis.stages):
        power = power / stage.efficiency if power > 0.0 else power * stage.efficiency_back
        rate = rate * stage.ratio
        acceleration = a * rate / v
        power += stage.inertia * acceleration * rate + stage.drag * abs(rate)
    power += axis.motor.inertia * a * axis.ratio * motor_speed
    return power / motor_speed, motor_speed


@pytest.mark.parametrize("seed", range(12))
def test_second_road(seed):
    """scipy's adaptive quadrature and a fine grid over torques found from a balance of power."""
    axis = completed(random_axis(seed))
    found = demand(Course(axis))
    constant, resistance = axis.motor.torque_constant, axis.motor.resistance
    squares = distances = returned = peak = fastest = period = 0.0
    for move in axis.moves:
        profile = move_profile(move)
        corners = np.cumsum(profile.pieces[:, 0])[:-1]
        period += profile.duration + move.dwell
        held = (axis.load_inertial + move.payload) * axis.gravity + move.force
        squares += (held / axis.ratio) ** 2 * move.dwell

        def square(time, move=move):
            return torque_by_power(axis, move, time)[0] ** 2

        def back(time, move=move):
            torque, speed = torque_by_power(axis, move, time)
            return max(0.0, -torque * speed - 1.5 * resistance * (torque / constant) ** 2)

        squares += quad(square, 0.0, profile.duration, points=corners, limit=400)[0]
        returned += quad(back, 0.0, profile.duration, points=corners, limit=400)[0]
        distances += abs(move.distance)
        grid = [torque_by_power(axis, move, t) for t in np.linspace(0.0, profile.duration, 4001)[1:-1]]
        peak = max(peak, abs(held / axis.ratio) * (move.dwell > 0.0), *(abs(torque) for torque, _ in grid))
        fastest = max(fastest, *(abs(speed) for _, speed in grid))
    assert found.cycle_time == pytest.approx(period, rel=1e-12)
    assert found.rms_torque == pytest.approx(math.sqrt(squares / period), rel=1e-7)
    assert found.rms_current == pytest.approx(found.rms_torque / constant, rel=1e-12)
    assert found.mean_speed == pytest.approx(distances * abs(axis.ratio) / period, rel=1e-9)
    assert found.regenerated_energy == pytest.approx(returned, rel=1e-5, abs=1e-9)
    assert found.peak_torque == pytest.approx(peak, rel=2e-3)
    assert found.peak_torque >= peak * (1.0 - 1e-9)
    assert found.peak_speed == pytest.approx(fastest, rel=1e-4)


@pytest.mark.parametrize("seed", range(6))
def test_halved_pieces_change_nothing(seed, monkeypatch):
    axis = completed(random_axis(seed))
    whole = demand(Course(axis))

    def halved(move):
        profile = move_profile(move)
        rows = []
        for t, p, v, a, j in profile.pieces.tolist():
            h = t / 2.0
            rows.append((h, p, v, a, j))
            rows.append((h, p + h * (v + h * (a / 2.0 + h * j / 6.0)), v + h * (a + h * j / 2.0), a + h * j, j))
        return replace(profile, pieces=np.array(rows))

    monkeypatch.setattr("axis.sizing.trace.move_profile", halved)
    again = demand(Course(axis))
    for key, value in whole.as_json().items():
        assert again.as_json()[key] == pytest.approx(value, rel=1e-12, abs=1e-12), key


@pytest.mark.parametrize("seed", range(4))
def test_lossless_stage_of_one_to_one_changes_nothing(seed):
    stated = random_axis(seed)
    plain = Gearbox(ratio=1.0, inertia=0.0, efficiency=1.0, efficiency_back=1.0, drag=0.0)
    with_stage = replace(stated, transmission=(plain, *stated.transmission))
    before, after = demand(Course(completed(stated))), demand(Course(completed(with_stage)))
    for key, value in before.as_json().items():
        assert after.as_json()[key] == pytest.approx(value, rel=1e-12, abs=1e-12), key


@pytest.mark.parametrize("seed", range(6))
def test_mirrored_cycle(seed):
    """Every distance, force and the incline turned round: the same demand."""
    stated = random_axis(seed)
    mirrored = replace(
        stated,
        head=replace(stated.head, incline=-stated.head.incline),
        moves=tuple(replace(move, distance=-move.distance, force=-move.force) for move in stated.moves),
    )
    here, there = demand(Course(completed(stated))), demand(Course(completed(mirrored)))
    for key, value in here.as_json().items():
        assert there.as_json()[key] == pytest.approx(value, rel=1e-12, abs=1e-12), key


def test_opposite_hand_of_the_screw_changes_nothing():
    other = replace(CARRIAGE, transmission=(replace(CARRIAGE.transmission[0], left_hand=True),))
    here, there = demand(Course(completed())), demand(Course(completed(other)))
    assert here.as_json() == pytest.approx(there.as_json(), rel=1e-12)


@pytest.mark.parametrize("seed", range(8))
def test_energy_balance_closes(seed):
    """Work of the motor = friction + losses of the stages + drag + work against gravity and force, each by itself."""
    axis = completed(random_axis(seed))
    course = trace(axis)
    nodes, weights = np.polynomial.legendre.leggauss(5)
    times = course.duration[:, None] * (nodes + 1.0) / 2.0

    def at(polynomial):
        return sum(polynomial[:, k : k + 1] * times**k for k in range(polynomial.shape[1]))

    def integral(values):
        return float((course.duration[:, None] * weights / 2.0 * values).sum())

    terms = []
    for move in axis.moves:
        profile = move_profile(move)
        terms.append(axis.coulomb * abs(move.distance) + axis.viscous * profile.squared_speed)
        terms.append(((axis.load_inertial + move.payload) * axis.gravity + move.force) * move.distance)
    for n, stage in enumerate(axis.stages):
        output_power = at(course.stage_outputs[n]) * at(course.stage_speeds[n]) / stage.ratio
        lost = np.where(output_power > 0.0, 1.0 / stage.efficiency - 1.0, 1.0 - stage.efficiency_back)
        terms.append(integral(np.abs(output_power) * lost))
        terms.append(stage.drag * integral(np.abs(at(course.stage_speeds[n]))))
    work = integral(at(course.torque) * at(course.speed))
    size = abs(work) + sum(abs(term) for term in terms)
    assert abs(work - sum(terms)) <= 1e-9 * size


def test_friction_does_not_help_to_hold():
    """A hanging load whose friction exceeds its weight still asks the motor for the weight."""
    heavy = replace(CARRIAGE.load, friction=Friction(coulomb=900.0, breakaway=1000.0, stribeck_speed=0.004))
    axis = completed(replace(CARRIAGE, head=replace(CARRIAGE.head, incline=math.pi / 2.0), load=heavy))
    weight = (38.0 + 9.0) * 9.80665
    assert demand(Course(axis)).standstill_torque == pytest.approx(weight * 0.02 / (2.0 * math.pi), rel=1e-12)


def test_nothing_to_move_asks_nothing():
    """Without mass worth speaking of, friction, drag and inertia of stages only the rotor is left."""
    light = replace(
        CARRIAGE,
        load=Load(mass=1e-9),
        payloads=(),
        transmission=(replace(CARRIAGE.transmission[0], inertia=0.0, drag=0.0),),
        moves=(replace(THERE, payload=None), BACK),
    )
    axis = completed(light)
    found = demand(Course(axis))
    assert found.peak_torque == pytest.approx(8.0 * axis.ratio * axis.motor.inertia, rel=1e-6)
    assert found.inertia_ratio < 1e-6


def test_inertia_ratio_by_hand():
    """(screw + (mass + largest payload)/i²)/rotor."""
    expected = (2e-4 + (38.0 + 9.0) * (0.02 / (2.0 * math.pi)) ** 2) / 1.5e-4
    assert inertia_ratio(completed()) == pytest.approx(expected, rel=1e-12)


def test_peak_current_is_reported_as_rms():
    """Peak q-axis current = torque over the peak-basis constant; reported over √2, so by the rms-basis constant."""
    found = demand(Course(completed()))
    assert found.as_json()["peak_current_Arms"] == pytest.approx(found.peak_torque / 0.72, rel=1e-12)
