"""Catalogue tables: CSV with a unit in every header, as spreadsheets write it; bad rows are told, never guessed."""

from __future__ import annotations

import csv
import difflib
import re
from collections import Counter
from collections.abc import Callable
from dataclasses import dataclass, replace
from pathlib import Path
from typing import Any

from axis.description.drive import Drive
from axis.description.motor import BASES, Motor
from axis.description.transmission import Gearbox
from axis.description.validation import drive_problems, gearbox_problems, motor_problems
from axis.errors import InputError, Problem
from axis.files.guard import as_text, digest_of, read_bytes
from axis.files.walker import Walker
from axis.units import Plain, Quantity, declarations, parse, quoted

LARGEST_TABLE = 4_000_000  # [byte]
_LONGEST_LINE = 5000
_MOST_ROWS = 20_000
_HEADER = re.compile(r"([A-Za-z_]{1,60})\s*(?:\[([^\]]{0,40})\])?")
_POINT = re.compile(r"[+-]?[0-9]*\.?[0-9]+(?:[eE][+-]?[0-9]{1,3})?|[+-]?[0-9]+\.")
_COMMA = re.compile(r"[+-]?[0-9]*,[0-9]+(?:[eE][+-]?[0-9]{1,3})?")
_FLAGS = {"true": True, "yes": True, "false": False, "no": False}


@dataclass(frozen=True)
class Kind:
    """What a table holds: the file's name, the dataclass of a row, and the rules of one row."""

    name: str
    file: str
    holds: Any
    rules: Callable[[Any, str], list[Problem]]
    bases: dict[str, tuple[str, ...]]


KINDS = {
    "motor": Kind("motor", "motors.csv", Motor, motor_problems, BASES),
    "drive": Kind(
        "drive",
        "drives.csv",
        Drive,
        drive_problems,
        {"current_basis": ("continuous_current", "peak_current", "standstill_current")},
    ),
    "gearbox": Kind("gearbox", "gearboxes.csv", Gearbox, gearbox_problems, {}),
}


@dataclass(frozen=True)
class Part:
    """One readable row: as raw values of an axis file (`"2.4 N*m"`, 4, "rms") and as the description of the part."""

    name: str
    table: str  # file name
    line: int
    values: dict[str, Any]
    stated: Any  # Motor, Drive or Gearbox


@dataclass(frozen=True)
class Table:
    """One table as read: its cells by row, with the problems of the table as a whole."""

    path: Path
    kind: Kind
    digest: str
    columns: tuple[tuple[str, str, str], ...]  # header as written, key, unit
    rows: tuple[tuple[int, tuple[str, ...]], ...]  # line, cells
    decimal_comma: bool
    problems: tuple[Problem, ...]
    names: tuple[str, ...]  # of every row, readable or not


def shipped_folder() -> Path:
    """The demonstration catalogues: inside the installed package, or at the top of a checkout."""
    package = Path(__file__).resolve().parent.parent
    inside = package / "catalog_demo"
    return inside if inside.is_dir() else package.parent / "catalog_demo"


def tables(kind: str, beside: Path | None, folder: Path | None) -> list[Table]:
    """The tables of a kind in the order in which they are asked: beside the axis file, in `folder`, shipped."""
    if folder is not None and not folder.is_dir():
        raise InputError([Problem(str(folder), "is no folder; catalogues are tables in a folder")])
    found: list[Table] = []
    for place in (beside, folder, shipped_folder()):
        path = place / KINDS[kind].file if place is not None else None
        if path is not None and path.exists() and path.resolve() not in [t.path.resolve() for t in found]:
            found.append(read_table(path, kind))
    return found


