"""Simulates an axis under its settings at every corner and judges it."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from concurrent.futures import Executor

from axis.completion import CompletedAxis
from axis.description.corners import corners
from axis.description.settings import Loops
from axis.settling.scenarios import scenario
from axis.settling.verdict import CornerOutcome, Settled, judge
from axis.simulation.record import Outcome, Trace
from axis.simulation.run import run, trace

Progress = Callable[[float, str], None]  # share done, what is best or under way; may raise Stopped


def check(
    axis: CompletedAxis, loops: Loops, progress: Progress | None = None, executor: Executor | None = None
) -> Settled:
    """Every move at the nominal axis and at every corner of its tolerances."""
    asked: list[Mapping[str, float]] = [{}, *corners(axis.stated.tolerance)]
    outcomes = run_corners(axis, loops, asked, progress, executor)
    at = [CornerOutcome(corner, outcome) for corner, outcome in zip(asked, outcomes, strict=True)]
    return judge(axis, at, outcomes[0])


def run_corners(
    axis: CompletedAxis,
    loops: Loops,
    asked: Sequence[Mapping[str, float]],
    progress: Progress | None = None,
    executor: Executor | None = None,
) -> list[Outcome]:
    """The outcome at each asked corner, in that order."""

    def at(corner: Mapping[str, float]) -> Outcome:
        return run(scenario(axis, loops, corner))

    results = executor.map(at, asked) if executor is not None else map(at, asked)
    outcomes = []
    for n, outcome in enumerate(results, start=1):
        outcomes.append(outcome)
        if progress is not None:
            progress(n / len(asked), f"{n} of {len(asked)} corners")
    return outcomes


def tail_trace(axis: CompletedAxis, loops: Loops, corner: Mapping[str, float]) -> Trace:
    """The record of the last cycle at one corner, for pictures."""
    return trace(scenario(axis, loops, corner))[1]
