"""The verdict: what each move owes, how it did at every computed corner, and in words why it failed."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

from axis.completion import CompletedAxis, at_corner
from axis.description.moves import Window
from axis.settling.rest import rest_band
from axis.simulation.record import MoveOutcome, Outcome
from axis.units import Quantity, declarations, show
from axis.verdicts import Check, Verdict, worst

PRESLIDING_WINDOW = 20e-6  # [m] below it the elastic motion of guides before they slide decides whether the load hunts
SOURCE = "definitions of docs/model.md, simulated"


@dataclass(frozen=True)
class CornerOutcome:
    """One corner and what was simulated there."""

    corner: Mapping[str, float]
    outcome: Outcome


@dataclass(frozen=True)
class MoveVerdict:
    """One move over all computed corners."""

    number: int  # from 1
    nominal: MoveOutcome
    worst: MoveOutcome
    worst_corner: Mapping[str, float]
    failing_corners: int
    checks: tuple[Check, ...]

    @property
    def verdict(self) -> Verdict:
        return worst(check.verdict for check in self.checks)


@dataclass(frozen=True)
class Settled:
    """What `check` found."""

    moves: tuple[MoveVerdict, ...]
    corners: int
    checks: tuple[Check, ...]  # of the axis as a whole
    repeated: bool  # every simulated cycle repeated itself

    @property
    def all_checks(self) -> tuple[Check, ...]:
        return (*self.checks, *(check for move in self.moves for check in move.checks))

    @property
    def verdict(self) -> Verdict:
        return worst(check.verdict for check in self.all_checks)


@dataclass(frozen=True)
class Rule:
    """One thing a move owes: how much of it an outcome shows and how much is allowed."""

    id: str
    name: str
    unit: str
    limit: float | None  # None: not asked
    missing: str  # what would have to be stated


def rules(axis: CompletedAxis) -> tuple[Rule, ...]:
    """The rules in force for every move of this axis."""
    window, length = axis.stated.window, "rad" if axis.stated.rotary else "m"
    return (
        Rule("settling", "Settling time after the commanded end", "s", window.settle_within, "window.settle_within"),
        Rule("signal", "In-position signal before the load has settled", "s", 0.0, ""),
        Rule("following_error", "Following error", length, window.following_error, ""),
        Rule("overshoot", "Overshoot of the load", length, window.max_overshoot, ""),
        Rule("current_time", "Level of the drive's current-time bucket", "1", 1.0, ""),
        Rule("speed", "Motor speed", "rad/s", axis.motor.max_speed, ""),
    )


def shown(rule: Rule, move: MoveOutcome) -> float:
    """What an outcome shows of a rule, in the rule's unit."""
    return {
        "settling": move.settling_time,
        "signal": math.inf if math.isinf(move.signal) else max(move.signal_early, 0.0),
        "following_error": move.following_error,
        "overshoot": move.overshoot,
        "current_time": 1.0 + 1e-9 if move.tripped else move.bucket_peak,
        "speed": move.peak_speed,
    }[rule.id]


def move_fails(axis_rules: tuple[Rule, ...], move: MoveOutcome) -> bool:
    """Whether an outcome breaks any rule in force, or never settles."""
    if math.isinf(move.time_to_window):
        return True
    return any(rule.limit is not None and shown(rule, move) > rule.limit for rule in axis_rules)


def judge(axis: CompletedAxis, outcomes: list[CornerOutcome], nominal: Outcome) -> Settled:
    """The verdict of every move over the computed corners."""
    in_force = rules(axis)
    moves = []
    for n in range(len(axis.moves)):
        at = [(entry.corner, entry.outcome.moves[n]) for entry in outcomes]
        worst_corner, worst_move = max(at, key=lambda pair: _badness(in_force, pair[1]))
        failing = sum(move_fails(in_force, move) for _, move in at)
        checks = tuple(_rule_check(axis, rule, n, at) for rule in in_force)
        moves.append(MoveVerdict(n + 1, nominal.moves[n], worst_move, worst_corner, failing, checks))
    return Settled(
        moves=tuple(moves),
        corners=len(outcomes),
        checks=(*_stability(outcomes), _rest_check(axis, [entry.corner for entry in outcomes]), *_presliding(axis)),
        repeated=all(entry.outcome.repeated for entry in outcomes),
    )


def _badness(in_force: tuple[Rule, ...], move: MoveOutcome) -> tuple[bool, float, float]:
    return move_fails(in_force, move), move.time_to_window, move.signal_early