def find(kind: str, name: str, among: list[Table]) -> tuple[Table, Part]:
    """The first row of that name; InputError with the nearest name, or with what is wrong in its row."""
    for table in among:
        if name in table.names:
            if table.problems:
                raise InputError(table.problems)
            return table, part(table, name)
    known = [row for table in among for row in table.names]
    near = difflib.get_close_matches(name, known, n=1, cutoff=0.4)
    rule = f"names no row of a {kind} catalogue" + (f'; did you mean "{near[0]}"?' if near else "")
    where = f"a row of {KINDS[kind].file} beside the axis file, or --catalogue FOLDER"
    raise InputError([Problem("use", rule, quoted(name), f'use = "{near[0]}"' if near else where)])


def parts(table: Table) -> tuple[list[Part], list[Problem]]:
    """Every readable row, and what is wrong with the others by line and column."""
    if table.problems:
        return [], list(table.problems)
    good: list[Part] = []
    bad: list[Problem] = []
    for line, cells in table.rows:
        try:
            good.append(_row(table, line, cells))
        except InputError as error:
            bad += error.problems
    return good, bad


def part(table: Table, name: str) -> Part:
    """The row of that name; InputError with what is wrong in it."""
    return _row(table, *table.rows[table.names.index(name)])


def read_table(path: Path, kind: str) -> Table:
    """Read one table; what is wrong with the table as a whole is in `problems`, and then none of its rows is used."""
    what = f"a catalogue of {kind}s" if kind != "gearbox" else "a catalogue of gearboxes"
    data = read_bytes(path, LARGEST_TABLE, what)
    text = as_text(data, path.name, LARGEST_TABLE, what, _LONGEST_LINE)
    delimiter, (head, *body) = _lines(text, path)
    columns, problems = _columns(KINDS[kind], path.name, head)
    numbers = [n for n, (_, key, _) in enumerate(columns) if _is_number(KINDS[kind], key)]
    decimal_comma = delimiter != "," and any(
        _COMMA.fullmatch(cells[n].strip()) for _, cells in body for n in numbers if n < len(cells)
    )
    at = [key for _, key, _ in columns].index("name")
    names = tuple(cells[at].strip() if at < len(cells) else "" for _, cells in body)
    for name, count in Counter(names).items():
        if name and count > 1:
            lines = " and ".join(str(line) for (line, _), other in zip(body, names, strict=True) if other == name)
            problems.append(Problem(f"{path.name} lines {lines}"[:200], "have the same name", quoted(name)))
    return Table(path, KINDS[kind], digest_of(data), columns, tuple(body), decimal_comma, tuple(problems), names)


def _lines(text: str, path: Path) -> tuple[str, list[tuple[int, tuple[str, ...]]]]:
    """What parts the cells, as the header shows, and (line, cells) of each line that is no comment and not empty."""
    first = next((line for line in text.splitlines() if line.strip() and not line.lstrip().startswith("#")), "")
    delimiter = max((";", "\t", ","), key=first.count)
    reader = csv.reader(text.splitlines(keepends=True), delimiter=delimiter, strict=True)
    found: list[tuple[int, tuple[str, ...]]] = []
    try:
        for cells in reader:
            if any(cell.strip() for cell in cells) and not cells[0].lstrip().startswith("#"):
                found.append((reader.line_num, tuple(cells)))
            if len(found) > _MOST_ROWS:
                raise InputError([Problem(path.name, f"has more than {_MOST_ROWS} rows")])
    except csv.Error as error:
        raise InputError([Problem(f"{path.name} line {reader.line_num}", f"is not CSV ({error})")]) from None
    return delimiter, found or [(1, ())]


def _columns(
    kind: Kind, name: str, head: tuple[int, tuple[str, ...]]
) -> tuple[tuple[tuple[str, str, str], ...], list[Problem]]:
    line, cells = head
    known = {key: value for key, value in declarations(kind.holds).items() if key not in ("use", "kind")}
    columns: list[tuple[str, str, str]] = []
    problems: list[Problem] = []
    for number, cell in enumerate(cells, start=1):
        header = cell.strip()
        found = _HEADER.fullmatch(header)
        key, unit = (found.group(1), (found.group(2) or "").strip()) if found else (header, "")
        columns.append((header or f"number {number}", "" if header.startswith("#") else key, unit))
        if not header or header.startswith("#") or key == "name":
            continue
        rule, right = _header_rule(known, key, unit)
        if key in [other for _, other, _ in columns[:-1]]:
            rule, right = "stands twice", ""
        if rule:
            problems.append(Problem(f"{name} line {line}, column {number}", rule, quoted(header), right))
    if "name" not in [key for _, key, _ in columns]:
        problems.append(Problem(f"{name} line {line}", "has no column of names", example='a first column "name"'))
        columns.append(("name", "name", ""))
    return tuple(columns), problems


