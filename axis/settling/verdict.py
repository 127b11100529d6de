"""The verdict: what each move owes, how it did at every computed corner, and in words why it failed."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

from axis.completion import CompletedAxis, at_corner
from axis.description.moves import Move, Window
from axis.settling.rest import rest_band
from axis.simulation.record import MoveOutcome, Outcome
from axis.units import Quantity, declarations, digits_of, in_shown, show, shown_unit
from axis.verdicts import Check, Verdict, worst

PRESLIDING_WINDOW = 20e-6  # [m] below it the elastic motion of guides before they slide decides whether the load hunts
BUCKET_RISE = 1e-9  # of its capacity a cycle
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
        checks=(
            *_stability(outcomes),
            *_bucket(outcomes),
            _rest_check(axis, [entry.corner for entry in outcomes]),
            *_presliding(axis),
        ),
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
        remedy="" if passes else _remedy(axis, rule, axis.moves[n].speed, move, demand),
    )


def _reason(rule: Rule, move: MoveOutcome, where: str) -> str:
    if rule.id == "settling" and math.isinf(move.time_to_window):
        return f"still outside at the end of the observation, {_ms(move.observed)}, {where}"
    if rule.id == "signal" and math.isinf(move.signal):
        return f"the signal never comes, {where}"
    if rule.id == "signal" and move.signal_early > 0:
        settled = f"the load has settled at {_ms(move.time_to_window)}"
        if math.isinf(move.time_to_window):
            settled = "the load never settles"
        return f"the signal comes at {_ms(move.signal)}, {settled}, {where}: that signal lies"
    if rule.id == "current_time" and move.tripped:
        return f"the bucket is full and the drive falls back to its continuous current, {where}"
    return f"worst {where}"


def _remedy(axis: CompletedAxis, rule: Rule, speed: float | None, move: MoveOutcome, demand: float) -> str:
    if rule.id == "signal":
        return _signal_remedy(axis, move)
    if rule.id == "settling" and math.isfinite(demand):
        return f"settings that settle faster (settlepoint tune), or settle_within = {_typed(axis, rule.id, demand)}"
    if rule.id == "settling":
        ends = _typed(axis, "position", abs(move.rest_error)).strip('"')
        return f"settings that bring the load to rest inside (settlepoint tune); it ends {ends} off"
    if rule.id in ("following_error", "overshoot"):
        if not math.isfinite(demand):
            return "settings under which the loop is stable (settlepoint tune)"
        key = "max_overshoot" if rule.id == "overshoot" else rule.id
        return f"settings that follow closer (settlepoint tune), a softer move, or {key} = {_typed(axis, key, demand)}"
    if rule.id == "speed":
        if speed is None or rule.limit is None or not math.isfinite(demand):
            return "a slower move"
        declared = declarations(Move)["speed"]
        assert isinstance(declared, Quantity)
        return (
            f"a speed of the move of at most {show(0.999 * speed * rule.limit / demand, declared, axis.stated.rotary)}"
        )
    return "a longer dwell or a lower acceleration, so that the drive's current-time limit is not reached"


def _signal_remedy(axis: CompletedAxis, move: MoveOutcome) -> str:
    if math.isinf(move.time_to_window):
        return "the load must settle first"
    if math.isinf(move.signal):
        return "settings that bring the motor to rest inside the window (settlepoint tune), or a shorter window time"
    return f"a longer window time: time = {_typed(axis, 'time', axis.stated.window.time + move.signal_early)}"


def _typed(axis: CompletedAxis, name: str, least: float) -> str:
    """A value of the window's field of that name as it is typed: three digits, none of them below `least`."""
    declared = declarations(Window)["settle_within" if name == "settling" else name]
    assert isinstance(declared, Quantity)
    number = in_shown(least, declared, axis.stated.rotary)
    if number != 0.0 and math.isfinite(number):
        step = 10.0 ** (math.floor(math.log10(abs(number))) - 2)
        number = math.ceil(number / step) * step
    return f'"{digits_of(number, 3)} {shown_unit(declared, axis.stated.rotary)}"'


def _ms(time: float) -> str:
    return f"{time * 1e3:.4g} ms"


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


def _bucket(outcomes: list[CornerOutcome]) -> tuple[Check, ...]:
    """A bucket that ends each cycle fuller than it began is full sooner or later, though no simulated cycle trips."""
    worst_corner = max(outcomes, key=lambda entry: entry.outcome.bucket_rise)
    if not worst_corner.outcome.bucket_rise > BUCKET_RISE:
        return ()
    reason = (
        f"it gains {worst_corner.outcome.bucket_rise * 100:.3g} % of its capacity with every cycle, "
        f"{corner_in_words(worst_corner.corner)}: it is full sooner or later"
    )
    remedy = "a longer dwell or a lower acceleration, so that the bucket empties within the cycle"
    return (
        Check(
            "current_time_cycle", "Current-time bucket over many cycles", "fail", SOURCE, reason=reason, remedy=remedy
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
        remedy="" if band <= kept else _rest_remedy(axis, band, kept),
    )


def _rest_remedy(axis: CompletedAxis, band: float, kept: float) -> str:
    times = math.ceil(band / kept * 100.0) / 100.0
    wider = _typed(axis, "position", axis.stated.window.position * band / kept)
    return f"a transmission {times:.4g} times as stiff, as much less break-away friction, or position = {wider}"


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