def _rule_check(axis: CompletedAxis, rule: Rule, n: int, at: list[tuple[Mapping[str, float], MoveOutcome]]) -> Check:
    identity, name = f"{rule.id}[{n + 1}]", f"{rule.name}, move {n + 1}"
    corner, move = max(at, key=lambda pair: shown(rule, pair[1]))
    demand = shown(rule, move)
    where = corner_in_words(corner)
    if rule.limit is None and not rule.missing:
        return Check(identity, name, "not applicable", SOURCE, reason="no limit is stated")
    if rule.limit is None:
        return Check(identity, name, "not evaluated", SOURCE, reason=f"{rule.missing} is not stated")
    passes = demand <= rule.limit
    margin = None
    if rule.limit > 0.0 and math.isfinite(demand):
        margin = min(round((rule.limit - demand) / rule.limit, 6), 1.0)
    return Check(
        identity,
        name,
        "pass" if passes else "fail",
        SOURCE,
        demand=demand if math.isfinite(demand) else None,
        limit=rule.limit,
        unit=rule.unit,
        margin=margin,
        reason=_reason(rule, move, where),
        remedy="" if passes else _remedy(axis, rule, move, demand),
    )


def _reason(rule: Rule, move: MoveOutcome, where: str) -> str:
    if rule.id == "settling" and math.isinf(move.time_to_window):
        return f"never inside the window to the end of the observed {move.observed * 1e3:.4g} ms, {where}"
    if rule.id == "signal" and math.isinf(move.signal):
        return f"the signal never comes, {where}"
    if rule.id == "signal" and move.signal_early > 0:
        settled = f"load settled at {move.time_to_window * 1e3:.4g} ms"
        if math.isinf(move.time_to_window):
            settled = "the load never settles"
        return f"signal at {move.signal * 1e3:.4g} ms, {settled}, {where}: that signal lies"
    return f"worst {where}"


def _remedy(axis: CompletedAxis, rule: Rule, move: MoveOutcome, demand: float) -> str:
    window = axis.stated.window
    if rule.id == "signal":
        return f"a window time of {(window.time + demand) * 1e3:.4g} ms or more" if math.isfinite(demand) else ""
    if rule.id == "settling" and math.isfinite(demand):
        return f"settings that settle faster (settlepoint tune), or settle_within of {demand * 1e3:.4g} ms"
    if rule.id == "settling":
        return (
            f"settings that bring the load to rest inside the window (settlepoint tune); it ends "
            f"{_length(axis, 'position', abs(move.rest_error))} from its target"
        )
    if rule.id in ("following_error", "overshoot"):
        limit = _length(axis, "max_overshoot" if rule.id == "overshoot" else rule.id, demand)
        return f"settings that follow closer, a softer move, or a limit of {limit}"
    if rule.id == "speed":
        return "a lower speed of the move"
    return "a longer dwell or a lower acceleration, so that the drive's current-time limit is not reached"


def _length(axis: CompletedAxis, name: str, value: float) -> str:
    """A length in the unit in which the window's field of that name is shown."""
    declared = declarations(Window)[name]
    assert isinstance(declared, Quantity)
    return show(value, declared, axis.stated.rotary)


def _stability(outcomes: list[CornerOutcome]) -> tuple[Check, ...]:
    unstable = [entry.corner for entry in outcomes if entry.outcome.diverged]
    if not unstable:
        return (Check("stability", "The loop is stable at every computed corner", "pass", SOURCE),)
    return (
        Check(
            "stability",
            "The loop is stable at every computed corner",
            "fail",
            SOURCE,
            reason=f"unstable at {len(unstable)} of {len(outcomes)} corners, among them {corner_in_words(unstable[0])}",
            remedy="lower gains, or settings found by settlepoint tune",
        ),
    )


def _rest_check(axis: CompletedAxis, corners: list[Mapping[str, float]]) -> Check:
    window = axis.stated.window.position
    kept = window * (1.0 - axis.stated.tuning.kept_back)
    band, where = 0.0, "nominal"
    for corner in corners:
        plant = at_corner(axis, corner).plant()
        there = rest_band(plant.breakaway, plant.stiffness, axis.ratio)
        if there > band:
            band, where = there, corner_in_words(corner)
    return Check(
        "rest_band",
        "Friction can hold the load away from its target by",
        "pass" if band <= kept else "fail",
        "break-away force over stiffness, docs/model.md",
        demand=band,
        limit=kept,
        unit="rad" if axis.stated.rotary else "m",
        margin=(kept - band) / kept,
        reason=f"worst {where}; no setting changes it with the encoder at the motor",
        remedy="" if band <= kept else f"a transmission {band / kept:.3g} times as stiff, or less break-away friction",
    )


def _presliding(axis: CompletedAxis) -> tuple[Check, ...]:
    name = "Hunting at rest"
    if axis.stated.rotary or axis.stated.window.position >= PRESLIDING_WINDOW or axis.breakaway == 0.0:
        return ()
    reason = "the window is below 20 µm and the elastic motion of the guides before they slide is not modelled yet"
    return (Check("hunting", name, "not evaluated", SOURCE, reason=reason),)


def corner_in_words(corner: Mapping[str, float]) -> str:
    """A corner as a reader says it: "at load mass +5 %, friction -40 %"."""
    if not corner:
        return "on the nominal axis"
    return "at " + ", ".join(f"{name.replace('_', ' ')} {share * 100:+.3g} %" for name, share in corner.items())
