"""The axis as understood: every value as typed and as used, and where it comes from."""

from __future__ import annotations

import dataclasses
import math
import re
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any, Literal

from axis.completion import move_profile
from axis.description.drive import Drive
from axis.description.motor import BASES, Motor
from axis.description.settings import TorqueFilter
from axis.description.wishes import Tolerance
from axis.mechanics.compliance import antiresonance, resonance
from axis.sheet.shown import declared, in_unit
from axis.study import Study
from axis.units import Plain, Quantity, digits_of, pretty, show
from axis.verdicts import Assumption

Origin = Literal["stated", "catalogue", "assumed", "computed"]

_DRIVE_BASES = {"current_basis": ("continuous_current", "peak_current", "standstill_current")}
# The parts of the axis file in the order in which they are shown: what is asked, then the chain from load to drive.
_TITLES = {
    "axis": "Axis",
    "window": "Window",
    "move": "Move",
    "tolerance": "Tolerances",
    "tuning": "Asked of the tuning",
    "load": "Load",
    "payload": "Payload",
    "transmission": "Transmission, stage",
    "motor": "Motor",
    "drive": "Drive",
}
_SKIPPED = ("kind", "name")  # they stand in the titles


@dataclass(frozen=True)
class ValueRow:
    """One value: its words, as typed ("" where it was not), as used, and where it comes from."""

    path: str  # as in the axis file; "" where it is computed
    name: str
    typed: str
    value: str
    origin: Origin
    note: str = ""  # row of a catalogue, or why a value was assumed
    echo: str = ""  # the typed text where it reads differently from the value as used


@dataclass(frozen=True)
class ValueGroup:
    """The values of one part of the axis."""

    title: str
    rows: tuple[ValueRow, ...]


def understood(study: Study) -> tuple[ValueGroup, ...]:
    """The axis as understood, part by part, then what follows from it."""
    assumed = {one.path: one for one in study.axis.assumptions}
    stated = study.document.axis
    parts = {f.metadata.get("key", f.name): getattr(stated, f.name) for f in dataclasses.fields(stated)}
    groups = []
    for key in _TITLES:
        part = parts[key]
        several = isinstance(part, tuple)
        for n, one in enumerate(part if several else (part,), start=1):
            path = f"{key}[{n}]" if several else key
            rows = tuple(_rows(study, one, path, assumed))
            groups.append(ValueGroup(_title(key, one, n if several else None), rows))
        if key in assumed and several:
            groups.append(ValueGroup(_TITLES[key], (_whole(assumed[key]),)))
    return (*groups, ValueGroup("Computed from it", tuple(_computed(study))))


def _title(key: str, part: Any, n: int | None) -> str:
    title = _TITLES[key] if n is None else f"{_TITLES[key]} {n}"
    kind = getattr(part, "kind", "") or (getattr(part, "name", "") if key == "payload" else "")
    return f"{title}: {kind.replace('_', ' ')}" if kind else title


def _rows(study: Study, part: Any, path: str, assumed: dict[str, Assumption]) -> Iterator[ValueRow]:
    holders = {**BASES} if isinstance(part, Motor) else {**_DRIVE_BASES} if isinstance(part, Drive) else {}
    basis_of = {name: basis for basis, names in holders.items() for name in names}
    for field in dataclasses.fields(part):
        declaration, here = field.metadata.get("declaration"), f"{path}.{field.metadata.get('key', field.name)}"
        value = getattr(part, field.name)
        if dataclasses.is_dataclass(value):
            yield from _rows(study, value, here, assumed)
        elif declaration is None:
            if here in assumed:
                yield _whole(assumed[here])
        elif here in assumed and value is None:
            yield _assumed(study, declaration, assumed[here])
        elif value is not None and not (field.name in (*holders, *_SKIPPED) or value is False or value == ()):
            basis = basis_of.get(field.name)
            yield _stated(study, declaration, here, value, getattr(part, basis) if basis else None, part)


