"""Compiles the simulation in a process of its own, so that a first start on a machine uses a second core.

`python -m axis.simulation.ahead` fills the cache; nothing depends on it: without it the first run compiles.
"""

from __future__ import annotations

import math
import subprocess
import sys
from collections.abc import Callable

import numpy as np

from axis.compiled import CACHE_FOLDER
from axis.completion import Limits, Rates, ShaftPlant
from axis.description.settings import CurrentLoop, Loops, PositionLoop, VelocityLoop
from axis.simulation.cycle import simulate_corners
from axis.simulation.layout import FIGURES_SIZE
from axis.simulation.run import run
from axis.simulation.scenario import (
    CommandedMove,
    Scenario,
    cycle_arrays,
    frame_vector,
    gains_vector,
    limits_vector,
    plants_matrix,
)


def compile_ahead() -> Callable[[], None]:
    """Start compiling where the cache has nothing yet; returns what waits for the end of it."""
    if CACHE_FOLDER is None or any(CACHE_FOLDER.rglob(f"*{simulate_corners.__name__}*.nbi")):
        return lambda: None
    try:
        child = subprocess.Popen(
            [sys.executable, "-m", "axis.simulation.ahead"], stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL
        )
    except OSError:  # no second process is to be had: the first run compiles
        return lambda: None

    def wait() -> None:
        child.wait()

    return wait


def smallest_scenario() -> Scenario:
    """A rigid axis that rests for a millisecond: enough to compile everything."""
    plant = ShaftPlant(
        motor_inertia=1e-4,
        load_inertia=1e-4,
        stiffness=math.inf,
        damping=0.0,
        motor_coulomb=0.0,
        coulomb=0.0,
        breakaway=0.0,
        viscous=0.0,
        stribeck_speed=1.0,
        load_torque=0.0,
        torque_constant=1.0,
        voltage_constant=0.67,
        resistance=1.0,
        inductance=1e-3,
        pole_pairs=4,
    )
    return Scenario(
        plants=(plant,),
        rates=Rates(current_period=1e-4, velocity_every=1, position_every=1, computation_delay=1e-4),
        limits=Limits(1.0, 2.0, 1.0, 2.0, 100.0, math.inf),
        loops=Loops(CurrentLoop(kp=1.0, ti=1e-3), VelocityLoop(kp=0.1, ti=1e-2), PositionLoop(kv=10.0)),
        nominal_torque_constant=1.0,
        nominal_inertia=2e-4,
        ratio=1.0,
        window=1e-3,
        window_time=0.0,
        moves=(CommandedMove(pieces=np.array([[1e-3, 0.0, 0.0, 0.0, 0.0]]), dwell=1e-3),),
    )


def compile_now() -> None:
    """Compile both ways into the kernel: one run, and one set of settings at many corners."""
    scenario = smallest_scenario()
    run(scenario)
    cycle = cycle_arrays(scenario.moves, scenario.rates, scenario.ratio)
    frame = frame_vector(
        scenario.rates, scenario.nominal_torque_constant, scenario.ratio, scenario.window, scenario.window_time
    )
    gains = gains_vector(scenario.loops, scenario.rates, scenario.nominal_inertia)
    plants, limits = plants_matrix(scenario.plants)[None], limits_vector(scenario.limits)[None]
    figures, cycles = np.zeros((1, 1, FIGURES_SIZE)), np.zeros(1, dtype=np.int64)
    simulate_corners(plants, limits, frame, gains, cycle.pieces, cycle.first_piece, cycle.moves, 1, figures, cycles)


if __name__ == "__main__":
    compile_now()
