"""What one check finds at one corner, and the rule it belongs to."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import cached_property
from itertools import product as combinations
from typing import Literal

from axis.completion import CompletedAxis, at_corner
from axis.sizing.demand import Load

Lever = Literal["acceleration", "speed", "duration", "dwell"]

ROUNDING = 1e-12  # of a limit

# Ends of these tolerances change what a rigid axis asks; the bus is always the lowest that must be expected.
SCALED = ("load_mass", "friction", "torque_constant")


@dataclass(frozen=True)
class Finding:
    """A demand beside its limit. Without a limit the check is neutral, or lacks what `missing` names."""

    demand: float | None = None
    limit: float | None = None
    reason: str = ""
    missing: str = ""  # paths of the axis file without which nothing can be said
    neutral: str = ""  # why the check does not apply
    moves: tuple[int, ...] = ()  # counted from 0: those that exceed the limit; empty: the whole cycle counts
    ratio: float | None = None  # demand over limit where it is not the quotient of the two

    @property
    def margin(self) -> float | None:
        """Share of the limit that is left; −1 at the least, where nothing of what is asked can be given."""
        if self.limit is None or (self.demand is None and self.ratio is None):
            return None
        ratio = self.ratio
        if ratio is None and self.demand is not None:
            ratio = self.demand / self.limit if self.limit > 0.0 else math.inf
        return 1.0 - ratio if ratio is not None and math.isfinite(ratio) else -1.0

    @property
    def holds(self) -> bool:
        """Within its limit, or without one."""
        margin = self.margin
        return not self.missing and (margin is None or margin >= -ROUNDING)


@dataclass(frozen=True)
class Corner:
    """One axis with its tolerances at one combination of their ends."""

    shares: Mapping[str, float]
    nominal: CompletedAxis
    like: Corner | None = None  # differs from this one in the torque constant alone, so that it has the same torques

    @cached_property
    def axis(self) -> CompletedAxis:
        return at_corner(self.nominal, self.shares)

    @cached_property
    def load(self) -> Load:
        return Load(self.axis, None if self.like is None else self.like.load.trace)

    @property
    def strength(self) -> float:
        """Torque constant over its nominal value: continuous torques, which are limits of current, scale with it."""
        return 1.0 + self.shares.get("torque_constant", 0.0)


@dataclass(frozen=True)
class Rule:
    """A check: what it measures at a corner, and what would remedy it, the first choice first."""

    id: str
    name: str
    unit: str
    source: str
    measure: Callable[[Corner], Finding]
    levers: tuple[Lever, ...] = ()
    part: Callable[[Finding], str] = lambda finding: ""  # the part that would do, where no lever helps


class Corners:
    """The corners of one axis, each made once; those that differ in the torque constant alone share their torques."""

    def __init__(self, axis: CompletedAxis) -> None:
        self._axis = axis
        self._known: dict[tuple[tuple[str, float], ...], Corner] = {}
        self._torques: dict[tuple[tuple[str, float], ...], Corner] = {}

    def at(self, shares: Mapping[str, float]) -> Corner:
        """The axis with its tolerances at these signed shares."""
        key = tuple(shares.items())
        if key not in self._known:
            same = tuple((name, share) for name, share in key if name != "torque_constant")
            self._known[key] = Corner(shares, self._axis, self._torques.get(same))
            self._torques.setdefault(same, self._known[key])
        return self._known[key]


def corners(axis: CompletedAxis) -> tuple[Corner, ...]:
    """The nominal axis and every combination of the tolerance ends that change a demand or a limit."""
    names = [name for name in SCALED if getattr(axis.stated.tolerance, name) > 0.0]
    ends = [(-getattr(axis.stated.tolerance, name), getattr(axis.stated.tolerance, name)) for name in names]
    shares = [dict(zip(names, values, strict=True)) for values in combinations(*ends)] if names else []
    known = Corners(axis)
    return tuple(known.at(each) for each in ({}, *shares))