def _header_rule(known: dict[str, Quantity | Plain], key: str, unit: str) -> tuple[str, str]:
    declared = known.get(key)
    if declared is None:
        near = difflib.get_close_matches(key, known, n=1)
        return "is no known column" + (f'; did you mean "{near[0]}"?' if near else ""), (
            'a column for people only starts with "#"' if not near else near[0]
        )
    if isinstance(declared, Plain):
        return ("takes no unit", key) if unit not in ("", "1", "-") else ("", "")
    right = f'"{key} [{declared.shown or declared.unit}]"'
    if not unit:
        return "has no unit in its header", right
    try:
        parse(f"1 {unit}", replace(declared, above=None, at_least=None, below=None, at_most=None))
    except InputError as error:
        return error.problems[0].rule, right
    return "", ""


def _row(table: Table, line: int, cells: tuple[str, ...]) -> Part:
    """One row, or InputError with the problems of all its cells."""
    where = f"{table.path.name} line {line}"
    while len(cells) > len(table.columns) and not cells[-1].strip():
        cells = cells[:-1]
    if len(cells) != len(table.columns):
        rule = f"has {len(cells)} cells where the header has {len(table.columns)}"
        raise InputError([Problem(where, rule)])
    problems: list[Problem] = []
    values: dict[str, Any] = {}
    headers = {key: f"{where}, column {header}" for header, key, _ in table.columns}
    name = ""
    for (_, key, unit), cell in zip(table.columns, cells, strict=True):
        text = cell.replace("\u00a0", " ").strip()
        if key == "name":
            name = text
        elif key and text:
            rule, values[key] = _cell(table, key, unit, text)
            if rule:
                problems.append(Problem(headers[key], rule, quoted(text)))
                del values[key]
    if not name:
        problems.append(Problem(headers["name"], "is missing"))
    walker = Walker(rotary=False)
    stated = walker.table(table.kind.holds, values, "")
    found = walker.problems if walker.problems or problems else table.kind.rules(stated, "")
    problems += [replace(p, path=headers.get(p.path.strip("."), f"{where}, {p.path.strip('.')}")) for p in found]
    if problems:
        raise InputError(problems)
    return Part(name, table.path.name, line, values, stated)


def _is_number(kind: Kind, key: str) -> bool:
    declared = declarations(kind.holds).get(key)
    return isinstance(declared, Quantity) or (isinstance(declared, Plain) and declared.kind in ("count", "ratio"))


def _cell(table: Table, key: str, unit: str, text: str) -> tuple[str, Any]:
    """(rule that is broken, or ""; raw value as an axis file would hold it) of one cell that is not empty."""
    declared = declarations(table.kind.holds)[key]
    if not _is_number(table.kind, key):
        flag = isinstance(declared, Plain) and declared.kind == "flag"
        return ("", _FLAGS.get(text.lower(), text)) if flag else ("", text)
    if not (_COMMA if table.decimal_comma and "," in text else _POINT).fullmatch(text):
        return "is not one plain number", text
    if table.decimal_comma and "." in text:
        return "has a decimal point in a table of decimal commas", text
    number = text.replace(",", ".")
    if isinstance(declared, Quantity):
        return "", f"{number} {unit}"
    if declared.kind == "count":
        whole = re.fullmatch(r"[+-]?[0-9]{1,15}", number)
        return ("", int(number)) if whole else ("is not a whole number", text)
    return "", float(number)
