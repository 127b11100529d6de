"""The compiled run: the cycle of moves, repeated until it repeats itself, and what is seen of each move."""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from axis.compiled import compiled, compiled_part
from axis.motion.pieces import evaluate_piece
from axis.simulation.advance import advance
from axis.simulation.controller import (
    BUCKET,
    DRIVE_SIZE,
    SET_ACCELERATION,
    SET_POSITION,
    SET_SPEED,
    TRIP,
    VOLTAGE,
    current_sample,
    fill_bucket,
    hold_still,
    measured,
    position_sample,
    velocity_sample,
)
from axis.simulation.figures import clear, conclude, diverge, keep_worst, signal, write_trace
from axis.simulation.layout import (
    BUCKET_PEAK,
    COMPUTATION_DELAY,
    COUNT_ANGLE,
    CURRENT_PERIOD,
    CURRENT_RIPPLE,
    CURRENT_SATURATED,
    CURRENT_SQUARE,
    DIRECTION,
    DURATION,
    FIGURES_SIZE,
    FOLLOWING_ERROR,
    PEAK_CURRENT_SEEN,
    PEAK_SPEED,
    PERIODS,
    POSITION_EVERY,
    START,
    TARGET,
    TRIPPED,
    VELOCITY_EVERY,
    VOLTAGE_SATURATED,
    WINDOW,
    WINDOW_SAMPLES,
)
from axis.simulation.observer import AIM, BAND, INSIDE, OBSERVER_SIZE, SENSE
from axis.simulation.plant import (
    ANGLE,
    COLUMNS,
    CURRENT,
    HOLDING,
    K_TORQUE,
    MODES,
    MOTOR_DRAG,
    MOTOR_SPEED,
    PADDED,
    PREPARED_SIZE,
    PULL,
    RIGID,
    SEGMENTS,
    SPRING,
    STATE_SIZE,
    TWIST,
    prepare,
    transitions,
)
from axis.simulation.series import SERIES_ROWS, TERMS

Array = npt.NDArray[np.float64]
Whole = npt.NDArray[np.int64]

on_piece = compiled_part(evaluate_piece)

ROUNDING = 1e-9  # of a current period: a commanded end this little after a sample is at it
SAME = 0.01  # of the window: records closer than this are one
KEPT = 5  # cycles whose worst counts where no two agree


@compiled_part
def set_point(pieces: Array, first: int, last: int, time: float, u: Array, start: float, target: float) -> None:
    """Put the set-point at `time` [s] of a move into the drive: exact on its cubic, at rest afterwards.

    Parameters
        time [s]: from the first sample of the move
        start [rad]: of the move
        target [rad]: of the move
    Source: [own]
    """
    since = time
    for n in range(first, last):
        if since < pieces[n, 0]:
            position, speed, acceleration = on_piece(since, pieces[n, 1], pieces[n, 2], pieces[n, 3], pieces[n, 4])
            u[SET_POSITION] = start + position
            u[SET_SPEED] = speed
            u[SET_ACCELERATION] = acceleration
            return
        since -= pieces[n, 0]
    u[SET_POSITION] = target
    u[SET_SPEED] = 0.0
    u[SET_ACCELERATION] = 0.0


@compiled_part
def run_move(
    x: Array,
    senses: Whole,
    u: Array,
    p: Array,
    matrices: Array,
    limits: Array,
    frame: Array,
    gains: Array,
    pieces: Array,
    first: int,
    last: int,
    move: Array,
    base: float,
    rest_offset: float,
    record: Array,
    trace: Array,
    trace_row: int,
    figures: Array,
    o: Array,
    c: Array,
    new: Array,
) -> float:
    """Run one move with its dwell; returns how far [rad] the load is from the record, which it replaces.

    Parameters
        base [rad]: where this cycle began
        rest_offset [rad]: twist at the rest from which positions count
    Returns [rad]
    Source: [own]
    """
    period = frame[CURRENT_PERIOD]
    velocity_every, position_every = int(frame[VELOCITY_EVERY]), int(frame[POSITION_EVERY])
    wait = frame[COMPUTATION_DELAY]
    rest = period - wait
    target, start = base + move[TARGET], base + move[START]
    samples = int(move[PERIODS]) * position_every * velocity_every
    quiet = period * samples - 0.25 * (period * samples - move[DURATION])
    clear(figures)
    for n in range(OBSERVER_SIZE):
        o[n] = 0.0
    o[AIM], o[BAND], o[SENSE] = target, frame[WINDOW], move[DIRECTION]
    u[TRIP] = 0.0
    o[INSIDE] = -1.0
    difference, fullest, peak_current, peak_speed, square = 0.0, 0.0, 0.0, 0.0, 0.0
    low, high = math.inf, -math.inf
    k = 0
    tracing = trace.shape[0] > 0
    for n in range(int(move[PERIODS])):
        time = k * period
        angle = measured(x[ANGLE], limits[COUNT_ANGLE])
        set_point(pieces, first, last, time, u, start, target)
        position_sample(u, gains, angle)
        figures[FOLLOWING_ERROR] = max(figures[FOLLOWING_ERROR], abs(u[SET_POSITION] - angle))
        y = x[ANGLE] - x[TWIST] + rest_offset
        difference = max(difference, abs(y - base - record[n]))
        record[n] = y - base
        if time + ROUNDING * period >= move[DURATION]:
            signal(figures, o, abs(angle - target) <= frame[WINDOW], frame[WINDOW_SAMPLES], time)
        if not abs(y) < math.inf:
            return math.inf
        for _ in range(position_every):
            angle = measured(x[ANGLE], limits[COUNT_ANGLE])
            if velocity_sample(u, gains, frame, limits, angle):
                figures[CURRENT_SATURATED] += velocity_every * period
            for _ in range(velocity_every):
                time = k * period
                before = u[VOLTAGE]
                current = x[CURRENT]
                if current_sample(u, gains, limits, p, x[MOTOR_SPEED], current):
                    figures[VOLTAGE_SATURATED] += period
                fill_bucket(u, limits, current, period)
                fullest = max(fullest, u[BUCKET])
                peak_current = max(peak_current, abs(current))
                peak_speed = max(peak_speed, abs(x[MOTOR_SPEED]))
                square += current * current
                if time >= quiet:
                    low, high = min(low, current), max(high, current)
                if tracing:
                    write_trace(trace, trace_row + k, time, u[SET_POSITION], x, u, rest_offset)
                for segment in range(SEGMENTS):
                    voltage = before if segment == 0 else u[VOLTAGE]
                    length = wait if segment == 0 else rest
                    if length > 0.0:
                        since = time if segment == 0 else time + wait
                        advance(x, senses, p, matrices, segment, voltage, length, o, since, rest_offset, c, new)
                k += 1
    figures[BUCKET_PEAK] = fullest
    figures[PEAK_CURRENT_SEEN] = peak_current
    figures[PEAK_SPEED] = peak_speed
    figures[CURRENT_SQUARE] = square * period
    figures[TRIPPED] = u[TRIP]
    figures[CURRENT_RIPPLE] = max(high - low, 0.0)
    conclude(figures, o, x[ANGLE] - x[TWIST] + rest_offset, p[K_TORQUE])
    return difference


