"""Stated axis to completed axis: bases, what is assumed and told, what must not be missing, corners, set-points."""

import math
from dataclasses import replace

import pytest

from axis.complete import complete
from axis.completion import at_corner, move_profile
from axis.description.drive import Drive
from axis.description.load import Friction, Load
from axis.description.motor import Motor
from axis.description.moves import Move
from axis.description.settings import CurrentLoop, Loops, PositionLoop, VelocityLoop
from axis.description.transmission import BallScrew, Gearbox
from axis.description.wishes import Tuning
from axis.errors import InputError, NotComputable
from tests.sizing.axes import BACK, CARRIAGE, DRIVE, GEARBOX, MOTOR, RPM, SCREW, THERE

LEAST = replace(
    CARRIAGE,
    head=replace(CARRIAGE.head, ambient=None),
    load=Load(mass=38.0, friction=Friction(coulomb=20.0)),
    transmission=(BallScrew(lead=0.02),),
    motor=Motor(
        torque_constant=0.72,
        torque_constant_basis="rms",
        resistance=2.6,
        inductance=9.4e-3,
        winding_basis="line-line",
        inertia=1.5e-4,
        peak_torque=8.4,
    ),
    drive=Drive(continuous_current=8.0, supply_voltage=400.0),
    moves=(
        Move(distance=0.25, speed=0.8, acceleration=8.0),
        Move(distance=-0.25, speed=0.8, acceleration=8.0),
    ),
)
LOOPS = Loops(
    current=CurrentLoop(kp=20.0, ti=4e-3),
    velocity=VelocityLoop(kp=0.5, ti=0.01),
    position=PositionLoop(kv=50.0),
    move_jerk=(150.0, 250.0),
)


def assumed(axis):
    return {one.path: one for one in complete(axis).assumptions}


def test_one_basis_inside():
    """q-axis peak current, peak phase voltage, phase winding; by hand from the stated bases."""
    motor, drive = complete(CARRIAGE).motor, complete(CARRIAGE).drive
    assert motor.torque_constant == pytest.approx(0.72 / math.sqrt(2.0), rel=1e-14)
    assert motor.voltage_constant == pytest.approx(43.5 / (1000.0 * RPM) * math.sqrt(2.0 / 3.0), rel=1e-14)
    assert (motor.resistance, motor.inductance) == pytest.approx((1.3, 4.7e-3), rel=1e-14)
    assert motor.peak_current == pytest.approx(12.8 * math.sqrt(2.0), rel=1e-14)
    assert drive.continuous_current == pytest.approx(8.0 * math.sqrt(2.0), rel=1e-14)
    assert (drive.bus_nominal, drive.bus_low, drive.bus_high) == pytest.approx((560.0, 480.0, 616.0), rel=1e-14)
    assert (drive.rates.velocity_every, drive.rates.position_every) == (2, 2)
    assert motor.thermal is not None
    assert motor.thermal.winding_capacity == pytest.approx(60.0 / 0.37, rel=1e-14)


def test_same_motor_in_other_bases():
    other = replace(
        MOTOR,
        torque_constant=0.72 / math.sqrt(2.0),
        torque_constant_basis="peak",
        voltage_constant=MOTOR.voltage_constant * math.sqrt(2.0) / math.sqrt(3.0),
        voltage_constant_basis="phase peak",
        resistance=1.3,
        inductance=4.7e-3,
        winding_basis="phase",
        current_basis="peak",
        rated_current=3.4 * math.sqrt(2.0),
        stall_current=3.9 * math.sqrt(2.0),
        peak_current=12.8 * math.sqrt(2.0),
    )
    here, there = complete(CARRIAGE).motor, complete(replace(CARRIAGE, motor=other)).motor
    for name, value in vars(here).items():
        if isinstance(value, float):
            assert getattr(there, name) == pytest.approx(value, rel=1e-12), name


def test_full_axis_assumes_nothing():
    stated = replace(CARRIAGE, motor=replace(MOTOR, saturated_inductance=7e-3))
    assert complete(stated).assumptions == ()
    assert complete(stated).motor.saturated_inductance == pytest.approx(3.5e-3)


