"""The chain at the motor shaft: a calculation by hand with every intermediate, and identities."""

import math
from dataclasses import replace

import numpy as np
import pytest

from axis.mechanics.compliance import resonance, resonance_damping_ratio, spring_damping, springs_in_series
from axis.mechanics.reflection import Chain, StageFloats, input_ratios, input_speeds, lump, output_torques, shaft_torque

# Numbers of our own; every intermediate below follows from them by hand.
GEARBOX = StageFloats(
    ratio=3.0,
    inertia=0.3e-4,
    drag=0.06,
    efficiency=0.96,
    efficiency_back=0.95,
    stiffness=30000.0,
    damping_ratio=0.03,
    backlash=1e-3,
    max_input_speed=628.0,
)
SCREW = StageFloats(
    ratio=2.0 * math.pi / 0.02,
    inertia=1.1e-4,
    drag=0.09,
    efficiency=0.92,
    efficiency_back=0.90,
    stiffness=60e6,
    damping_ratio=0.02,
    backlash=5e-6,
    linear_output=True,
)
IDEAL = StageFloats(ratio=1.0, inertia=0.0, drag=0.0, efficiency=1.0, efficiency_back=1.0)

TOTAL_RATIO = 3.0 * 2.0 * math.pi / 0.02  # 942.48 rad/m
GEARBOX_SPRING = 30000.0 / 3.0**2  # 3333.3 N·m/rad at the shaft
SCREW_SPRING = 60e6 / TOTAL_RATIO**2  # 67.55 N·m/rad at the shaft: the softer one


def test_lumped_by_hand():
    chain = lump([GEARBOX, SCREW])
    assert chain.ratio == pytest.approx(TOTAL_RATIO, rel=1e-14)
    assert chain.stiffness == pytest.approx(1.0 / (1.0 / GEARBOX_SPRING + 1.0 / SCREW_SPRING), rel=1e-14)
    assert chain.motor_side_inertia == pytest.approx(0.3e-4 + 1.1e-4 / 9.0, rel=1e-14)
    assert chain.load_side_inertia == 0.0
    assert chain.motor_drag == pytest.approx(0.06 + 0.09 / 3.0, rel=1e-14)
    assert chain.load_drag == 0.0
    assert chain.backlash == pytest.approx(1e-3 * 0.02 / (2.0 * math.pi) + 5e-6, rel=1e-14)
    share = SCREW_SPRING / (SCREW_SPRING + GEARBOX_SPRING)  # of the strain energy, in the gearbox
    assert chain.damping_ratio == pytest.approx(0.03 * share + 0.02 * (1.0 - share), rel=1e-13)


def test_soft_gearbox_puts_the_screw_on_the_load_side():
    chain = lump([replace(GEARBOX, stiffness=300.0), SCREW])
    assert chain.motor_side_inertia == pytest.approx(0.3e-4, rel=1e-14)
    assert chain.load_side_inertia == pytest.approx(1.1e-4 / 9.0, rel=1e-14)
    assert chain.motor_drag == pytest.approx(0.06, rel=1e-14)
    assert chain.load_drag == pytest.approx(0.03, rel=1e-14)


def test_chain_without_a_spring_is_rigid():
    chain = lump([replace(GEARBOX, stiffness=math.inf), replace(SCREW, stiffness=math.inf)])
    assert chain.stiffness == math.inf
    assert chain.damping_ratio == 0.0
    assert chain.motor_side_inertia == pytest.approx(0.3e-4 + 1.1e-4 / 9.0, rel=1e-14)


def test_direct_drive():
    assert lump([]) == Chain(1.0, 0.0, 0.0, math.inf, 0.0, 0.0, 0.0, 0.0)
    assert output_torques([], 5.0, 1.0, 2.0) == (5.0,)
    assert input_speeds([], 3.0) == ()


def test_torque_walk_by_hand():
    """Raising 400 N at 0.5 m/s while speeding up with 6 m/s²; numbers of our own, each step named."""
    screw_speed, screw_acceleration = 0.5 * SCREW.ratio, 6.0 * SCREW.ratio
    at_screw = 400.0 * 0.02 / (2.0 * math.pi) / 0.92 + 1.1e-4 * screw_acceleration + 0.09
    at_motor = at_screw / 3.0 / 0.96 + 0.3e-4 * 3.0 * screw_acceleration + 0.06
    torques = output_torques([GEARBOX, SCREW], 400.0, 0.5, 6.0)
    assert torques == pytest.approx((at_motor, at_screw, 400.0), rel=1e-14)
    assert input_speeds([GEARBOX, SCREW], 0.5) == pytest.approx((3.0 * screw_speed, screw_speed), rel=1e-14)


def test_braking_walk_by_hand():
    """The load drives: −300 N at 0.5 m/s; screw and gearbox multiply, drag helps to brake."""
    at_screw = -300.0 * 0.02 / (2.0 * math.pi) * 0.90 + 0.09
    at_motor = at_screw / 3.0 * 0.95 + 0.06
    assert shaft_torque([GEARBOX, SCREW], -300.0, 0.5, 0.0) == pytest.approx(at_motor, rel=1e-14)


