"""One stage: power flow, energy, and what the kernel compiles."""

import itertools
import math

import pytest

from axis.compiled import compiled
from axis.mechanics.friction import steady_friction, stribeck
from axis.mechanics.solids import (
    cylinder_inertia,
    cylinder_mass,
    hollow_cylinder_inertia,
    hollow_cylinder_mass,
)
from axis.mechanics.stages import input_torque, reflected_inertia, screw_ratio, transmitted


def test_hollow_cylinder_is_the_difference_of_two_solid_ones():
    outer, inner, length = 0.09, 0.05, 0.2
    mass = cylinder_mass(outer, length) - cylinder_mass(inner, length)
    inertia = cylinder_inertia(outer, length) - cylinder_inertia(inner, length)
    assert hollow_cylinder_mass(outer, inner, length) == pytest.approx(mass, rel=1e-14)
    assert hollow_cylinder_inertia(outer, inner, length) == pytest.approx(inertia, rel=1e-14)


def test_thin_ring_has_its_mass_at_the_rim():
    """J → m·r²; the wall of 1e-6 of the diameter leaves 2e-6."""
    outer, length = 0.1, 0.02
    inner = outer * (1.0 - 2e-6)
    mass = hollow_cylinder_mass(outer, inner, length)
    assert hollow_cylinder_inertia(outer, inner, length) == pytest.approx(mass * 0.05**2, rel=3e-6)


@pytest.mark.parametrize(("torque", "speed", "ratio"), list(itertools.product((40.0, -40.0), (2.0, -2.0), (5.0, -5.0))))
def test_efficiency_loses_in_both_directions_and_for_every_sign(torque, speed, ratio):
    """η = 0.8 driving, 0.7 back: power in is 1/0.8 of power out, or 0.7 of what the load gives."""
    power_in = input_torque(torque, speed, ratio, 0.8, 0.7) * speed * ratio
    power_out = torque * speed
    assert power_in == pytest.approx(power_out / 0.8 if power_out > 0.0 else power_out * 0.7, rel=1e-14)
    assert power_in > power_out


def test_standstill_is_held_with_full_efficiency():
    assert input_torque(40.0, 0.0, 5.0, 0.8, 0.7) == 8.0
    assert transmitted(0.0, 0.8, 0.7) == 1.0


def test_holding_band_of_a_hanging_load():
    """Between lowering and raising lies (1/η − η_back)·m·g/i."""
    weight, ratio = 25.0 * 9.80665, screw_ratio(0.01)
    band = input_torque(weight, 0.1, ratio, 0.9, 0.88) - input_torque(weight, -0.1, ratio, 0.9, 0.88)
    assert band == pytest.approx((1 / 0.9 - 0.88) * weight / ratio, rel=1e-13)


def test_left_hand_screw_turns_the_sign_and_keeps_the_inertia():
    assert screw_ratio(-0.02) == -screw_ratio(0.02)
    assert reflected_inertia(38.0, screw_ratio(-0.02)) == reflected_inertia(38.0, screw_ratio(0.02))


def test_friction_is_odd_in_speed_and_meets_its_ends():
    assert steady_friction(0.0, 22.0, 31.0, 0.004, 45.0) == 0.0
    assert steady_friction(-0.3, 22.0, 31.0, 0.004, 45.0) == -steady_friction(0.3, 22.0, 31.0, 0.004, 45.0)
    assert stribeck(0.0, 22.0, 31.0, 0.004) == 31.0
    assert stribeck(0.004, 22.0, 31.0, 0.004) == pytest.approx(22.0 + 9.0 / math.e, rel=1e-14)
    assert stribeck(1.0, 22.0, 31.0, 0.004) == 22.0


def test_compiled_formulas_give_the_same_digits():
    for function, arguments in (
        (stribeck, (0.003, 22.0, 31.0, 0.004)),
        (transmitted, (-3.0, 0.8, 0.7)),
    ):
        assert compiled(function)(*arguments) == function(*arguments)
