"""Verdicts and the sentences that travel with them: checks, cautions, assumptions."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Literal

Verdict = Literal["pass", "fail", "not evaluated", "not applicable"]

_RANK: dict[Verdict, int] = {"not applicable": 0, "pass": 1, "not evaluated": 2, "fail": 3}


@dataclass(frozen=True)
class Check:
    """One check a practitioner makes, with its rule and its cure.

    `demand` and `limit` are SI floats in `unit` (None where not evaluated); `margin` is the share of the limit that
    is left, (limit - demand)/limit for upper limits, negative when the check fails.
    """

    id: str
    name: str
    verdict: Verdict
    source: str
    demand: float | None = None
    limit: float | None = None
    unit: str = ""
    margin: float | None = None
    reason: str = ""  # what is missing (not evaluated), why neutral (not applicable), what decides (pass, fail)
    remedy: str = ""  # when it fails: the change that would make it pass, with a number


@dataclass(frozen=True)
class Assumption:
    """A value the user did not state: its path in the axis file, why, and the value (SI) where it is one."""

    path: str
    text: str
    value: float | str | None = None


@dataclass(frozen=True)
class Caution:
    """A warning that belongs to what the axis is, and the standard that governs."""

    text: str
    governs: str


def worst(verdicts: Iterable[Verdict]) -> Verdict:
    """The verdict of the whole: fail > not evaluated > pass; nothing checked at all is `not evaluated`."""
    ranked = sorted(verdicts, key=_RANK.__getitem__)
    return "not evaluated" if not ranked or ranked[-1] == "not applicable" else ranked[-1]
