"""Invented axes for the tests of loops."""

import math
from dataclasses import replace

from axis.completion import Rates, ShaftPlant
from axis.description.settings import CurrentLoop, Loops, PositionLoop, TorqueFilter, VelocityLoop
from axis.loops.current import design_current_loop
from axis.loops.sampled import sample_plant

NOMINAL_CONSTANT = 0.6  # [N·m/A]

SINGLE_RATE = Rates(current_period=125e-6, velocity_every=1, position_every=1, computation_delay=125e-6)
THREE_RATES = Rates(current_period=62.5e-6, velocity_every=2, position_every=2, computation_delay=40e-6)
SLOW_POSITION = Rates(current_period=62.5e-6, velocity_every=2, position_every=5, computation_delay=62.5e-6)


def plant(antiresonance_hz: float = 60.0, ratio: float = 2.0, damping_ratio: float = 0.02) -> ShaftPlant:
    """Two inertias of a given ratio; infinite antiresonance: rigid."""
    motor = 3e-4
    load = ratio * motor
    stiffness = (2.0 * math.pi * antiresonance_hz) ** 2 * load
    damping = 0.0
    if math.isfinite(stiffness):
        damping = 2.0 * damping_ratio * math.sqrt(stiffness * motor * load / (motor + load))
    return ShaftPlant(
        motor_inertia=motor,
        load_inertia=load,
        stiffness=stiffness,
        damping=damping,
        motor_coulomb=0.05,
        coulomb=0.1,
        breakaway=0.15,
        viscous=2e-4,
        stribeck_speed=1.0,
        load_torque=0.3,
        torque_constant=NOMINAL_CONSTANT,
        voltage_constant=0.4,
        resistance=0.9,
        inductance=4.2e-3,
        pole_pairs=4,
    )


def current_loop(rates: Rates) -> CurrentLoop:
    return design_current_loop(0.9, 4.2e-3, rates)


def loops(
    rates: Rates,
    kp: float = 0.35,
    ti: float = 20e-3,
    kv: float = 60.0,
    weight: float = 0.4,
    velocity_filter: float = 0.3e-3,
    filters: tuple[TorqueFilter, ...] = (),
) -> Loops:
    return Loops(
        current=current_loop(rates),
        velocity=VelocityLoop(kp=kp, ti=ti, setpoint_weight=weight, filter=velocity_filter),
        position=PositionLoop(kv=kv),
        filters=filters,
    )


def notched(settings: Loops) -> Loops:
    """With a low-pass and a notch in the torque path."""
    lowpass = TorqueFilter(kind="lowpass", frequency=2.0 * math.pi * 900.0)
    notch = TorqueFilter(kind="notch", frequency=2.0 * math.pi * 110.0, width=2.0 * math.pi * 60.0, depth=0.2)
    return replace(settings, filters=(lowpass, notch))


def sampled(corner: ShaftPlant, rates: Rates):
    return sample_plant(corner, rates, current_loop(rates), NOMINAL_CONSTANT)
