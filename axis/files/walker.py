"""Raw tables of a file → dataclasses, led by their declarations; every error is collected with its path.

A value that cannot be read becomes NaN (or a neutral word) and its error is noted, so that the walk goes on and the
rules that compare values can still judge the rest; nothing built while there are problems leaves the room.
"""

from __future__ import annotations

import dataclasses
import difflib
import math
import types
import typing
from collections.abc import Iterable
from functools import lru_cache
from typing import Any

from axis.errors import InputError, Problem
from axis.units import Plain, Quantity, broken_bound, example, parse, quoted

LONGEST_NAME = 120
_LARGEST_NUMBER = 1e15
_KINDS: dict[str, tuple[type, ...]] = {"count": (int,), "ratio": (int, float), "flag": (bool,), "names": (list,)}
_WANTED = {
    "count": "a whole number without quotes",
    "ratio": "a plain number without quotes or unit",
    "flag": "true or false, without quotes",
    "names": "a list of words in quotes",
}
_NEUTRAL = {"count": math.nan, "ratio": math.nan, "flag": False, "names": ()}


@lru_cache(maxsize=64)
def type_hints(cls: Any) -> dict[str, Any]:
    """Field name → type, of a dataclass."""
    return typing.get_type_hints(cls)


@lru_cache(maxsize=64)
def keys_of(cls: Any) -> dict[str, dataclasses.Field[Any]]:
    """Key in the file → field, of a dataclass."""
    return {f.metadata.get("key", f.name): f for f in dataclasses.fields(cls)}


def classes_in(hint: Any) -> dict[str, Any]:
    """The dataclasses a field may hold, by the `kind` that picks one of several."""
    inner = typing.get_args(hint) if typing.get_origin(hint) in (tuple, typing.Union, types.UnionType) else (hint,)
    if any(typing.get_origin(part) in (tuple, typing.Union, types.UnionType) for part in inner):
        return {kind: cls for part in inner for kind, cls in classes_in(part).items()}
    found = [part for part in inner if dataclasses.is_dataclass(part)]
    return {str(getattr(cls, "kind", "")) if len(found) > 1 else "": cls for cls in found}


def is_list(hint: Any) -> bool:
    """Whether a field holds a list: tuple[X, ...], or that or None."""
    parts = typing.get_args(hint) if typing.get_origin(hint) in (typing.Union, types.UnionType) else (hint,)
    return any(typing.get_origin(part) is tuple for part in parts)


