"""What tuning returns: the settings, what they were compared with, and the path to them."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from axis.description.settings import Loops
from axis.settling.verdict import Settled
from axis.verdicts import Verdict

if TYPE_CHECKING:
    from axis.loops.margins import Margins


@dataclass(frozen=True)
class Reference:
    """Settings with their margins and their verdict at every computed corner."""

    loops: Loops
    margins: Margins  # the smallest of each over the corners
    margins_corner: Mapping[str, float]  # where the peak of the sensitivity is largest
    settled: Settled

    @property
    def worst_time(self) -> float:
        """[s] Largest sum of the moves' times to window, each move at its own worst corner; infinite: never."""
        return sum(move.worst.time_to_window for move in self.settled.moves)


@dataclass(frozen=True)
class Step:
    """One step of the path and what it bought."""

    name: str
    worst_time: float  # [s] as in `Reference.worst_time`
    failing_corners: int
    margins_hold: bool


@dataclass(frozen=True)
class Tuned:
    """Settings that were searched, verified at every computed corner."""

    result: Reference
    textbook: Reference
    path: tuple[Step, ...]
    bound: float  # [s] sum over the moves of the rigid axis's time-optimal move at the worst corner
    machine_bound: float  # [s] the same without the user's own limits
    seed: int
    runs: int  # simulated cycles of the search; verification apart
    margins_hold: bool
    searched: bool  # the search found better than the designed start
    reason: str  # when nothing was found: what binds

    @property
    def loops(self) -> Loops:
        return self.result.loops

    @property
    def verdict(self) -> Verdict:
        settled = self.result.settled.verdict
        return settled if self.margins_hold else "fail"
