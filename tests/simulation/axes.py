"""An invented axis for the tests of the simulation, near the demo: antiresonance 55 Hz."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import Any

from axis.completion import Limits, Rates, ShaftPlant
from axis.description.settings import (
    CurrentLoop,
    Feedforward,
    Loops,
    PositionLoop,
    TorqueFilter,
    VelocityLoop,
)
from axis.motion.pieces import from_rest
from axis.simulation.scenario import CommandedMove, Scenario

RATIO = 2.0 * math.pi / 0.02
PLANT = ShaftPlant(
    motor_inertia=4e-4,
    load_inertia=38.0 / RATIO**2,
    stiffness=4.6e6 / RATIO**2,
    damping=0.025,
    motor_coulomb=0.05,
    coulomb=22.0 / RATIO,
    breakaway=31.0 / RATIO,
    viscous=45.0 / RATIO**2,
    stribeck_speed=0.004 * RATIO,
    load_torque=0.0,
    torque_constant=0.6,
    voltage_constant=0.4,
    resistance=1.3,
    inductance=4.7e-3,
    pole_pairs=4,
)
FRICTION_FREE = replace(PLANT, motor_coulomb=0.0, coulomb=0.0, breakaway=0.0)
RATES = Rates(current_period=62.5e-6, velocity_every=2, position_every=2, computation_delay=62.5e-6)
NO_LIMITS = Limits(
    continuous_current=math.inf,
    peak_current=math.inf,
    peak_time=math.inf,
    drive_peak_current=math.inf,
    voltage=math.inf,
    encoder_counts=math.inf,
)
LIMITS = Limits(
    continuous_current=11.0,
    peak_current=28.0,
    peak_time=3.0,
    drive_peak_current=28.0,
    voltage=300.0,
    encoder_counts=2.0**20,
)
LOOPS = Loops(
    current=CurrentLoop(kp=22.0, ti=4.7e-3),
    velocity=VelocityLoop(kp=0.15, ti=0.02, setpoint_weight=0.5, filter=2e-4),
    position=PositionLoop(kv=60.0),
    feedforward=Feedforward(velocity=1.0, torque=0.9),
    filters=(
        TorqueFilter("lowpass", 2.0 * math.pi * 800.0),
        TorqueFilter("notch", 2.0 * math.pi * 130.0, width=2.0 * math.pi * 60.0, depth=0.2),
    ),
)
WINDOW = 25e-6


def move(distance: float, time: float, dwell: float) -> CommandedMove:
    """Four equal phases of constant jerk: from rest to rest in `time`."""
    jerk, part = 32.0 * distance / time**3, time / 4.0
    phases = [(part, 0.0, jerk), (part, jerk * part, -jerk), (part, 0.0, -jerk), (part, -jerk * part, jerk)]
    return CommandedMove(from_rest(0.0, phases).pieces, dwell)


def scenario(*moves: CommandedMove, plant: ShaftPlant = PLANT, **changed: Any) -> Scenario:
    """The axis above with what the test changes."""
    moves = moves or (move(0.003, 0.04, 0.02),)
    values: dict[str, Any] = {
        "plants": (plant,) * len(moves),
        "rates": RATES,
        "limits": NO_LIMITS,
        "loops": LOOPS,
        "nominal_torque_constant": PLANT.torque_constant,
        "nominal_inertia": PLANT.total_inertia,
        "ratio": RATIO,
        "window": WINDOW,
        "window_time": 0.002,
        "moves": moves,
    }
    return Scenario(**{**values, **changed})
