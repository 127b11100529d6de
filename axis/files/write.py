"""Changes to the text of an axis file that keep comments and order; writing that leaves a whole file in any case."""

from __future__ import annotations

import contextlib
import os
import re
import tempfile
import typing
from dataclasses import fields, replace
from pathlib import Path
from typing import Any

import tomlkit
from tomlkit.exceptions import TOMLKitError
from tomlkit.items import Item

from axis.description.axis import Axis
from axis.description.settings import Loops
from axis.errors import CannotWrite, InputError, Problem
from axis.files.axis_file import Document
from axis.files.guard import digest_of
from axis.files.walker import classes_in, is_list, keys_of, type_hints
from axis.units import Plain, Quantity, exact, quoted

_STEP = re.compile(r"([A-Za-z_][A-Za-z_0-9]*)((?:\[[0-9]{1,4}\])?)")


def replace_file(path: Path, data: bytes, digest: str | None = None) -> None:
    """Put a whole new file in the place of the old one.

    Where `digest` is given and the file on disk has another by now, nothing is written. The data go to a temporary file
    in the same folder first: an interruption at any moment leaves the old file whole.
    """
    try:
        if digest is not None and path.exists() and digest_of(path.read_bytes()) != digest:
            raise CannotWrite(f"{path} has changed since it was read; nothing was written. Read it again first.")
        refuse_unwritable(path)
        target = path.resolve() if path.is_symlink() else path
        handle, name = tempfile.mkstemp(prefix=f".{target.name[:60]}.", suffix=".part", dir=target.parent)
        try:
            with os.fdopen(handle, "wb") as file:
                file.write(data)
                file.flush()
                os.fsync(file.fileno())
            os.chmod(name, target.stat().st_mode & 0o777 if target.exists() else 0o644)
            os.replace(name, target)
        except BaseException:
            with contextlib.suppress(OSError):
                os.unlink(name)
            raise
    except OSError as error:
        reason = error.strerror or error
        raise CannotWrite(f"{path} cannot be written ({reason}); whatever stood there is whole.") from None


def refuse_unwritable(path: Path) -> None:
    """CannotWrite where a file could not be put there; asked before long work, so that it is not done in vain."""
    folder = path.absolute().parent
    if path.is_dir():
        raise CannotWrite(f"{path} is a folder; nothing was written.")
    if not folder.is_dir():
        raise CannotWrite(f"{path} cannot be written (there is no folder {folder}); nothing was written.")
    # A file that nobody may write was protected on purpose, though a new one could take its place.
    protected = path.exists() and not (path.stat().st_mode & 0o222 and os.access(path, os.W_OK))
    if protected or not os.access(folder, os.W_OK):
        raise CannotWrite(f"{path} cannot be written (it is read-only); nothing was written.")


def make_folder(path: Path) -> None:
    """Make a folder with all above it; one that is there stays as it is."""
    try:
        path.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        reason = "it is a file" if path.exists() else error.strerror or error
        raise CannotWrite(f"{path} cannot be made a folder ({reason}); nothing was written.") from None


def save(path: Path, document: Document, force: bool = False) -> Document:
    """Write the document's text; refused where the file has changed since it was read, unless `force` says so."""
    data = document.text.encode("utf-8")
    replace_file(path, data, None if force or path != document.path else document.digest)
    return replace(document, path=path, digest=digest_of(data))


def save_loops(path: Path, document: Document, loops: Loops, force: bool = False) -> Document:
    """Write the document's text with `loops` under [loops], once it is sure that it reads back to the same floats."""
    try:
        changed = document.with_text(with_loops(document.text, loops, document.axis.rotary))
    except InputError as error:
        raise CannotWrite(f"the settings would not read back, so nothing was written: {error}") from None
    if changed.axis.loops != loops:
        raise CannotWrite("the settings would read back as others, so nothing was written")
    return save(path, changed, force)


def with_loops(text: str, loops: Loops, rotary: bool) -> str:
    """The text with `loops` under [loops]; reading it gives the same floats, bit for bit."""
    document = _parsed(text)
    values = _raw(loops, rotary)
    if not isinstance(document.get("loops"), dict):
        document.pop("loops", None)
        separate = "" if not text or text.endswith("\n\n") else "\n" if text.endswith("\n") else "\n\n"
        return text + separate + tomlkit.dumps({"loops": _inline_all(values)})
    _merge(document["loops"], values)
    return tomlkit.dumps(document)


