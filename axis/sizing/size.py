"""Is this motor, with this drive and transmission, enough for the cycle?"""

from __future__ import annotations

from dataclasses import dataclass

from axis.completion import CompletedAxis
from axis.sizing.checks import judge, rules
from axis.sizing.demand import Demand, demand
from axis.sizing.finding import corners
from axis.sizing.remedy import Trials
from axis.verdicts import Check, Verdict, worst


@dataclass(frozen=True)
class Sizing:
    """Demand of the nominal axis, and every check at its worst corner."""

    demand: Demand
    checks: tuple[Check, ...]

    @property
    def verdict(self) -> Verdict:
        return worst(check.verdict for check in self.checks)


def size(axis: CompletedAxis) -> Sizing:
    """Demand and checks of a completed axis."""
    ends = corners(axis)
    trials = Trials()
    return Sizing(demand(ends[0].load), tuple(judge(rule, ends, trials) for rule in rules(axis)))