def test_power_may_turn_inside_the_chain():
    """A load that gives less than the screw's drag takes: the screw is driven, so the gearbox divides."""
    at_screw = -10.0 * 0.02 / (2.0 * math.pi) * 0.90 + 0.09
    assert at_screw > 0.0
    assert shaft_torque([GEARBOX, SCREW], -10.0, 0.5, 0.0) == pytest.approx(at_screw / 3.0 / 0.96 + 0.06, rel=1e-14)


def test_lossless_one_to_one_stage_changes_nothing():
    for position in range(3):
        chain = [GEARBOX, SCREW]
        chain.insert(position, IDEAL)
        lumped, plain = lump(chain), lump([GEARBOX, SCREW])
        assert lumped.__dict__ == pytest.approx(plain.__dict__, rel=1e-14)
        assert shaft_torque(chain, 400.0, 0.5, 6.0) == pytest.approx(shaft_torque([GEARBOX, SCREW], 400.0, 0.5, 6.0))


def test_gearbox_split_in_two_equals_one():
    """i = 12 in one stage, or 3 and 4: same ratio, stiffness, inertia and torque when each part is referred rightly."""
    whole = StageFloats(12.0, 2e-5, 0.0, 0.9 * 0.95, 0.85 * 0.9, stiffness=5000.0)
    first = StageFloats(3.0, 2e-5, 0.0, 0.9, 0.85)
    second = StageFloats(4.0, 0.0, 0.0, 0.95, 0.9, stiffness=5000.0)
    assert lump([first, second]).__dict__ == pytest.approx(lump([whole]).__dict__, rel=1e-14)
    for force, speed in ((50.0, 2.0), (-50.0, 2.0), (50.0, -2.0), (50.0, 0.0)):
        split, one = shaft_torque([first, second], force, speed, 7.0), shaft_torque([whole], force, speed, 7.0)
        assert split == pytest.approx(one, rel=1e-13)


def test_mirrored_motion_mirrors_the_torque():
    assert shaft_torque([GEARBOX, SCREW], -400.0, -0.5, -6.0) == -shaft_torque([GEARBOX, SCREW], 400.0, 0.5, 6.0)


def test_reversed_stage_mirrors_the_torque():
    back = [GEARBOX, replace(SCREW, ratio=-SCREW.ratio)]
    assert shaft_torque(back, 400.0, 0.5, 6.0) == pytest.approx(-shaft_torque([GEARBOX, SCREW], 400.0, 0.5, 6.0))
    assert lump(back).stiffness == lump([GEARBOX, SCREW]).stiffness
    assert lump(back).backlash == pytest.approx(lump([GEARBOX, SCREW]).backlash, rel=1e-15)


def test_kinetic_energy_is_the_same_at_shaft_and_load():
    speed = 0.4
    chain = lump([GEARBOX, SCREW])
    at_shaft = 0.5 * (chain.motor_side_inertia + chain.load_side_inertia) * (speed * chain.ratio) ** 2
    speeds = input_speeds([GEARBOX, SCREW], speed)
    assert at_shaft == pytest.approx(0.5 * 0.3e-4 * speeds[0] ** 2 + 0.5 * 1.1e-4 * speeds[1] ** 2, rel=1e-13)


def test_shaft_spring_stores_what_the_stages_store():
    """Under one shaft torque each spring stores T²/2k of its own place; the lumped spring their sum."""
    torque = 2.5
    own = (torque * 3.0) ** 2 / (2 * 30000.0) + (torque * TOTAL_RATIO) ** 2 / (2 * 60e6)
    assert torque**2 / (2 * lump([GEARBOX, SCREW]).stiffness) == pytest.approx(own, rel=1e-13)


def test_input_ratios_multiply():
    assert input_ratios([GEARBOX, SCREW]) == pytest.approx((1.0, 3.0, TOTAL_RATIO), rel=1e-14)


def test_springs_in_series():
    assert springs_in_series([]) == math.inf
    assert springs_in_series([math.inf, math.inf]) == math.inf
    assert springs_in_series([20.0, math.inf, 30.0]) == pytest.approx(12.0, rel=1e-14)


def test_damping_and_back():
    damping = spring_damping(1500.0, 0.002, 0.006, 0.04)
    assert resonance_damping_ratio(1500.0, 0.002, 0.006, damping) == pytest.approx(0.04, rel=1e-14)
    assert spring_damping(math.inf, 0.002, 0.006, 0.04) == 0.0


def test_resonance_and_its_damping_are_the_eigenvalues():
    """Second road: eigenvalues of the free two-mass system."""
    jm, jl, k, d = 0.002, 0.006, 1500.0, 0.2
    system = np.array(
        [[0, 0, 1, 0], [0, 0, 0, 1], [-k / jm, k / jm, -d / jm, d / jm], [k / jl, -k / jl, d / jl, -d / jl]]
    )
    swing = next(one for one in np.linalg.eigvals(system) if one.imag > 1.0)
    assert resonance(k, jm, jl) == pytest.approx(abs(swing), rel=1e-12)
    assert resonance_damping_ratio(k, jm, jl, d) == pytest.approx(-swing.real / abs(swing), rel=1e-12)