@compiled
def simulate(
    plants: Array,
    limits: Array,
    frame: Array,
    gains: Array,
    pieces: Array,
    first_piece: Whole,
    moves: Array,
    max_cycles: int,
    figures: Array,
    trace: Array,
    rise: Array,
) -> int:
    """Run the cycle until two successive records agree; figures [moves, FIGURES_SIZE] are the result.

    Parameters
        plants: one row a move; units as in `layout`
        limits: of the drive
        frame: rates, ratio and window
        gains: settings
        pieces: of all moves, at the shaft
        first_piece: where each move's pieces begin
        moves: one row a move
        max_cycles: after which the worst of the last five counts
        figures: result
        trace: result, one row a current sample of the last cycle; none are kept where it has no rows
        rise [A²·s]: result, of the bucket over the last cycle
    Returns the cycles run; negative where no two agreed; 0 where the loop diverged
    Source: [own]
    """
    count = moves.shape[0]
    prepared = np.zeros((count, PREPARED_SIZE))
    matrices = np.zeros((count, SEGMENTS, MODES, COLUMNS, PADDED))
    total = 0
    for m in range(count):
        total += int(moves[m, PERIODS])
        prepare(plants[m], prepared[m])
        transitions(
            prepared[m],
            frame[COMPUTATION_DELAY],
            frame[CURRENT_PERIOD] - frame[COMPUTATION_DELAY],
            matrices[m],
        )
    per_period = int(frame[VELOCITY_EVERY]) * int(frame[POSITION_EVERY])
    x = np.zeros(STATE_SIZE)
    u = np.zeros(DRIVE_SIZE)
    senses = np.zeros(2, dtype=np.int64)
    o = np.zeros(OBSERVER_SIZE)
    c = np.zeros((SERIES_ROWS, TERMS + 1))
    new = np.zeros(PADDED)
    record = np.zeros(total)
    kept = np.zeros((KEPT, count, FIGURES_SIZE))
    p = prepared[count - 1]
    senses[0] = 0 if p[MOTOR_DRAG] > 0.0 else 1
    senses[1] = 0 if p[HOLDING] > 0.0 else 1
    x[CURRENT] = hold_still(u, gains, frame, p)
    x[TWIST] = 0.0 if p[RIGID] != 0.0 else p[PULL] / p[SPRING]
    rest_offset = x[TWIST]
    base = 0.0
    for cycle in range(max_cycles):
        level = u[BUCKET]
        difference = 0.0
        row = 0
        for m in range(count):
            periods = int(moves[m, PERIODS])
            change = run_move(
                x, senses, u, prepared[m], matrices[m], limits, frame, gains, pieces,
                first_piece[m], first_piece[m + 1], moves[m], base, rest_offset,
                record[row : row + periods], trace, row * per_period, kept[cycle % KEPT, m], o, c, new,
            )  # fmt: skip
            if math.isinf(change):
                diverge(figures)
                return 0
            difference = max(difference, change)
            row += periods
        rise[0] = u[BUCKET] - level
        base += moves[count - 1, TARGET]
        if cycle > 0 and difference <= SAME * frame[WINDOW]:
            keep_worst(kept, cycle % KEPT, cycle % KEPT + 1, figures)
            return cycle + 1
    last = min(max_cycles, KEPT)
    keep_worst(kept, last - last, last, figures)
    return -max_cycles


@compiled
def simulate_corners(
    plants: Array,
    limits: Array,
    frame: Array,
    gains: Array,
    pieces: Array,
    first_piece: Whole,
    moves: Array,
    max_cycles: int,
    figures: Array,
    cycles: Whole,
) -> None:
    """`simulate` for each of plants [corners, moves, PLANT_SIZE] and limits [corners, LIMITS_SIZE], no traces."""
    trace = np.zeros((0, 0))
    rise = np.zeros(1)
    for n in range(plants.shape[0]):
        cycles[n] = simulate(
            plants[n], limits[n], frame, gains, pieces, first_piece, moves, max_cycles, figures[n], trace, rise
        )
