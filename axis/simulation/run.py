"""Runs a scenario through the compiled kernel: the record of every move, and the traces where they are asked."""

from __future__ import annotations

import math

import numpy as np

from axis.simulation.cycle import simulate
from axis.simulation.layout import (
    BUCKET_PEAK,
    CURRENT_RIPPLE,
    CURRENT_SATURATED,
    CURRENT_SQUARE,
    DURATION,
    FIGURES_SIZE,
    FOLLOWING_ERROR,
    OVERSHOOT,
    PEAK_CURRENT_SEEN,
    PEAK_SPEED,
    PEAK_TORQUE,
    PERIODS,
    REST_ERROR,
    SIGNAL,
    SIGNAL_EARLY,
    SIGNAL_LAST,
    SIGNAL_LOSSES,
    TIME_TO_WINDOW,
    TRACE_COMMAND,
    TRACE_CURRENT,
    TRACE_LOAD_POSITION,
    TRACE_LOAD_SPEED,
    TRACE_MOTOR_ANGLE,
    TRACE_MOTOR_SPEED,
    TRACE_SETPOINT,
    TRACE_SIZE,
    TRACE_TIME,
    TRACE_VOLTAGE,
    TRIPPED,
    UNDERSHOOT,
    VOLTAGE_SATURATED,
)
from axis.simulation.record import MoveOutcome, Outcome, Trace
from axis.simulation.scenario import (
    Array,
    Cycle,
    Scenario,
    capacity,
    cycle_arrays,
    frame_vector,
    gains_vector,
    limits_vector,
    plants_matrix,
)

MOST_CYCLES = 20


def run(scenario: Scenario, max_cycles: int = MOST_CYCLES) -> Outcome:
    """Simulate the cycle until it repeats itself, at most `max_cycles` times."""
    return _simulated(scenario, max_cycles, np.zeros((0, TRACE_SIZE)))[0]


def trace(scenario: Scenario, max_cycles: int = MOST_CYCLES) -> tuple[Outcome, Trace]:
    """The same run with the traces of its last cycle."""
    rates = scenario.rates
    cycle = cycle_arrays(scenario.moves, rates, scenario.ratio)
    per_period = rates.velocity_every * rates.position_every
    rows = np.zeros((int(cycle.moves[:, PERIODS].sum()) * per_period, TRACE_SIZE))
    outcome, cycle = _simulated(scenario, max_cycles, rows)
    lengths = cycle.moves[:, PERIODS] * rates.position_period
    starts = np.concatenate([[0.0], np.cumsum(lengths)[:-1]])
    time = rows[:, TRACE_TIME] + np.repeat(starts, cycle.moves[:, PERIODS].astype(np.int64) * per_period)
    base = rows[0, TRACE_SETPOINT] if len(rows) else 0.0
    constants = [plant.torque_constant for plant in scenario.plants]
    constant = np.repeat(constants, cycle.moves[:, PERIODS].astype(np.int64) * per_period)
    return outcome, Trace(
        time=time,
        setpoint=(rows[:, TRACE_SETPOINT] - base) / scenario.ratio,
        load_position=(rows[:, TRACE_LOAD_POSITION] - base) / scenario.ratio,
        motor_position=(rows[:, TRACE_MOTOR_ANGLE] - base) / scenario.ratio,
        load_speed=rows[:, TRACE_LOAD_SPEED] / scenario.ratio,
        motor_speed=rows[:, TRACE_MOTOR_SPEED],
        current=rows[:, TRACE_CURRENT],
        current_command=rows[:, TRACE_COMMAND],
        voltage=rows[:, TRACE_VOLTAGE],
        torque=constant * rows[:, TRACE_CURRENT],
        starts=starts,
        ends=starts + cycle.moves[:, DURATION],
    )


def _simulated(scenario: Scenario, max_cycles: int, rows: Array) -> tuple[Outcome, Cycle]:
    cycle = cycle_arrays(scenario.moves, scenario.rates, scenario.ratio)
    figures = np.zeros((len(scenario.moves), FIGURES_SIZE))
    rise = np.zeros(1)
    cycles = simulate(
        plants_matrix(scenario.plants),
        limits_vector(scenario.limits),
        frame_vector(
            scenario.rates,
            scenario.nominal_torque_constant,
            scenario.ratio,
            scenario.window,
            scenario.window_time,
        ),
        gains_vector(scenario.loops, scenario.rates, scenario.nominal_inertia),
        cycle.pieces,
        cycle.first_piece,
        cycle.moves,
        max_cycles,
        figures,
        rows,
        rise,
    )
    holds = capacity(scenario.limits)
    moves = tuple(
        move_outcome(figures[n], cycle.moves[n], scenario.rates.position_period, scenario.ratio, holds)
        for n in range(len(scenario.moves))
    )
    outcome = Outcome(
        moves=moves,
        cycles=abs(cycles),
        repeated=cycles > 0,
        diverged=cycles == 0,
        bucket_rise=float(rise[0]) / holds,
    )
    return outcome, cycle


def move_outcome(figures: Array, move: Array, position_period: float, ratio: float, bucket: float) -> MoveOutcome:
    """One row of figures as the record of a move.

    Parameters
        figures: as the kernel fills them
        move: its row of the cycle
        position_period [s]: of the drive
        ratio [rad/m]: motor radians per load unit
        bucket [A²·s]: what the current-time bucket holds
    Returns the record in load units
    Source: [own]
    """
    size = abs(ratio)
    losses = float(figures[SIGNAL_LOSSES])
    return MoveOutcome(
        commanded_end=float(move[DURATION]),
        observed=float(move[PERIODS]) * position_period,
        time_to_window=float(figures[TIME_TO_WINDOW]),
        signal=float(figures[SIGNAL]),
        signal_last=float(figures[SIGNAL_LAST]),
        signal_losses=0 if math.isinf(losses) else int(losses),
        signal_early=float(figures[SIGNAL_EARLY]),
        overshoot=float(figures[OVERSHOOT]) / size,
        undershoot=float(figures[UNDERSHOOT]) / size,
        following_error=float(figures[FOLLOWING_ERROR]) / size,
        rest_error=float(figures[REST_ERROR]) / ratio,
        peak_torque=float(figures[PEAK_TORQUE]),
        peak_current=float(figures[PEAK_CURRENT_SEEN]),
        peak_speed=float(figures[PEAK_SPEED]),
        current_saturated=float(figures[CURRENT_SATURATED]),
        voltage_saturated=float(figures[VOLTAGE_SATURATED]),
        bucket_peak=float(figures[BUCKET_PEAK]) / bucket,
        tripped=bool(figures[TRIPPED] > 0.0),
        current_square_time=float(figures[CURRENT_SQUARE]),
        current_ripple=float(figures[CURRENT_RIPPLE]),
    )