def _stated(
    study: Study, declaration: Quantity | Plain, path: str, value: Any, basis: str | None, part: Any
) -> ValueRow:
    typed = study.document.typed.get(path, "")
    row = study.document.from_catalogue.get(path, "")
    origin: Origin = "catalogue" if row else "stated" if typed else "assumed"
    digits = 4 if row else max(3, _digits(typed))
    if isinstance(part, Tolerance):
        text = f"±{digits_of(100.0 * value, 3)} %" if value or typed else "none"
    else:
        text = _text(study, declaration, value, digits)
    echo = "" if not typed or _reads_as(typed, text) or isinstance(part, Tolerance) else typed
    return ValueRow(path, declaration.words, typed, text + (f" ({basis})" if basis else ""), origin, row, echo)


def _assumed(study: Study, declaration: Quantity | Plain, one: Assumption) -> ValueRow:
    text = _text(study, declaration, one.value, 3) if one.value is not None else ""
    # The reason often begins with the value in words; it already stands in the row.
    reason = re.sub(r"^[\d.e+-]+( [^\s,]+)?( = [^,]*)?(, |$)", "", one.text)
    return ValueRow(one.path, declaration.words, "", text or one.text, "assumed", reason if text else "")


def _whole(one: Assumption) -> ValueRow:
    """An assumption about a whole part, which has no single value."""
    return ValueRow(one.path, one.path.rpartition(".")[2].capitalize(), "", one.text, "assumed")


def _text(study: Study, declaration: Quantity | Plain, value: Any, digits: int) -> str:
    if isinstance(declaration, Quantity):
        return show(float(value), declaration, study.document.axis.rotary, digits)
    if isinstance(value, tuple):
        return ", ".join(value)
    return digits_of(value, digits) if isinstance(value, float) else str(value).replace("_", " ")


def _reads_as(typed: str, text: str) -> bool:
    def plain(one: str) -> str:
        return pretty(one).replace("_", " ").replace(" ", "")

    return plain(typed) == plain(text)


def _digits(typed: str) -> int:
    """Significant digits of a typed number, so that what is echoed is not rounded below what was said."""
    number = re.match(r"[+-]?([\d.]+)", typed.strip())
    return len(number.group(1).replace(".", "").lstrip("0")) if number else 3


def _computed(study: Study) -> Iterator[ValueRow]:
    def row(name: str, value: str) -> ValueRow:
        return ValueRow("", name, "", value, "computed")

    axis = study.axis
    if axis.stated.rotary:
        yield row("Motor revolutions per revolution of the load", in_unit(axis.ratio, "1"))
    else:
        yield row("Travel per motor revolution", in_unit(2e3 * math.pi / axis.ratio, "mm"))
    empty, full = axis.plant(), axis.plant(axis.heaviest_payload)
    inertia = declared(Motor, "inertia")
    yield row("Inertia at the motor shaft, empty axis, rotor included", show(empty.total_inertia, inertia))
    if full != empty:
        yield row("The same with the largest payload", show(full.total_inertia, inertia))
    if math.isfinite(axis.stiffness):
        hertz = declared(TorqueFilter, "frequency")
        swings = [antiresonance(one.stiffness, one.load_inertia) for one in (full, empty)]
        rings = [resonance(one.stiffness, one.motor_inertia, one.load_inertia) for one in (full, empty)]
        yield row("Antiresonance, largest payload to empty", _range([show(one, hertz) for one in swings]))
        yield row("Resonance, largest payload to empty", _range([show(one, hertz) for one in rings]))
    bus = sorted({axis.drive.bus_low, axis.drive.bus_nominal, axis.drive.bus_high})
    yield row("DC link, lowest to highest", _range([in_unit(volt, "V") for volt in bus]))
    yield row("Torque constant per ampere peak", in_unit(axis.motor.torque_constant, "N*m/A"))
    for n, move in enumerate(axis.moves, start=1):
        yield row(f"Duration of move {n} as commanded", in_unit(move_profile(move).duration, "s"))


def _range(texts: list[str]) -> str:
    return texts[0] if len(set(texts)) == 1 else f"{texts[0].rpartition(' ')[0]} … {texts[-1]}"
