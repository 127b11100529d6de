"""The rows that the sheet and the screens show, each made in one place from a study."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable
from dataclasses import dataclass
from typing import TYPE_CHECKING

from axis.description.drive import Drive
from axis.description.motor import Motor
from axis.description.moves import Move, Window
from axis.settling.verdict import MoveVerdict, corner_in_words
from axis.sheet.shown import NOTHING, check_numbers, in_unit, length_text, percent, quantity_text, time_text
from axis.simulation.record import MoveOutcome
from axis.study import Study
from axis.units import digits_of
from axis.verdicts import Check, Verdict

if TYPE_CHECKING:  # sizing alone loads neither the loops nor the compiler
    from axis.loops.margins import Margins
    from axis.tuning.result import Reference

PRELIMINARY = "preliminary, to be verified on the machine"
_ORDER: dict[Verdict, int] = {"fail": 0, "not evaluated": 1, "pass": 2, "not applicable": 3}


@dataclass(frozen=True)
class CheckRow:
    """One check as it is shown."""

    id: str
    name: str
    demand: str
    limit: str
    margin: float | None  # [1] share of the limit that is left
    margin_text: str
    verdict: Verdict
    reason: str
    remedy: str
    source: str


@dataclass(frozen=True)
class FigureRow:
    """One figure of a move on the nominal axis and at its worst corner."""

    name: str
    nominal: str
    worst: str


@dataclass(frozen=True)
class MoveRows:
    """The verdict of one move."""

    number: int
    title: str
    verdict: Verdict
    sentence: str
    worst_corner: str
    figures: tuple[FigureRow, ...]
    checks: tuple[CheckRow, ...]


@dataclass(frozen=True)
class MarginRow:
    """One stability margin: what is asked, what the settings have, what the textbook settings have."""

    name: str
    asked: str
    found: str
    textbook: str
    holds: bool


@dataclass(frozen=True)
class ComparisonRow:
    """One figure of the settings beside the textbook's."""

    name: str
    here: str
    textbook: str


def check_rows(checks: Iterable[Check], rotary: bool) -> tuple[CheckRow, ...]:
    """The checks as rows: what fails, what could not be evaluated, then the tightest first."""

    def place(check: Check) -> tuple[int, float]:
        return _ORDER[check.verdict], math.inf if check.margin is None else check.margin

    rows = []
    for check in sorted(checks, key=place):
        demand, limit = check_numbers(check, rotary)
        rows.append(
            CheckRow(
                check.id, check.name, demand, limit, check.margin, percent(check.margin), check.verdict, check.reason,
                check.remedy, check.source,
            )
        )  # fmt: skip
    return tuple(rows)


def demand_rows(study: Study) -> tuple[tuple[str, str], ...]:
    """What one cycle of the nominal axis asks: words and figure."""
    if study.sizing is None:
        return ()
    asked = study.sizing.demand
    rows = [
        ("peak torque", quantity_text(asked.peak_torque, Motor, "peak_torque")),
        ("RMS torque", quantity_text(asked.rms_torque, Motor, "peak_torque")),
        ("peak speed", quantity_text(asked.peak_speed, Motor, "max_speed")),
        ("mean speed", quantity_text(asked.mean_speed, Motor, "max_speed")),
        ("peak current (rms)", quantity_text(asked.peak_current / math.sqrt(2.0), Drive, "peak_current")),
        ("RMS current", quantity_text(asked.rms_current / math.sqrt(2.0), Drive, "peak_current")),
        ("cycle", in_unit(asked.cycle_time, "s")),
        ("inertia ratio", in_unit(asked.inertia_ratio, "1")),
        ("returned energy a cycle", in_unit(asked.regenerated_energy, "J")),
    ]
    if asked.winding_temperature is not None:
        temperature = quantity_text(asked.winding_temperature, Motor, "max_winding_temperature")
        rows.append(("winding temperature", temperature))
    return tuple(rows)


