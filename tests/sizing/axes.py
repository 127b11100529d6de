"""Invented axes for the tests of sizing and completion."""

import random
from dataclasses import replace

from axis.complete import complete
from axis.description.axis import Axis, Head
from axis.description.drive import Drive
from axis.description.load import Friction, Load, Payload
from axis.description.motor import Motor
from axis.description.moves import Move, Window
from axis.description.transmission import BallScrew, Gearbox
from axis.description.wishes import Tolerance

RPM = 0.10471975511965977

MOTOR = Motor(
    torque_constant=0.72,
    torque_constant_basis="rms",
    voltage_constant=43.5 / (1000.0 * RPM),
    voltage_constant_basis="line-line rms",
    resistance=2.6,
    inductance=9.4e-3,
    winding_basis="line-line",
    current_basis="rms",
    pole_pairs=4,
    inertia=1.5e-4,
    rated_torque=2.4,
    rated_speed=3000.0 * RPM,
    rated_current=3.4,
    stall_torque=2.8,
    stall_current=3.9,
    peak_torque=8.4,
    peak_current=12.8,
    max_speed=5000.0 * RPM,
    encoder_counts=2**20,
    max_winding_temperature=413.15,
    constants_temperature=293.15,
    winding_housing=0.37,
    housing_ambient=0.76,
    winding_time_constant=60.0,
    housing_time_constant=2100.0,
)
DRIVE = Drive(
    continuous_current=8.0,
    peak_current=20.0,
    peak_time=3.0,
    standstill_current=7.0,
    current_basis="rms",
    supply_voltage=400.0,
    dc_link_min=480.0,
    dc_link_nominal=560.0,
    dc_link_max=820.0,
    chopper_on_voltage=760.0,
    dc_link_capacitance=470e-6,
    braking_resistor_resistance=60.0,
    braking_resistor_power=100.0,
    modulation_limit=0.9,
    current_period=62.5e-6,
    velocity_period=125e-6,
    position_period=250e-6,
    computation_delay=62.5e-6,
)
SCREW = BallScrew(
    lead=0.02,
    inertia=2e-4,
    efficiency=0.94,
    efficiency_back=0.92,
    stiffness=5e6,
    damping_ratio=0.03,
    drag=0.05,
    max_input_speed=3500.0 * RPM,
    max_force=4000.0,
)
GEARBOX = Gearbox(
    ratio=3.0,
    inertia=3e-5,
    efficiency=0.96,
    efficiency_back=0.955,
    stiffness=3e4,
    damping_ratio=0.02,
    drag=0.06,
    nominal_torque=42.0,
    peak_torque=70.0,
    max_input_speed=6000.0 * RPM,
)
TOLERANCE = Tolerance(load_mass=0.05, friction=0.4, torque_constant=0.05, stiffness=0.2, supply_voltage=0.1)
THERE = Move(distance=0.25, speed=0.8, acceleration=8.0, jerk=400.0, dwell=0.2, payload="tray")
BACK = Move(distance=-0.25, speed=0.8, acceleration=8.0, jerk=400.0, dwell=0.3)

CARRIAGE = Axis(
    head=Head(name="carriage", travel="linear", ambient=303.15),
    load=Load(mass=38.0, friction=Friction(coulomb=22.0, breakaway=31.0, viscous=45.0, stribeck_speed=0.004)),
    motor=MOTOR,
    drive=DRIVE,
    window=Window(position=25e-6, time=5e-3, settle_within=0.04),
    moves=(THERE, BACK),
    transmission=(SCREW,),
    payloads=(Payload(name="tray", mass=9.0),),
    tolerance=TOLERANCE,
)


def checks_of(sizing):
    """Check by id."""
    return {check.id: check for check in sizing.checks}


def random_axis(seed: int) -> Axis:
    """A linear axis with one or two stages, inclined either way, with its own moves."""
    draw = random.Random(seed)
    stages = [replace(SCREW, lead=draw.choice((0.01, 0.02, 0.04)), left_hand=draw.random() < 0.3)]
    if draw.random() < 0.5:
        ratio = draw.choice((2.0, -3.0))
        stages = [replace(GEARBOX, ratio=ratio), replace(SCREW, lead=0.04)]
    distance = draw.uniform(0.05, 0.4)
    friction = Friction(coulomb=draw.uniform(0.0, 80.0), viscous=draw.uniform(0.0, 80.0))
    shape = {"speed": draw.uniform(0.2, 0.8), "acceleration": draw.uniform(2.0, 12.0), "payload": "tray"}
    there = Move(distance=distance, jerk=draw.uniform(50.0, 600.0), dwell=draw.uniform(0.0, 0.4), **shape)
    back = Move(
        distance=-distance,
        law="constant_acceleration",
        speed=0.3,
        acceleration=3.0,
        deceleration=5.0,
        dwell=draw.uniform(0.0, 0.4),
        force=draw.uniform(-60.0, 60.0),
    )
    return replace(
        CARRIAGE,
        head=replace(CARRIAGE.head, incline=draw.choice((0.0, 0.3, 1.5707963267948966, -0.7))),
        load=Load(mass=draw.uniform(10.0, 60.0), friction=friction),
        payloads=(Payload(name="tray", mass=draw.uniform(0.0, 15.0)),),
        transmission=tuple(stages),
        moves=(there, back),
    )


def completed(axis: Axis = CARRIAGE):
    return complete(axis)
