"""Voltage circle and torque over speed: there and back, limits, and random motors by a second road."""

import math

import numpy as np
import pytest
from scipy.optimize import brentq

from axis.compiled import compiled
from axis.machine.envelope import (
    braking_current_at_voltage_limit,
    continuous_torque,
    current_at_voltage_limit,
    peak_torque_at_speed,
    phase_voltage,
    phase_voltage_limit,
    speed_at_voltage_limit,
)

MOTOR = {"resistance": 0.9, "inductance": 4.2e-3, "voltage_constant": 0.2, "pole_pairs": 4}
VOLTAGE = phase_voltage_limit(560.0, 0.95)


def motors(count):
    draw = np.random.default_rng(7)
    for _ in range(count):
        r, lq, k, v, s = 10.0 ** draw.uniform([-2, -4, -2, 1, 0], [1, -1.5, 0.3, 2.8, 3])
        yield {"resistance": r, "inductance": lq, "voltage_constant": k, "pole_pairs": int(draw.integers(1, 12))}, v, s


def test_limits_lie_on_the_circle():
    for motor, voltage, speed in motors(500):
        current = current_at_voltage_limit(speed, voltage, **motor)
        braking = braking_current_at_voltage_limit(speed, voltage, **motor)
        if current == 0.0:
            assert motor["voltage_constant"] * speed >= voltage
            assert braking == 0.0
            continue
        assert phase_voltage(current, speed, **motor) == pytest.approx(voltage, rel=1e-9)
        assert phase_voltage(-braking, speed, **motor) == pytest.approx(voltage, rel=1e-9)
        assert braking > current
        assert speed_at_voltage_limit(current, voltage, **motor) == pytest.approx(speed, rel=1e-6)


def test_second_road_by_root_finding():
    for motor, voltage, speed in motors(100):
        if motor["voltage_constant"] * speed >= voltage:
            continue
        root = brentq(
            lambda i, m=motor, v=voltage, s=speed: phase_voltage(i, s, **m) - v, 0.0, 2 * voltage / motor["resistance"]
        )
        assert current_at_voltage_limit(speed, voltage, **motor) == pytest.approx(root, rel=1e-9)


def test_standstill_and_too_fast():
    assert current_at_voltage_limit(0.0, 90.0, **MOTOR) == pytest.approx(100.0, rel=1e-14)  # V/R
    assert current_at_voltage_limit(VOLTAGE / 0.2, VOLTAGE, **MOTOR) == 0.0
    assert speed_at_voltage_limit(VOLTAGE / 0.9, VOLTAGE, **MOTOR) == 0.0
    assert speed_at_voltage_limit(0.0, VOLTAGE, **MOTOR) == pytest.approx(VOLTAGE / 0.2, rel=1e-14)


def test_speed_has_no_sign():
    for function in (current_at_voltage_limit, braking_current_at_voltage_limit):
        assert function(-600.0, VOLTAGE, **MOTOR) == function(600.0, VOLTAGE, **MOTOR)


def test_peak_torque_takes_the_tightest_limit():
    arguments = {"voltage": VOLTAGE, **MOTOR, "torque_constant": 0.3}
    assert peak_torque_at_speed(100.0, current_limit=20.0, magnet_limit=math.inf, **arguments) == pytest.approx(6.0)
    assert peak_torque_at_speed(100.0, current_limit=20.0, magnet_limit=5.5, **arguments) == 5.5
    fast = peak_torque_at_speed(1200.0, current_limit=20.0, magnet_limit=5.5, **arguments)
    assert fast == pytest.approx(0.3 * current_at_voltage_limit(1200.0, VOLTAGE, **MOTOR))
    assert fast < 5.5


def test_continuous_line():
    assert continuous_torque(0.0, 2.8, 2.4, 300.0) == 2.8
    assert continuous_torque(-300.0, 2.8, 2.4, 300.0) == pytest.approx(2.4)
    assert continuous_torque(150.0, 2.8, 2.4, 300.0) == pytest.approx(2.6)
    assert continuous_torque(1e5, 2.8, 2.4, 300.0) == 0.0


def test_compiled_envelope_gives_the_same_digits():
    arguments = (700.0, VOLTAGE, 0.9, 4.2e-3, 0.2, 4.0)
    assert compiled(current_at_voltage_limit)(*arguments) == current_at_voltage_limit(*arguments)
