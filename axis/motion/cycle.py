"""Moves and dwells joined to one cycle."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from axis.motion.pieces import Profile

CLOSED = 1e-9  # of the largest position: decimals of the moves do not add up exactly


@dataclass(frozen=True, eq=False)
class Cycle:
    """The whole cycle as one profile, with the times of its moves."""

    profile: Profile
    starts: tuple[float, ...]  # [s] first instant of each move
    commanded_ends: tuple[float, ...]  # [s] last instant of each move
    dwell_ends: tuple[float, ...]  # [s] where the next move may start
    closes: bool  # ends where it began

    @property
    def duration(self) -> float:
        """[s]"""
        return self.dwell_ends[-1]


def chain(moves: Sequence[Profile], dwells: Sequence[float]) -> Cycle:
    """Join moves, each followed by its dwell, to one cycle that starts at position zero.

    Parameters
        moves: each from rest to rest, starting at position zero
        dwells [s]: after each move, not negative
    Returns the cycle
    p of each piece is counted from where the moves before it end
    Source: [own]
    """
    rows: list[tuple[float, ...]] = []
    starts, ends, dwell_ends = [], [], []
    time, position, largest = 0.0, 0.0, 0.0
    for move, dwell in zip(moves, dwells, strict=True):
        starts.append(time)
        rows += [(t, position + p, v, a, j) for t, p, v, a, j in move.pieces.tolist()]
        time, position = time + move.duration, position + move.end
        largest = max(largest, abs(position))
        ends.append(time)
        if dwell > 0.0:
            rows.append((dwell, position, 0.0, 0.0, 0.0))
            time += dwell
        dwell_ends.append(time)
    return Cycle(
        profile=Profile(np.array(rows, dtype=np.float64)),
        starts=tuple(starts),
        commanded_ends=tuple(ends),
        dwell_ends=tuple(dwell_ends),
        closes=abs(position) <= CLOSED * largest,
    )
