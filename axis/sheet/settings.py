"""The settings as rows: words, symbol, number, unit and where each comes from."""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from axis.description.settings import Loops, TorqueFilter
from axis.loops.current import design_current_loop
from axis.sheet.shown import declared
from axis.study import Study
from axis.units import Plain, Quantity, digits_of, in_shown, pretty, shown_unit

DIGITS = 6  # a setting is a number to be typed in: it is not rounded for the eye
OPTIMUM = "modulus optimum from R, L and delay"
SEARCHED = "search, worst corner"
DESIGNED = "design; the search found nothing better"
TYPED = "as in the axis file"
_SAME = 1e-3  # relative difference below which a typed current loop is said to be the modulus optimum
_NOTES = {
    "current.kp": "phase, peak",
    "velocity.kp": "motor shaft",
}
_FILTERS = {"lowpass": "low-pass", "notch": "notch"}
_PARTS = {"frequency": "frequency", "width": "width", "depth": "gain left at the centre"}


@dataclass(frozen=True)
class SettingRow:
    """One number to be set in the drive."""

    path: str  # below [loops], e.g. "velocity.ti"
    name: str
    symbol: str
    value: str
    unit: str
    origin: str
    note: str = ""

    @property
    def text(self) -> str:
        return f"{self.value} {self.unit}".rstrip()


def setting_rows(study: Study) -> tuple[SettingRow, ...]:
    """The settings in force; none where the file has none and nothing was tuned."""
    loops = study.document.axis.loops
    return () if loops is None else tuple(_rows(study, loops))


def _rows(study: Study, loops: Loops) -> Iterator[SettingRow]:
    for loop in ("current", "velocity", "position", "feedforward"):
        part = getattr(loops, loop)
        for field in dataclasses.fields(part):
            path, declaration = f"{loop}.{field.name}", field.metadata["declaration"]
            value, unit = _number(declaration, getattr(part, field.name), False)
            origin = _origin(study, loops, path)
            symbol = declaration.symbol.replace("_", "")
            yield SettingRow(path, declaration.words, symbol, value, unit, origin, _NOTES.get(path, ""))
    for n, one in enumerate(loops.filters, start=1):
        yield from _filter(study, loops, one, n)
    rotary = study.document.axis.rotary
    for n, jerk in enumerate(loops.move_jerk or (), start=1):
        value, unit = _number(declared(Loops, "move_jerk"), jerk, rotary)
        path = f"move_jerk[{n}]"
        if study.axis.moves[n - 1].jerk is not None:
            yield SettingRow(path, f"Jerk limit of move {n}", "", value, unit, _origin(study, loops, path))


def _filter(study: Study, loops: Loops, one: TorqueFilter, n: int) -> Iterator[SettingRow]:
    for name, words in _PARTS.items():
        amount = getattr(one, name)
        if amount is not None:
            declaration = next(f for f in dataclasses.fields(one) if f.name == name).metadata["declaration"]
            value, unit = _number(declaration, amount, False)
            path = f"filters[{n}].{name}"
            title = f"Torque filter {n}, {_FILTERS[one.kind]}: {words}"
            yield SettingRow(path, title, "", value, unit, _origin(study, loops, path))


def _number(declaration: Quantity | Plain, value: Any, rotary: bool) -> tuple[str, str]:
    if isinstance(declaration, Plain):
        return digits_of(value, DIGITS), ""
    return digits_of(in_shown(value, declaration, rotary), DIGITS), pretty(shown_unit(declaration, rotary))


def _origin(study: Study, loops: Loops, path: str) -> str:
    """Where a setting comes from, in words."""
    current = path.startswith("current.")
    if study.tuned is None:
        return f"{TYPED}; equals the {OPTIMUM}" if current and _is_optimum(study, loops) else TYPED
    if current:
        return OPTIMUM
    found = SEARCHED if study.tuned.searched else DESIGNED
    if path == "velocity.filter":
        return "one velocity period"
    if path.startswith("move_jerk["):
        move = study.axis.moves[int(path.partition("[")[2].rstrip("]")) - 1]
        return found if move.jerk_open else "as stated for the move"
    return found


def _is_optimum(study: Study, loops: Loops) -> bool:
    motor = study.axis.motor
    designed = design_current_loop(motor.resistance, motor.saturated_inductance, study.axis.drive.rates)
    return math.isclose(designed.kp, loops.current.kp, rel_tol=_SAME) and math.isclose(
        designed.ti, loops.current.ti, rel_tol=_SAME
    )