class Walker:
    """Builds dataclasses from raw tables; `problems` and `typed` (path → text) grow on the way."""

    def __init__(self, rotary: bool) -> None:
        self.rotary = rotary
        self.problems: list[Problem] = []
        self.typed: dict[str, str] = {}

    def table(self, cls: Any, raw: Any, path: str) -> Any:
        """One table; None where it is none at all."""
        if not isinstance(raw, dict):
            self._note(path, raw, "stands where a table is wanted", f"[{path}]" if path else "")
            return None
        keys, hints = keys_of(cls), type_hints(cls)
        meant = {self._unknown(cls, key, raw[key], path) for key in raw if key not in keys}
        given = {}
        for key, field in keys.items():
            here = f"{path}.{key}" if path else key
            if key in raw:
                given[field.name] = self._value(field, hints[field.name], raw[key], here)
            elif key in meant:  # mistyped, and told: not missing as well
                given[field.name] = _neutral(field, hints[field.name])
            elif field.default is dataclasses.MISSING:
                self.problems.append(Problem(here, "is missing", example=_example(field, key, self.rotary)))
                given[field.name] = _neutral(field, hints[field.name])
        return cls(**given)

    def _value(self, field: dataclasses.Field[Any], hint: Any, raw: Any, path: str) -> Any:
        declaration = field.metadata.get("declaration")
        if isinstance(declaration, Plain):
            return self._plain(declaration, raw, path)

        def one(item: Any, here: str) -> Any:
            if isinstance(declaration, Quantity):
                return self._quantity(declaration, item, here)
            return self._nested(classes_in(hint), item, here)

        if not is_list(hint):
            return one(raw, path)
        if not isinstance(raw, list):
            self._note(path, raw, "stands where a list is wanted", _example(field, path, self.rotary))
            return ()
        return tuple(one(item, f"{path}[{n}]") for n, item in enumerate(raw, start=1))

    def _nested(self, classes: dict[str, Any], raw: Any, path: str) -> Any:
        if len(classes) == 1:
            return self.table(next(iter(classes.values())), raw, path)
        kind = raw.get("kind") if isinstance(raw, dict) else None
        if not isinstance(kind, str) or kind not in classes:
            self.problems.append(
                Problem(
                    f"{path}.kind",
                    "is missing" if kind is None else _one_of(kind, tuple(classes)),
                    _written(kind) if kind is not None else "",
                    f'kind = "{_nearest(kind, tuple(classes)) or next(iter(classes))}"',
                )
            )
            return None
        return self.table(classes[kind], raw, path)

    def _quantity(self, declaration: Quantity, raw: Any, path: str) -> float:
        right = example(declaration, self.rotary).strip("[]")
        if not isinstance(raw, str):
            self._note(path, raw, "stands where a text with a unit is wanted", right)
            return math.nan
        self.typed[path] = raw
        try:
            return parse(raw, declaration, self.rotary, path)
        except InputError as error:
            self.problems += [dataclasses.replace(p, example=p.example.strip("[]")) for p in error.problems]
            return math.nan

    def _plain(self, declaration: Plain, raw: Any, path: str) -> Any:
        rule, kind = "", declaration.kind
        fits = isinstance(raw, _KINDS.get(kind, (str,))) and isinstance(raw, bool) == (kind == "flag")
        if not fits:
            rule = f"stands where {_WANTED.get(kind, 'a text in quotes')} is wanted"
        elif kind == "choice":
            rule = "" if raw in declaration.choices else _one_of(raw, declaration.choices)
        elif kind == "names":
            strange = [word for word in raw if word not in declaration.choices]
            rule = _one_of(strange[0], declaration.choices) if strange else ""
            raw = tuple(raw) if not strange else raw
        elif kind == "text":
            fits = raw.strip() and len(raw) <= LONGEST_NAME and raw.isprintable()
            rule = "" if fits else f"must be one line of 1 to {LONGEST_NAME} characters"
        elif kind in ("count", "ratio"):
            rule = _number_rule(raw, declaration)
        self.typed[path] = raw if isinstance(raw, str) else _written(raw)
        if rule:
            self._note(path, raw, rule, declaration.example)
            return _NEUTRAL.get(kind, "")
        return float(raw) if kind == "ratio" else raw

    def _unknown(self, cls: Any, key: str, raw: Any, path: str) -> str:
        """Tells an unknown key; returns the key that was probably meant, or ""."""
        keys = keys_of(cls)
        near = _nearest(key, keys)
        rule = f'stands under an unknown key; did you mean "{near}"?' if near else "stands under an unknown key"
        right = _example(keys[near], near, self.rotary) if near else f"one of {', '.join(keys)}"
        shown = key if key.isprintable() and len(key) <= LONGEST_NAME else quoted(key)
        self._note(f"{path}.{shown}" if path else shown, raw, rule, right)
        return near

    def _note(self, path: str, raw: Any, rule: str, right: str) -> None:
        self.problems.append(Problem(path, rule, _written(raw), right))


def _number_rule(raw: int | float, declaration: Plain) -> str:
    if not abs(raw) <= _LARGEST_NUMBER:
        return "is not a finite number of sensible size"
    broken = broken_bound(raw, declaration)
    return f"must be {broken[0]} {broken[1]:g}" if broken else ""


def _one_of(word: Any, choices: tuple[str, ...]) -> str:
    near = _nearest(word, choices)
    return f"is not one of {', '.join(choices)}" + (f'; did you mean "{near}"?' if near else "")


def _nearest(word: Any, choices: Iterable[str]) -> str:
    return next(iter(difflib.get_close_matches(str(word)[:LONGEST_NAME], list(choices), n=1)), "")


def _written(raw: Any) -> str:
    """A raw value as the file writes it, cut short."""
    if isinstance(raw, str):
        return quoted(raw)
    if isinstance(raw, bool):
        return "true" if raw else "false"
    if isinstance(raw, dict):
        return "a table"
    if isinstance(raw, list):
        return f"[{', '.join(quoted(word) for word in raw)}]" if all(isinstance(w, str) for w in raw[:9]) else "a list"
    return quoted(str(raw)).strip('"')


def _example(field: dataclasses.Field[Any], key: str, rotary: bool) -> str:
    """A line that would be right: `mass = "38 kg"`."""
    declaration = field.metadata.get("declaration")
    if declaration is None:
        return f"a table [[{key}]]" if "tuple" in str(field.type) else f"a table [{key}]"
    right = example(declaration, rotary) if isinstance(declaration, Quantity) else declaration.example
    return f"{key} = {right or '...'}"


def _neutral(field: dataclasses.Field[Any], hint: Any) -> Any:
    """What stands in for a required value that is missing."""
    declaration = field.metadata.get("declaration")
    if is_list(hint):
        return ()
    if isinstance(declaration, Quantity):
        return math.nan
    return _NEUTRAL.get(declaration.kind, "") if isinstance(declaration, Plain) else None
