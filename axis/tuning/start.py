"""What the search starts from: the current loop, and velocity and position loop as designed."""

from __future__ import annotations

from axis.completion import CompletedAxis
from axis.description.settings import Feedforward, Loops, PositionLoop, VelocityLoop
from axis.loops.current import design_current_loop
from axis.loops.lag import velocity_loop_lags

WIDEST_BAND = 0.02  # of the published prototypes
SETPOINT_WEIGHT = 0.5  # prototypes of order 3 and 4 both have a solution below 0.56


def bare_loops(axis: CompletedAxis) -> tuple[Loops, float]:
    """Current loop by the modulus optimum, no torque filter, feedforward in full; and Tσ [s] of the velocity loop."""
    rates = axis.drive.rates
    inertia = axis.plant().total_inertia
    current = design_current_loop(axis.motor.resistance, axis.motor.saturated_inductance, rates)
    velocity_filter = rates.velocity_period
    lag = velocity_loop_lags(axis.motor.inductance, rates, current, velocity_filter).total
    loops = Loops(
        current=current,
        velocity=VelocityLoop(
            kp=inertia / (2.0 * lag), ti=4.0 * lag, setpoint_weight=SETPOINT_WEIGHT, filter=velocity_filter
        ),
        position=PositionLoop(kv=1.0 / (16.0 * lag)),
        feedforward=Feedforward(velocity=1.0, torque=1.0),
        move_jerk=_jerk_in_force(axis),
    )
    return loops, lag


def _jerk_in_force(axis: CompletedAxis) -> tuple[float, ...] | None:
    """The jerk of every move where any is open, so that search and sheet speak of the same move."""
    if not any(move.jerk_open for move in axis.moves):
        return None
    return tuple(1.0 if move.jerk is None else move.jerk for move in axis.moves)


def own_band(window: float, excited: float) -> float:
    """The band a prototype is asked for: the window over the error that the move itself leaves behind.

    Parameters
        window [m]: half width, less what is kept back
        excited [m]: largest error on the move
    Returns [1]
    window/excited, between 1e-5 and 0.02: wider bands have prototypes that swing too much for the usual margins
    Source: [own]; a profiled move with feedforward is no step, so never window over stroke
    """
    return min(max(window / excited, 1e-5), WIDEST_BAND) if excited > 0.0 else WIDEST_BAND
