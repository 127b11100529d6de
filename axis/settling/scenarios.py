"""From an axis, a corner and settings to the scenario that is simulated."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import replace

from axis.completion import CompletedAxis, CompletedMove, at_corner, move_profile
from axis.description.settings import Loops
from axis.simulation.scenario import CommandedMove, Scenario

INTEGRAL_TIMES = 5.0  # the rest is watched for so many integral times of the velocity loop


def with_jerk(axis: CompletedAxis, loops: Loops) -> CompletedAxis:
    """The axis whose moves take the jerk of the settings, where these name one."""
    if loops.move_jerk is None:
        return axis
    moves = tuple(
        move if move.jerk is None else replace(move, jerk=jerk)
        for move, jerk in zip(axis.moves, loops.move_jerk, strict=True)
    )
    return replace(axis, moves=moves)


def least_observation(settle_within: float, window_time: float, integral_time: float) -> float:
    """The shortest dwell over which the verdict "stays inside" is given.

    Parameters
        settle_within [s]: asked settling time
        window_time [s]: time inside before the drive signals
        integral_time [s]: of the velocity loop
    Returns [s]
    settle_within + window_time + 5·integral_time
    Source: [own]
    """
    return settle_within + window_time + INTEGRAL_TIMES * integral_time


def observed_dwell(axis: CompletedAxis, move: CompletedMove, loops: Loops) -> float:
    """[s] The dwell that is simulated: the stated one, lengthened where it is too short to judge."""
    return max(move.dwell, least_observation(axis.settle_within, axis.stated.window.time, loops.velocity.ti))


def commanded(axis: CompletedAxis, loops: Loops, longest: float = math.inf) -> tuple[CommandedMove, ...]:
    """The cycle as it is commanded and observed.

    Parameters
        axis: the completed axis
        loops: the settings
        longest [s]: most that is observed of a dwell
    Returns the moves with their dwells
    Source: [own]
    """
    return tuple(
        CommandedMove(move_profile(move).pieces, min(observed_dwell(axis, move, loops), longest))
        for move in with_jerk(axis, loops).moves
    )


def scenario(axis: CompletedAxis, loops: Loops, corner: Mapping[str, float], window: float | None = None) -> Scenario:
    """The axis at one corner under the given settings; the drive itself knows only the nominal axis.

    `window` [m or rad] in place of the stated one, for a search that keeps a share of it back.
    Source: [own]
    """
    there = at_corner(axis, corner)
    return Scenario(
        plants=tuple(there.move_plant(move) for move in there.moves),
        rates=axis.drive.rates,
        limits=there.limits(),
        loops=loops,
        nominal_torque_constant=axis.motor.torque_constant,
        nominal_inertia=axis.plant().total_inertia,
        ratio=axis.ratio,
        window=axis.stated.window.position if window is None else window,
        window_time=axis.stated.window.time,
        moves=commanded(axis, loops),
    )
