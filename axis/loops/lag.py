"""Tσ: the sum of all lags inside the velocity loop, each named.

Leaving out the differencing interval or the velocity filter designs unstable loops.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from axis.completion import Rates
from axis.description.settings import CurrentLoop, TorqueFilter
from axis.loops.current import current_loop_lag
from axis.loops.filters import delay_at_rest, lowpass_share, torque_filter


@dataclass(frozen=True)
class Lags:
    """The lags of the velocity loop, from the torque command round to the torque command."""

    current_loop: float  # [s] closed current loop, its computation and hold of the voltage inside
    velocity_hold: float  # [s] the current command is held over the velocity period
    differencing: float  # [s] half the interval over which positions are differenced
    velocity_filter: float  # [s] low-pass on the measured velocity
    torque_filters: tuple[float, ...]  # [s] each filter of the torque path

    @property
    def total(self) -> float:
        """[s] Tσ"""
        return (
            self.current_loop + self.velocity_hold + self.differencing + self.velocity_filter + sum(self.torque_filters)
        )


def hold_lag(velocity_period: float, current_period: float) -> float:
    """Mean wait of a held current command, seen from the current samples.

    Parameters
        velocity_period [s]: the command is held for it
        current_period [s]: the hold of the voltage itself is counted in the current loop
    Returns [s]
    (T_v − T_c)/2
    Source: [own]
    """
    return (velocity_period - current_period) / 2.0


def differencing_lag(velocity_period: float) -> float:
    """A difference of positions is the velocity half an interval ago.

    Parameters
        velocity_period [s]: between the two positions
    Returns [s]
    T_v/2
    Source: [own]
    """
    return velocity_period / 2.0


def velocity_filter_lag(time_constant: float, period: float) -> float:
    """Delay of the sampled velocity filter for slow signals.

    Parameters
        time_constant [s]: of the filter, 0 for none
        period [s]: velocity period
    Returns [s]
    T·(1 − share)/share with share = 1 − exp(−T/T_f); about T_f − T/2
    Source: [own]
    """
    share = lowpass_share(time_constant, period)
    return period * (1.0 - share) / share


def velocity_loop_lags(
    inductance: float,
    rates: Rates,
    current: CurrentLoop,
    velocity_filter: float = 0.0,
    filters: Sequence[TorqueFilter] = (),
) -> Lags:
    """All lags of the velocity loop.

    Parameters
        inductance [H]: of one phase, unsaturated: there the current loop is slowest
        rates: of the three loops
        current: the current loop as set
        velocity_filter [s]: time constant of the velocity filter
        filters: of the torque path
    Returns the lags [s]
    Source: [own]
    """
    period = rates.velocity_period
    return Lags(
        current_loop=current_loop_lag(inductance, current.kp),
        velocity_hold=hold_lag(period, rates.current_period),
        differencing=differencing_lag(period),
        velocity_filter=velocity_filter_lag(velocity_filter, period),
        torque_filters=tuple(delay_at_rest(torque_filter(one, period), period) for one in filters),
    )