def with_value(text: str, path: str, typed: str) -> str:
    """The text with one value typed anew; "" takes the key out. The path is written as in messages: `move[1].speed`."""
    document = _parsed(text)
    steps = _steps(path)
    declaration = _declaration(steps, path)
    holder: Any = document
    for name, number in steps[:-1]:
        if name not in holder:
            holder[name] = tomlkit.table() if holder is document else tomlkit.inline_table()
        holder = holder[name]
        if number is not None:
            if not isinstance(holder, list) or not 1 <= number <= len(holder):
                raise InputError([Problem(path, "is no place in this file")])
            holder = holder[number - 1]
        if not isinstance(holder, dict):
            raise InputError([Problem(path, "is no place in this file")])
    key, number = steps[-1]
    if number is not None:
        values = holder.get(key)
        if not isinstance(values, list) or not 1 <= number <= len(values):
            raise InputError([Problem(path, "is no place in this file")])
        values[number - 1] = typed
    elif typed.strip():
        holder[key] = _value(declaration, typed.strip())
    else:
        holder.pop(key, None)
    return tomlkit.dumps(document)


def _parsed(text: str) -> tomlkit.TOMLDocument:
    try:
        return tomlkit.parse(text)
    except (TOMLKitError, ValueError, RecursionError) as error:
        raise InputError([Problem("", f"is not TOML: {error}")]) from None


def _steps(path: str) -> list[tuple[str, int | None]]:
    found = [_STEP.fullmatch(step) for step in path.split(".")]
    if not all(found):
        raise InputError([Problem("", "is no path of an axis file", quoted(path), "move[1].distance")])
    return [(m.group(1), int(m.group(2)[1:-1]) if m.group(2) else None) for m in found if m]


def _declaration(steps: list[tuple[str, int | None]], path: str) -> Quantity | Plain:
    """The declaration of the value at a path."""
    places: list[Any] = [Axis]
    for name, _ in steps:
        holders = [cls for cls in places if name in keys_of(cls)]
        if not holders:
            raise InputError([Problem(path, "is no key of an axis file")])
        field, cls = keys_of(holders[0])[name], holders[0]
        declaration = field.metadata.get("declaration")
        if declaration is not None:
            return typing.cast("Quantity | Plain", declaration)
        places = list(classes_in(type_hints(cls)[field.name]).values())
    raise InputError([Problem(path, "is a table, not a value")])


def _value(declaration: Quantity | Plain, typed: str) -> Any:
    """The TOML value of a typed text. Text that does not fit stays a string, and reading it says what is wrong."""
    if isinstance(declaration, Plain):
        if declaration.kind == "flag" and typed in ("true", "false"):
            return typed == "true"
        if declaration.kind == "names":
            return [word.strip().strip('"') for word in typed.strip("[]").split(",") if word.strip()]
        if declaration.kind in ("count", "ratio"):
            with contextlib.suppress(ValueError):
                return int(typed) if re.fullmatch(r"[+-]?[0-9]{1,15}", typed) else float(typed)
    return typed


def _raw(part: Any, rotary: bool) -> dict[str, Any]:
    """A dataclass as raw TOML values; what is None is left out."""
    found: dict[str, Any] = {}
    cls: Any = type(part)
    for field in fields(cls):
        value, declaration = getattr(part, field.name), field.metadata.get("declaration")
        if value is None:
            continue
        if isinstance(declaration, Quantity):
            many = isinstance(value, tuple)
            texts = [exact(float(v), declaration, rotary) for v in (value if many else (value,))]
            found[field.name] = texts if many else texts[0]
        elif isinstance(declaration, Plain):
            found[field.name] = value
        elif is_list(type_hints(cls)[field.name]):
            found[field.name] = [_raw(item, rotary) for item in value]
        else:
            found[field.name] = _raw(value, rotary)
    return found


def _inline(value: Any) -> Item:
    """A raw value as a TOML item on one line."""
    if isinstance(value, dict):
        table = tomlkit.inline_table()
        for key, inner in value.items():
            table[key] = _inline(inner)
        return table
    if isinstance(value, list):
        array = tomlkit.array()
        for inner in value:
            array.append(_inline(inner))
        return array
    item: Item = tomlkit.item(value)
    return item


def _inline_all(values: dict[str, Any]) -> Any:
    table = tomlkit.table()
    for key, value in values.items():
        table[key] = _inline(value)
    return table


def _merge(table: Any, values: dict[str, Any]) -> None:
    """Bring a TOML table to `values`: keys that stand keep their place and comment, others go or come."""
    for key in [key for key in table if key not in values]:
        table.pop(key)
    for key, value in values.items():
        old = table.get(key)
        if isinstance(value, dict) and isinstance(old, dict):
            _merge(old, value)
        elif key not in table or old != value:
            table[key] = _inline(value)
