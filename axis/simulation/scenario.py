"""What is simulated: one axis at one corner, its drive, its settings and its cycle; and the flat vectors of it."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import astuple, dataclass

import numpy as np
import numpy.typing as npt

from axis.completion import Limits, Rates, ShaftPlant
from axis.description.settings import Loops
from axis.loops.filters import lowpass_share, torque_filter
from axis.machine.drive import bucket_capacity
from axis.motion.pieces import evaluate_piece
from axis.simulation.layout import FILTERS, GAINS_SIZE, MAX_FILTERS, MOVE_SIZE

Array = npt.NDArray[np.float64]
Whole = npt.NDArray[np.int64]

ROUNDING = 1e-9  # of a period: a move that ends this little after a sample ends at it


@dataclass(frozen=True)
class CommandedMove:
    """One move and the dwell that is observed after it, in load units from the move's own start."""

    pieces: Array  # (n, 5): duration [s], p0 [m], v0 [m/s], a0 [m/s²], jerk [m/s³]
    dwell: float  # [s]

    @property
    def duration(self) -> float:
        """[s] to the commanded end."""
        return float(self.pieces[:, 0].sum())

    @property
    def distance(self) -> float:
        """[m] where the last piece ends."""
        t, p, v, a, j = (float(number) for number in self.pieces[-1])
        return evaluate_piece(t, p, v, a, j)[0]


@dataclass(frozen=True)
class Scenario:
    """Everything one run depends on. Each move has its own plant: what it carries counts from its first sample on."""

    plants: tuple[ShaftPlant, ...]  # one a move, at this corner
    rates: Rates
    limits: Limits
    loops: Loops
    nominal_torque_constant: float  # [N·m/A] the drive's own, per peak q-axis current
    nominal_inertia: float  # [kg·m²] total inertia at the shaft that the torque feedforward uses
    ratio: float  # [rad/m] signed: motor radians per load unit
    window: float  # [m] half width
    window_time: float  # [s] the drive stays inside before it signals
    moves: tuple[CommandedMove, ...]


@dataclass(frozen=True)
class Cycle:
    """The commanded cycle as the kernel reads it."""

    pieces: Array  # (n, 5) of all moves, at the shaft, from each move's own start
    first_piece: Whole  # where each move's pieces begin, and the total
    moves: Array  # (moves, MOVE_SIZE)


def plants_matrix(plants: Sequence[ShaftPlant]) -> Array:
    """One row a move."""
    return np.array([astuple(plant) for plant in plants], dtype=np.float64)


def capacity(limits: Limits) -> float:
    """[A²·s] What the drive's current-time bucket holds."""
    return bucket_capacity(limits.continuous_current, limits.drive_peak_current, limits.peak_time)


def limits_vector(limits: Limits) -> Array:
    """The limits as the kernel reads them."""
    count = 0.0 if math.isinf(limits.encoder_counts) else 2.0 * math.pi / limits.encoder_counts
    return np.array(
        [limits.continuous_current, limits.peak_current, capacity(limits), limits.voltage, count],
        dtype=np.float64,
    )


def frame_vector(
    rates: Rates, nominal_torque_constant: float, ratio: float, window: float, window_time: float
) -> Array:
    """What does not change while settings are searched, as the kernel reads it.

    Parameters
        rates: of the three loops
        nominal_torque_constant [N·m/A]: of the drive
        ratio [rad/m]: motor radians per load unit
        window [m]: half width at the load
        window_time [s]: the drive stays inside before it signals
    Returns the vector
    Source: [own]
    """
    samples = math.ceil(window_time / rates.position_period - ROUNDING)
    return np.array(
        [
            rates.current_period,
            rates.velocity_every,
            rates.position_every,
            rates.computation_delay,
            nominal_torque_constant,
            window * abs(ratio),
            samples,
        ],
        dtype=np.float64,
    )


def gains_vector(loops: Loops, rates: Rates, nominal_inertia: float) -> Array:
    """The settings as the kernel reads them.

    Parameters
        loops: the settings
        rates: of the three loops
        nominal_inertia [kg·m²]: total, by which the torque feedforward multiplies the set-point acceleration
    Returns the vector
    Source: [own]
    """
    if len(loops.filters) > MAX_FILTERS:
        raise ValueError(f"at most {MAX_FILTERS} torque filters are simulated")
    period = rates.velocity_period
    vector = np.zeros(GAINS_SIZE)
    vector[:FILTERS] = (
        loops.current.kp,
        loops.current.kp * rates.current_period / loops.current.ti,
        loops.velocity.kp,
        loops.velocity.kp * period / loops.velocity.ti,
        loops.velocity.setpoint_weight,
        loops.feedforward.velocity,
        loops.feedforward.torque * nominal_inertia,
        lowpass_share(loops.velocity.filter, period),
        loops.position.kv,
        len(loops.filters),
    )
    for n, setting in enumerate(loops.filters):
        vector[FILTERS + 5 * n : FILTERS + 5 * n + 5] = torque_filter(setting, period)
    return vector


def cycle_arrays(moves: Sequence[CommandedMove], rates: Rates, ratio: float) -> Cycle:
    """The commanded cycle at the shaft; every move starts at a position sample, dwells are lengthened to reach it.

    Parameters
        moves: in load units
        rates: of the three loops
        ratio [rad/m]: motor radians per load unit
    Returns the arrays
    Source: [own]
    """
    table = np.zeros((len(moves), MOVE_SIZE))
    first = np.zeros(len(moves) + 1, dtype=np.int64)
    position, largest = 0.0, 0.0
    for n, move in enumerate(moves):
        first[n + 1] = first[n] + len(move.pieces)
        start, position = position, position + move.distance
        largest = max(largest, abs(position))
        if abs(position) <= 1e-12 * largest:  # a closed cycle closes although its decimals do not add up
            position = 0.0
        periods = max(1, math.ceil((move.duration + move.dwell) / rates.position_period - ROUNDING))
        direction = math.copysign(1.0, move.distance * ratio)
        table[n] = (start * ratio, position * ratio, direction, move.duration, periods)
    pieces = np.concatenate([move.pieces for move in moves]) * np.array([1.0, ratio, ratio, ratio, ratio])
    return Cycle(pieces=np.ascontiguousarray(pieces), first_piece=first, moves=table)
