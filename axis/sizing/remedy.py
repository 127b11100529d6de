"""The change that makes a failing check pass, with its number: found by halving on the stated axis itself.

The change is made where the user would make it, in the stated values, and the axis is completed anew: what the file
leaves open follows as it will when the change is typed.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace

from axis.complete import complete
from axis.description.axis import Axis
from axis.description.moves import Move
from axis.sizing.finding import Corner, Corners, Finding, Lever, Rule

_STEPS = 16  # towards the furthest change, before the first that passes is narrowed down
_CLOSE = 1e-3  # of the change: where the halving ends
_ROUNDING = 1e-2  # of the change: what rounding to few digits may add
_MOST_DIGITS = 12
_FURTHEST = 10.0  # times less, or more; dwell: times the cycle


@dataclass(frozen=True)
class _Change:
    """A one-parameter change of the stated axis; its value moves away from `start` as the step goes from 0 to 1."""

    start: float
    value: Callable[[float], float]
    apply: Callable[[float], Axis]
    words: Callable[[str], str]
    upwards: bool


class Trials:
    """Changed axes at their corners, kept so that checks which pull the same lever share their cycles."""

    def __init__(self) -> None:
        self._axes: dict[Axis, Corners] = {}

    def corner(self, stated: Axis, shares: Mapping[str, float]) -> Corner:
        """The axis with a change, completed, at one corner."""
        if stated not in self._axes:
            self._axes[stated] = Corners(complete(stated))
        return self._axes[stated].at(shares)


def remedy(rule: Rule, worst: Corner, finding: Finding, corners: Sequence[Corner], trials: Trials) -> str:
    """The first lever that helps, in words; another part where none does."""
    stated = worst.nominal.stated
    for lever in rule.levers:
        change = _change(lever, stated, finding.moves, worst.load.trace.cycle_time)
        found = _least(rule, change, worst, corners, trials) if change is not None else None
        if change is not None and found is not None:
            return change.words(found)
    return rule.part(finding)


def _least(rule: Rule, change: _Change, worst: Corner, corners: Sequence[Corner], trials: Trials) -> str | None:
    """The least change, as it is to be typed, with which the check holds at every corner; None where none does."""

    def holds(value: float, where: Sequence[Corner]) -> bool:
        axis = change.apply(value)
        return all(rule.measure(trials.corner(axis, corner.shares)).holds for corner in where)

    looked_at = [worst]
    while True:
        step = _first_step(change, lambda value: holds(value, looked_at))
        if step is None:
            return None
        text = _typed(change, change.value(step))
        failing = [corner for corner in corners if not holds(float(text), [corner])]
        if not failing:
            return text
        if failing[0] in looked_at:  # rounding alone cannot do this: the check holds on both sides of a gap
            return None
        looked_at.append(failing[0])


def _first_step(change: _Change, holds: Callable[[float], bool]) -> float | None:
    """The first step that holds, narrowed down from the last one that does not."""
    good = next((n for n in range(1, _STEPS + 1) if holds(change.value(n / _STEPS))), None)
    if good is None:
        return None
    failing, holding = (good - 1) / _STEPS, good / _STEPS
    while abs(change.value(holding) - change.value(failing)) > _CLOSE * abs(change.value(holding) - change.start):
        middle = 0.5 * (failing + holding)
        if not failing < middle < holding:
            break
        if holds(change.value(middle)):
            holding = middle
        else:
            failing = middle
    return holding


def _typed(change: _Change, value: float) -> str:
    """Few digits, rounded to the side on which the check holds."""
    for digits in range(3, _MOST_DIGITS):
        step = 10.0 ** (math.floor(math.log10(value)) - digits + 1)
        rounded = (math.ceil(value / step) if change.upwards else math.floor(value / step)) * step
        if abs(rounded - value) <= _ROUNDING * abs(value - change.start):
            return f"{rounded:.{digits}g}"
    return repr(value)


def _change(lever: Lever, stated: Axis, moves: tuple[int, ...], cycle_time: float) -> _Change | None:
    """The lever on the moves that exceed the limit, or on all; None where no move has it."""
    chosen = tuple(n for n in (moves or range(len(stated.moves))) if _has(lever, stated.moves[n]))
    if not chosen:
        return None
    unit = "rad" if stated.rotary else "m"
    named = f"move {chosen[0] + 1}" if len(chosen) == 1 else "moves " + ", ".join(str(n + 1) for n in chosen)
    if lever == "dwell":
        last = chosen[-1]
        dwell = stated.moves[last].dwell
        return _Change(
            dwell,
            lambda step: dwell + cycle_time * ((1.0 + _FURTHEST) ** step - 1.0),
            lambda value: _with_moves(stated, (last,), lambda move: replace(move, dwell=value)),
            lambda text: f"lengthen the dwell of move {last + 1} to {text} s",
            upwards=True,
        )
    if lever == "duration":
        shortest = min(stated.moves[n].duration or 0.0 for n in chosen)
        return _Change(
            shortest,
            lambda step: shortest * _FURTHEST**step,
            lambda value: _with_moves(stated, chosen, lambda move: _lasting(move, value)),
            lambda text: f"lengthen {named} to {text} s",
            upwards=True,
        )
    if lever == "speed":
        fastest = max(stated.moves[n].speed or 0.0 for n in chosen)
        return _Change(
            fastest,
            lambda step: fastest / _FURTHEST**step,
            lambda value: _with_moves(stated, chosen, lambda move: _slower(move, value)),
            lambda text: f"lower the speed of {named} to {text} {unit}/s",
            upwards=False,
        )
    sharpest = max(max(stated.moves[n].acceleration or 0.0, stated.moves[n].deceleration or 0.0) for n in chosen)
    return _Change(
        sharpest,
        lambda step: sharpest / _FURTHEST**step,
        lambda value: _with_moves(stated, chosen, lambda move: _softer(move, value)),
        lambda text: f"lower the acceleration of {named} to {text} {unit}/s²",
        upwards=False,
    )


def _has(lever: Lever, move: Move) -> bool:
    if lever == "dwell":
        return True
    if lever == "duration":
        return move.duration is not None
    return move.duration is None and move.speed is not None and move.acceleration is not None


def _with_moves(stated: Axis, chosen: tuple[int, ...], change: Callable[[Move], Move]) -> Axis:
    return replace(stated, moves=tuple(change(move) if n in chosen else move for n, move in enumerate(stated.moves)))


def _lasting(move: Move, duration: float) -> Move:
    return replace(move, duration=max(move.duration or 0.0, duration))


def _slower(move: Move, speed: float) -> Move:
    return replace(move, speed=min(move.speed or math.inf, speed))


def _softer(move: Move, acceleration: float) -> Move:
    """Both ramps: the deceleration follows where it is stated on its own."""
    down = None if move.deceleration is None else min(move.deceleration, acceleration)
    return replace(move, acceleration=min(move.acceleration or math.inf, acceleration), deceleration=down)