def headline(study: Study) -> str:
    """The verdict of the whole in one or two sentences."""
    if study.unevaluated:
        return study.unevaluated
    if study.settled is None:
        return "The settling has not been computed." if study.sizing is not None else "Nothing has been computed yet."
    settled, rotary = study.settled, study.axis.stated.rotary
    window = f"±{length_text(study.axis.stated.window.position, rotary)}"
    slowest = max(settled.moves, key=lambda move: move.worst.settling_time)
    failing = max(move.failing_corners for move in settled.moves)
    if failing:
        text = f"A move misses what it owes at {failing} of {settled.corners} computed corners."
    elif math.isinf(slowest.worst.time_to_window):
        text = f"The load does not come to rest inside {window}."
    else:
        text = (
            f"The load comes to rest inside {window} {_everywhere(settled.corners)}, at the latest "
            f"{_beside_the_end(slowest.worst.settling_time)}."
        )
    missed = [check for check in _all_checks(study) if check.verdict == "fail"]
    open_ = [check for check in _all_checks(study) if check.verdict == "not evaluated"]
    if missed:
        text += f" {_count(len(missed), 'check')} failed: {'; '.join(check.name for check in missed[:3])}" + (
            "; and others." if len(missed) > 3 else "."
        )
    if open_:
        text += f" {_count(len(open_), 'check')} could not be evaluated."
    return text


def _everywhere(corners: int) -> str:
    return (
        f"at all {corners} computed corners" if corners > 1 else "on the nominal axis, of which no tolerance is stated"
    )


def move_rows(study: Study) -> tuple[MoveRows, ...]:
    """The verdict of every move, nominal and at its worst corner."""
    if study.settled is None:
        return ()
    return tuple(_one_move(study, move, study.settled.corners) for move in study.settled.moves)


def _one_move(study: Study, move: MoveVerdict, corners: int) -> MoveRows:
    stated = study.document.axis.moves[move.number - 1]
    rotary = study.axis.stated.rotary
    distance = quantity_text(study.axis.moves[move.number - 1].distance, Move, "distance", rotary)
    kept = corners - move.failing_corners
    return MoveRows(
        number=move.number,
        title=f"Move {move.number}: {distance}" + (f", {stated.payload}" if stated.payload else ""),
        verdict=move.verdict,
        sentence=f"keeps what it owes at {kept} of {_count(corners, 'computed corner')}",
        worst_corner=corner_in_words(move.worst_corner),
        figures=tuple(_figures(move.nominal, move.worst, rotary)),
        checks=check_rows(move.checks, rotary),
    )


def _figures(nominal: MoveOutcome, worst: MoveOutcome, rotary: bool) -> Iterable[FigureRow]:
    def both(name: str, text: Callable[[MoveOutcome], str]) -> FigureRow:
        return FigureRow(name, text(nominal), text(worst))

    def after(time: float, outcome: MoveOutcome) -> str:
        return time_text(time - outcome.commanded_end)

    yield both("Commanded end", lambda o: in_unit(o.commanded_end, "s", 4))
    yield both("Load settled, after the commanded end", lambda o: after(o.time_to_window, o))
    yield both("In-position signal, after the commanded end", lambda o: after(o.signal, o))
    yield both("Observed after the commanded end", lambda o: after(o.observed, o))
    yield both("Overshoot of the load", lambda o: length_text(o.overshoot, rotary))
    yield both("Rest error of the load", lambda o: length_text(o.rest_error, rotary))
    yield both("Largest following error", lambda o: quantity_text(o.following_error, Window, "following_error", rotary))
    yield both("Peak torque of the motor", lambda o: quantity_text(o.peak_torque, Motor, "peak_torque"))
    yield both("Peak current, rms", lambda o: quantity_text(o.peak_current / math.sqrt(2.0), Drive, "peak_current"))
    yield both(
        "Time at the current / voltage limit",
        lambda o: f"{time_text(o.current_saturated)} / {time_text(o.voltage_saturated)}",
    )


def margins_of(study: Study) -> Margins | None:
    """The smallest margins over the corners, of the settings in force; None without settings."""
    if study.tuned is not None:
        return study.tuned.result.margins
    loops = study.document.axis.loops
    if loops is None:
        return None
    from axis.tuning.reference import smallest_margins

    return smallest_margins(study.axis, loops)[0]


