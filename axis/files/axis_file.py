"""The axis file: TOML text → a `Document` that holds the stated axis and remembers how each value was typed."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Callable
from dataclasses import dataclass, replace
from pathlib import Path
from typing import Any

from axis.description.axis import Axis
from axis.description.validation import problems_in
from axis.errors import InputError, Problem
from axis.files.catalogue import KINDS, find, tables
from axis.files.guard import as_text, digest_of, read_bytes
from axis.files.walker import Walker
from axis.units import quoted

FORMAT = 1
LARGEST_FILE = 256_000  # [byte] over a thousand moves; keys that hurt tomllib hurt for long in a larger one
_DEEPEST_KEY = 8
_WHAT = "an axis file"


@dataclass(frozen=True)
class Document:
    """An axis file as read. Paths are written as in messages: `load.mass`, `move[1].distance`."""

    text: str
    axis: Axis
    typed: dict[str, str]  # path → value as typed
    from_catalogue: dict[str, str]  # path → "motors.csv: DM-071-30"
    digest: str  # sha256 of the file's bytes
    catalogue_digests: dict[str, str]  # table → sha256, of the tables that gave a value
    path: Path | None = None
    base_folder: Path | None = None
    catalogues: Path | None = None

    def with_value(self, path: str, text: str) -> Document:
        """The document after one value was typed anew ("" takes the key out); comments and order stay."""
        from axis.files.write import with_value  # tomlkit is wanted for edits only

        return self.with_text(with_value(self.text, path, text))

    def with_text(self, text: str) -> Document:
        """The document after its text was edited; the digest stays that of the file on disk."""
        new = read_text(text, self.base_folder, self.catalogues, self.path.name if self.path else "axis file")
        return replace(new, path=self.path, digest=self.digest)


Rules = Callable[[Axis], list[Problem]]  # what is wrong with a walked axis; unreadable values in it are NaN or None


def read(path: Path | str, catalogues: Path | str | None = None, further: Rules = lambda axis: []) -> Document:
    """Read an axis file; InputError with everything that is wrong in it, `further` rules among them."""
    file = Path(path)
    data = read_bytes(file, LARGEST_FILE, _WHAT)
    text = as_text(data, file.name, LARGEST_FILE, _WHAT)
    folder = Path(catalogues) if catalogues is not None else None
    document = read_text(text, file.parent, folder, file.name, further)
    return replace(document, path=file, digest=digest_of(data))


def read_text(
    text: str,
    base_folder: Path | None = None,
    catalogues: Path | None = None,
    name: str = "axis file",
    further: Rules = lambda axis: [],
) -> Document:
    """The same from a text; `base_folder` is where its catalogues may lie beside it."""
    data = text.encode("utf-8", errors="surrogatepass")
    raw = _toml(as_text(data, name, LARGEST_FILE, _WHAT), name)
    order = _paths(raw)
    rotary = isinstance(raw.get("axis"), dict) and raw["axis"].get("travel") == "rotary"
    walker = Walker(rotary)
    walker.problems += _format(raw.pop("format", None))
    origins, digests, in_vain = _fill_from_catalogues(raw, base_folder, catalogues, walker)
    axis: Axis = walker.table(Axis, raw, "")
    for rules in (lambda axis: problems_in(vars(axis)), further):
        told = {problem.path for problem in walker.problems}
        for problem in rules(axis):
            if problem.path not in told and not problem.path.startswith(tuple(f"{path}." for path in in_vain)):
                walker.problems.append(replace(problem, value=_as_typed(walker.typed, problem)))
    if walker.problems:
        raise InputError(sorted(walker.problems, key=lambda p: _place(p.path, order)))
    typed = {path: value for path, value in walker.typed.items() if path not in origins}
    return Document(text, axis, typed, origins, digest_of(data), digests, None, base_folder, catalogues)


def _toml(text: str, name: str) -> dict[str, Any]:
    """TOML with its errors as one sentence; lines that would keep the parser busy are refused first."""
    for number, line in enumerate(text.split("\n"), start=1):
        key = line.partition("=")[0]
        if not line.lstrip().startswith("#") and key.count(".") > _DEEPEST_KEY:
            rule = f"has a key of more than {_DEEPEST_KEY} parts"
            raise InputError([Problem(f"{name} line {number}", rule, example="friction.coulomb")])
    try:
        return tomllib.loads(text)
    except (ValueError, RecursionError) as error:  # an integer of 100,000 digits is a ValueError of its own
        message = str(error) if isinstance(error, tomllib.TOMLDecodeError) else "it is nested or long beyond reason"
        found = re.search(r"\(at line (\d+), column \d+\)", message)
        line = text.split("\n")[int(found.group(1)) - 1].strip() if found else ""
        where = f"{name} line {found.group(1)}" if found else name
        reason = message.partition(" (at ")[0]
        right = 'mass = "38 kg", a quantity in quotes'
        raise InputError([Problem(where, f"is not TOML: {reason}", quoted(line) if line else "", right)]) from None


def _format(raw: Any) -> list[Problem]:
    if raw is None:
        return [Problem("format", "is missing", example=f"format = {FORMAT}")]
    if isinstance(raw, int) and not isinstance(raw, bool) and raw == FORMAT:
        return []
    return [Problem("format", "is not a format this version reads", quoted(str(raw)).strip('"'), f"format = {FORMAT}")]


def _fill_from_catalogues(
    raw: dict[str, Any], beside: Path | None, folder: Path | None, walker: Walker
) -> tuple[dict[str, str], dict[str, str], list[str]]:
    """Put the row that `use` names under the keys beside it: path → origin, table → digest, paths in vain."""
    origins: dict[str, str] = {}
    digests: dict[str, str] = {}
    in_vain: list[str] = []
    for kind, path, own in _users(raw):
        try:
            table, part = find(kind, own["use"], tables(kind, beside, folder))
        except InputError as error:
            walker.problems += [replace(p, path=f"{path}.use" if p.path == "use" else p.path) for p in error.problems]
            in_vain.append(path)
            continue
        row = _row_beside(part.values, own, KINDS[kind].bases)
        taken = {key: value for key, value in row.items() if key not in own}
        own.update(taken)
        origins |= {f"{path}.{key}": f"{part.table}: {part.name}" for key in taken}
        digests[table.path.name] = table.digest
    return origins, digests, in_vain


def _users(raw: dict[str, Any]) -> list[tuple[str, str, dict[str, Any]]]:
    """(kind of catalogue, path, table) of everything that names a row."""
    stages = raw.get("transmission")
    parts: list[tuple[str, str, Any]] = [(kind, kind, raw.get(kind)) for kind in ("motor", "drive")]
    for n, stage in enumerate(stages if isinstance(stages, list) else [], start=1):
        if isinstance(stage, dict) and stage.get("kind") == "gearbox":
            parts.append(("gearbox", f"transmission[{n}]", stage))
    return [part for part in parts if isinstance(part[2], dict) and isinstance(part[2].get("use"), str)]


def _row_beside(row: dict[str, Any], own: dict[str, Any], bases: dict[str, tuple[str, ...]]) -> dict[str, Any]:
    """What of a row stays valid beside the keys that override it: no value is read in the basis of another."""
    kept = dict(row)
    if "torque_constant_basis" in own and "torque_constant_basis" in row:
        kept.setdefault("current_basis", row["torque_constant_basis"])
    for basis, names in bases.items():
        if basis in own and own[basis] != row.get(basis):
            kept = {key: value for key, value in kept.items() if key not in names}
        elif basis not in own and any(name in own for name in names):
            kept.pop(basis, None)
    return kept


def _as_typed(typed: dict[str, str], problem: Problem) -> str:
    """The value of a problem as it stands in the file, where it does."""
    text = typed.get(problem.path)
    if text is None:
        return problem.value
    return text if re.fullmatch(r"[-+.0-9eE]+|true|false", text) else quoted(text)


def _paths(raw: Any, path: str = "") -> dict[str, int]:
    """Every path of the file → its place in the order of the file."""
    found: list[str] = []

    def walk(value: Any, here: str) -> None:
        found.append(here)
        if isinstance(value, dict):
            for key, inner in value.items():
                walk(inner, f"{here}.{key}" if here else key)
        elif isinstance(value, list):
            for n, inner in enumerate(value, start=1):
                walk(inner, f"{here}[{n}]")

    walk(raw, path)
    return {here: n for n, here in reversed(list(enumerate(found)))}


def _place(path: str, order: dict[str, int]) -> tuple[int, str]:
    """Where a problem belongs: at its own key, else with the nearest table above it, else at the end."""
    while path:
        if path in order:
            return order[path], ""
        path = re.sub(r"(\.|^)[^.\[]+$|\[\d+\]$", "", path)
    return len(order), path