def test_least_axis_is_completed_and_every_assumption_told():
    told = assumed(LEAST)
    axis = complete(LEAST)
    assert {
        "axis.ambient",
        "transmission[1].inertia",
        "transmission[1].efficiency",
        "transmission[1].efficiency_back",
        "transmission[1].drag",
        "load.friction.breakaway",
        "load.friction.stribeck_speed",
        "motor.voltage_constant",
        "motor.peak_current",
        "motor.pole_pairs",
        "motor.encoder_counts",
        "drive.peak_current",
        "drive.peak_time",
        "drive.dc_link_nominal",
        "drive.modulation_limit",
        "drive.current_period",
        "drive.velocity_period",
        "drive.position_period",
        "drive.computation_delay",
        "move[1].jerk",
        "move[2].jerk",
        "transmission",
    } <= set(told)
    assert axis.stiffness == math.inf
    assert axis.breakaway == pytest.approx(26.0)
    assert axis.motor.voltage_constant == pytest.approx(0.72 / math.sqrt(2.0) / 1.5, rel=1e-14)
    assert axis.motor.peak_current == pytest.approx(8.4 / (0.72 / math.sqrt(2.0)), rel=1e-14)
    assert axis.drive.bus_nominal == pytest.approx(400.0 * math.sqrt(2.0), rel=1e-14)
    assert axis.drive.rates.computation_delay == axis.drive.rates.current_period == 62.5e-6
    assert axis.ambient == pytest.approx(313.15)
    assert axis.moves[0].jerk == pytest.approx(8.0 / 0.02)
    assert axis.moves[0].jerk_open
    assert axis.motor.thermal is None


def test_back_driving_efficiency_by_equal_friction():
    """2 − 1/η, for a stage whose loss is the same force both ways."""
    stage = complete(replace(CARRIAGE, transmission=(replace(SCREW, efficiency=0.8, efficiency_back=None),))).stages[0]
    assert stage.efficiency_back == pytest.approx(0.75, rel=1e-14)
    worm = complete(replace(CARRIAGE, transmission=(replace(SCREW, efficiency=0.4, efficiency_back=None),))).stages[0]
    assert worm.efficiency_back == pytest.approx(0.01)


def test_inertia_of_a_steel_screw():
    """π/32·ρ·d⁴·L of 25 × 800 mm: 2.408349837e-4 kg·m² (tests/published/solid_cylinder.csv)."""
    sized = replace(SCREW, inertia=None, diameter=0.025, length=0.8)
    axis = replace(CARRIAGE, transmission=(sized,))
    assert complete(axis).stages[0].inertia == pytest.approx(2.408349837e-4, rel=1e-9)
    assert "transmission[1].inertia" in assumed(axis)


def test_stated_zeros_are_values():
    stage = replace(GEARBOX, inertia=0.0, drag=0.0)
    axis = complete(replace(CARRIAGE, transmission=(stage, SCREW)))
    assert (axis.stages[0].inertia, axis.stages[0].drag) == (0.0, 0.0)
    assert not [one for one in axis.assumptions if one.path.startswith("transmission[1]")]


def test_everything_missing_is_told_at_once():
    nothing = replace(LEAST, motor=Motor(), drive=Drive(), transmission=(Gearbox(), BallScrew()))
    with pytest.raises(InputError) as caught:
        complete(nothing)
    paths = {problem.path for problem in caught.value.problems}
    assert {
        "motor.torque_constant",
        "motor.resistance",
        "motor.inductance",
        "motor.inertia",
        "motor.peak_current",
        "drive.continuous_current",
        "drive.supply_voltage",
        "transmission[1].ratio",
        "transmission[2].lead",
    } <= paths
    assert all(problem.example for problem in caught.value.problems)


def test_contradicting_constants_name_the_reading_that_agrees():
    wrong = replace(MOTOR, torque_constant_basis="peak")
    with pytest.raises(InputError) as caught:
        complete(replace(CARRIAGE, motor=wrong))
    (problem,) = caught.value.problems
    assert problem.path == "motor.torque_constant"
    assert 'torque_constant_basis = "rms"' in str(problem)


def test_slightly_different_constants_are_a_warning():
    axis = complete(replace(CARRIAGE, motor=replace(MOTOR, torque_constant=0.72 * 0.92)))
    assert len(axis.warnings) == 1
    assert "hot or saturated" in axis.warnings[0]


def test_target_positions_become_distances():
    moves = (Move(to=0.2, speed=0.5, acceleration=5.0), Move(to=-0.1, speed=0.5, acceleration=5.0))
    back = Move(to=0.0, speed=0.5, acceleration=5.0)
    axis = complete(replace(CARRIAGE, moves=(*moves, back)))
    assert [move.distance for move in axis.moves] == pytest.approx([0.2, -0.3, 0.1])


def test_jerk_in_force():
    """Settings override the stated jerk; the stated one stays closed to tuning unless the file opens it."""
    stated = complete(CARRIAGE)
    assert [(move.jerk, move.jerk_open) for move in stated.moves] == [(400.0, False), (400.0, False)]
    settled = complete(replace(CARRIAGE, loops=LOOPS))
    assert [move.jerk for move in settled.moves] == [150.0, 250.0]
    opened = complete(replace(CARRIAGE, tuning=Tuning(may_change=("jerk",))))
    assert opened.moves[0].jerk_open