def margin_rows(study: Study) -> tuple[MarginRow, ...]:
    """The margins at the corner where each is smallest, with what `[tuning]` asks."""
    found, asked = margins_of(study), study.axis.stated.tuning
    if found is None:
        return ()
    from axis.loops.margins import LIMIT_dB

    textbook = study.tuned.textbook.margins if study.tuned is not None else None

    def decibel(value: float) -> str:
        return f"> {LIMIT_dB:g} dB" if math.isinf(value) else in_unit(value, "dB")

    def degrees(value: float) -> str:
        return "> 180 °" if math.isinf(value) else in_unit(value, "deg")

    def one(name: str, least: str, text: Callable[[float], str], field: str, holds: bool) -> MarginRow:
        beside = NOTHING if textbook is None else text(getattr(textbook, field))
        return MarginRow(name, least, text(getattr(found, field)), beside, holds)

    phase = math.degrees(asked.phase_margin)
    return (
        one("Gain margin upwards", f"≥ {asked.gain_margin_up:g} dB", decibel, "gain_margin_up_dB",
            found.gain_margin_up_dB >= asked.gain_margin_up),
        one("Gain margin downwards", f"≥ {asked.gain_margin_down:g} dB", decibel, "gain_margin_down_dB",
            found.gain_margin_down_dB >= asked.gain_margin_down),
        one("Phase margin", f"≥ {phase:.3g} °", degrees, "phase_margin_deg", found.phase_margin_deg >= phase),
        one("Peak of the sensitivity", f"≤ {asked.peak_sensitivity:g}", lambda value: in_unit(value, "1"),
            "peak_sensitivity", found.peak_sensitivity <= asked.peak_sensitivity),
    )  # fmt: skip


def comparison_rows(study: Study) -> tuple[ComparisonRow, ...]:
    """The settings beside the textbook's, and both beside what the rigid axis could do at best."""
    if study.tuned is None:
        return ()
    tuned, corners = study.tuned, study.tuned.result.settled.corners

    def seconds(value: float) -> str:
        return "never" if math.isinf(value) else in_unit(value, "s")

    def failing(reference: Reference) -> str:
        return f"{max(move.failing_corners for move in reference.settled.moves)} of {corners}"

    return (
        ComparisonRow(
            "Time to window from the first sample, all moves, each at its worst corner",
            seconds(tuned.result.worst_time),
            seconds(tuned.textbook.worst_time),
        ),
        ComparisonRow("Corners at which a move misses what it owes", failing(tuned.result), failing(tuned.textbook)),
        ComparisonRow("Fastest the rigid axis could be, within the stated limits", seconds(tuned.bound), NOTHING),
        ComparisonRow("The same within what motor and drive can do", seconds(tuned.machine_bound), NOTHING),
    )


def path_rows(study: Study) -> tuple[tuple[str, str, str], ...]:
    """The path of the tuning: step, time to window at the worst corner, corners that miss."""
    if study.tuned is None:
        return ()
    return tuple(
        (
            step.name,
            "never" if step.failing_corners and math.isinf(step.worst_time) else in_unit(step.worst_time, "s"),
            f"{step.failing_corners} corners miss" if step.failing_corners else "every corner holds",
        )
        for step in study.tuned.path
    )


def limit_sentences(study: Study) -> tuple[str, ...]:
    """What the figures of this study do not say."""
    sentences = []
    if study.settled is not None:
        corners = study.settled.corners
        sentences.append(
            f"{corners} corners of the tolerances were simulated, the nominal axis among them. Passing at all of them "
            "is no guarantee for every value between or beyond them."
            if corners > 1
            else "Only the nominal axis was simulated: no [tolerance] is stated, and no machine is nominal."
        )
        if not study.settled.repeated:
            sentences.append(
                "At some corner the cycle did not repeat itself within 1 % of the window; the worst of its last five "
                "counts."
            )
    open_ = [check for check in _all_checks(study) if check.verdict == "not evaluated"]
    if open_:
        sentences.append(f"Not evaluated, for want of data: {'; '.join(check.name for check in open_)}.")
    sentences += [f"{warning}." for warning in study.axis.warnings]
    if study.tuned is not None and study.tuned.reason:
        sentences.append(f"The search found no settings that hold everything: {study.tuned.reason}.")
    sentences.append(
        "The simulated axis has two inertias on one spring, friction, sampling, delays and the limits of the drive. It "
        "has no frame on its feet, no guide that gives before it slides, no cogging and no winding that warms up."
    )
    return tuple(sentences)


def _all_checks(study: Study) -> tuple[Check, ...]:
    sized = study.sizing.checks if study.sizing is not None else ()
    settled = study.settled.all_checks if study.settled is not None else ()
    return (*sized, *settled)


def _beside_the_end(settling_time: float) -> str:
    side = "after" if settling_time >= 0.0 else "before"
    return f"{time_text(abs(settling_time))} {side} the commanded end"


def _count(n: int, word: str) -> str:
    return f"{digits_of(n, 6)} {word}" + ("s" if n != 1 else "")
