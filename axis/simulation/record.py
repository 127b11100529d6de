"""What a simulated cycle shows. Lengths and speeds are those of the load: metres, or radians where it turns."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]


@dataclass(frozen=True)
class MoveOutcome:
    """One move with its dwell; t = 0 is its first sample. Where the cycle did not repeat, the worst of five cycles."""

    commanded_end: float  # [s] last instant of the commanded move
    observed: float  # [s] end of the observation
    time_to_window: float  # [s] last instant at which the load was outside; infinite: outside at the end
    signal: float  # [s] first assertion of the drive's in-position signal; infinite: never
    signal_last: float  # [s] its last assertion
    signal_losses: int  # times the signal was lost again
    signal_early: float  # [s] time to window less first assertion; positive: the signal lies; -infinite: no signal
    overshoot: float  # [m] of the load beyond the target
    undershoot: float  # [m] of the load short of the target after it had reached it
    following_error: float  # [m] largest |interpolated set-point less measured position|
    rest_error: float  # [m] signed, of the load against the target at the end of the observation
    peak_torque: float  # [N·m] largest |motor torque|
    peak_current: float  # [A] q-axis peak
    peak_speed: float  # [rad/s] of the motor
    current_saturated: float  # [s]
    voltage_saturated: float  # [s]
    bucket_peak: float  # [1] highest level of the current-time bucket over its capacity
    tripped: bool  # the bucket became full
    current_square_time: float  # [A²·s] integral of the squared current
    current_ripple: float  # [A] peak to peak over the last quarter of the dwell

    @property
    def settling_time(self) -> float:
        """[s] time to window less commanded end; negative where the load arrives before the command ends."""
        return self.time_to_window - self.commanded_end


@dataclass(frozen=True)
class Outcome:
    """One simulated cycle."""

    moves: tuple[MoveOutcome, ...]
    cycles: int  # cycles run
    repeated: bool  # the last two records agree within 1 % of the window
    diverged: bool  # the loop is unstable: figures are infinite
    bucket_rise: float  # [1] of the bucket's capacity, over the last cycle; positive: it fills sooner or later


@dataclass(frozen=True)
class Trace:
    """The last cycle, one row a current sample. Motor positions are divided by the ratio."""

    time: Array  # [s] from the first sample of the cycle
    setpoint: Array  # [m]
    load_position: Array  # [m]
    motor_position: Array  # [m]
    load_speed: Array  # [m/s]
    motor_speed: Array  # [rad/s]
    current: Array  # [A] q-axis peak
    current_command: Array  # [A]
    voltage: Array  # [V] peak phase, acts after the computation delay
    torque: Array  # [N·m]
    starts: Array  # [s] first sample of each move
    ends: Array  # [s] commanded end of each move