def test_set_points_of_every_kind_of_move():
    limits = {"speed": 0.5, "acceleration": 4.0}
    moves = (
        Move(distance=0.3, jerk=100.0, deceleration=3.0, **limits),
        Move(distance=-0.1, law="constant_acceleration", **limits),
        Move(distance=-0.1, duration=0.5),
        Move(distance=-0.1, law="constant_acceleration", duration=0.6),
    )
    profiles = [move_profile(move) for move in complete(replace(CARRIAGE, moves=moves)).moves]
    assert [profile.end for profile in profiles] == pytest.approx([0.3, -0.1, -0.1, -0.1], abs=1e-15)
    assert profiles[0].peak_jerk == pytest.approx(100.0)
    assert profiles[0].duration == pytest.approx(0.3 / 0.5 + 0.25 / 4.0 + 0.25 / 3.0 + 0.02 + 0.015, rel=1e-12)
    assert profiles[1].duration == pytest.approx(0.1 / 0.5 + 0.5 / 4.0, rel=1e-12)
    assert [profile.duration for profile in profiles[2:]] == pytest.approx([0.5, 0.6], rel=1e-12)
    too_short = replace(complete(CARRIAGE).moves[0], duration=0.01)
    with pytest.raises(NotComputable):
        move_profile(too_short)


def test_plant_at_the_shaft_by_hand():
    """One screw: everything beyond it over i², forces over i, by hand; the payload and the force of the move count."""
    ratio = 2.0 * math.pi / 0.02
    axis = complete(replace(CARRIAGE, head=replace(CARRIAGE.head, incline=math.pi / 6.0)))
    plant = axis.plant(payload=9.0, force=50.0)
    assert plant.load_inertia == pytest.approx(47.0 / ratio**2, rel=1e-12)
    assert plant.motor_inertia == pytest.approx(1.5e-4 + 2e-4, rel=1e-12)
    assert plant.load_torque == pytest.approx((47.0 * 9.80665 * 0.5 + 50.0) / ratio, rel=1e-12)
    assert plant.stiffness == pytest.approx(5e6 / ratio**2, rel=1e-12)
    assert plant.coulomb == pytest.approx(22.0 / ratio, rel=1e-12)
    assert plant.viscous == pytest.approx(45.0 / ratio**2, rel=1e-12)
    assert plant.motor_coulomb == pytest.approx(0.05)
    reduced = 1.0 / (1.0 / 3.5e-4 + ratio**2 / 38.0)
    assert plant.damping == pytest.approx(2.0 * 0.03 * math.sqrt(5e6 / ratio**2 * reduced), rel=1e-12)
    assert axis.move_plant(axis.moves[0]).load_inertia == pytest.approx(47.0 / ratio**2, rel=1e-12)


def test_corner_scales_what_it_says():
    axis = complete(CARRIAGE)
    there = at_corner(
        axis, {"load_mass": 0.05, "friction": -0.4, "torque_constant": -0.05, "stiffness": 0.2, "supply_voltage": 0.1}
    )
    assert there.load_inertial == pytest.approx(38.0 * 1.05)
    assert there.moves[0].payload == pytest.approx(9.0 * 1.05)
    assert (there.coulomb, there.breakaway, there.viscous) == pytest.approx((22.0 * 0.6, 31.0 * 0.6, 45.0 * 0.6))
    assert there.motor.torque_constant == pytest.approx(0.95 * axis.motor.torque_constant)
    assert there.motor.voltage_constant == pytest.approx(0.95 * axis.motor.voltage_constant)
    assert there.stiffness == pytest.approx(1.2 * axis.stiffness)
    assert there.drive.bus_nominal == pytest.approx(616.0)
    assert at_corner(axis, {"supply_voltage": -0.1}).drive.bus_nominal == pytest.approx(480.0)  # dc_link_min, as stated
    assert at_corner(axis, {}) == axis


def test_low_bus_from_the_tolerance_where_no_lowest_is_stated():
    axis = complete(replace(CARRIAGE, drive=replace(DRIVE, dc_link_min=None)))
    assert axis.drive.bus_low == pytest.approx(504.0)


def test_heaviest_payload_and_limits():
    axis = complete(replace(CARRIAGE, moves=(BACK, THERE)))
    assert axis.heaviest_payload == 9.0
    limits = axis.limits()
    assert limits.peak_current == pytest.approx(12.8 * math.sqrt(2.0))
    assert limits.voltage == pytest.approx(560.0 / math.sqrt(3.0) * 0.9)
