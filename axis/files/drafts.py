"""Drafts: the axis files of the screens, kept as typed, right or wrong, in the user's data folder.

A draft is one file, `<8 hex>.toml`: a first line that says its revision and where it came from, then the text of an
axis file. Whoever writes says which revision was seen; where another window has written meanwhile, the edit goes on
under a key of its own and nothing is overwritten.
"""

from __future__ import annotations

import contextlib
import os
import re
import secrets
import time
import tomllib
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from axis.description.axis import Axis
from axis.errors import CannotWrite, InputError, Problem
from axis.files.axis_file import LARGEST_FILE
from axis.files.guard import as_text, read_bytes
from axis.files.walker import classes_in, is_list, keys_of, type_hints
from axis.files.write import replace_file
from axis.units import Plain, Quantity

KEY = re.compile(r"[0-9a-f]{8}")
_HEAD = re.compile(r"# settlepoint draft, revision ([0-9]{1,9}), of ([^\n]{0,120})")
_PATIENCE = 3.0  # [s] to wait for another writer; a lock twice as old was left by a process that died
_LONGEST_NAME = 60
_ALWAYS = ("axis", "load", "motor", "drive", "window", "tolerance", "tuning", "friction")  # shown also where not typed


@dataclass(frozen=True)
class Draft:
    """One axis file as typed, under the key by which a window asks for it."""

    key: str
    revision: int
    name: str  # of the file it came from, and under which it is saved
    text: str


@dataclass(frozen=True)
class Field:
    """One key of an axis file that may be typed, and how it stands in the text ("" where it does not)."""

    path: str
    declaration: Quantity | Plain
    typed: str


@dataclass(frozen=True)
class Section:
    """One table of an axis file with all its keys, typed or not."""

    path: str
    kind: str  # of a stage or a filter, as typed
    fields: tuple[Field, ...]


def new_key() -> str:
    return secrets.token_hex(4)


class Drafts:
    """The drafts of one folder."""

    def __init__(self, folder: Path | None = None) -> None:
        self.folder = folder if folder is not None else drafts_folder()

    def read(self, key: str) -> Draft | None:
        """The draft of a key; None where there is none, InputError where its file is none of ours."""
        path = self._path(key)
        if not path.exists():
            return None
        head, _, text = as_text(
            read_bytes(path, LARGEST_FILE, "a draft"), path.name, LARGEST_FILE, "a draft"
        ).partition("\n")
        found = _HEAD.fullmatch(head)
        if found is None:
            raise InputError([Problem(str(path), "is no draft of an axis file")])
        return Draft(key, int(found.group(1)), found.group(2), text)

    def write(self, seen: Draft, text: str) -> Draft:
        """Keep a new text for the draft that was seen; the answer has another key where the draft had changed since."""
        if len(text.encode("utf-8", errors="replace")) > LARGEST_FILE - 1000:
            raise CannotWrite(f"the axis is larger than {LARGEST_FILE // 1000} kB; this edit is not kept")
        with self._locked(seen.key):
            there = self.read(seen.key)
            changed = there is not None and there.revision != seen.revision
            draft = Draft(new_key() if changed else seen.key, 1 if changed else seen.revision + 1, seen.name, text)
            head = f"# settlepoint draft, revision {draft.revision}, of {plain_name(draft.name)}\n"
            replace_file(self._path(draft.key), (head + text).encode("utf-8", errors="replace"))
        return draft

    def recent(self, most: int) -> list[Draft]:
        """The drafts that were changed last, the newest first."""
        files = [path for path in self.folder.glob("*.toml") if KEY.fullmatch(path.stem)]
        found = []
        for path in sorted(files, key=lambda path: path.stat().st_mtime, reverse=True)[:most]:
            with contextlib.suppress(InputError):
                draft = self.read(path.stem)
                found += [draft] if draft is not None else []
        return found

    def _path(self, key: str) -> Path:
        if not KEY.fullmatch(key):
            raise InputError([Problem("axis", "is no key of a draft", f'"{key[:20]}"', "axis=0a1b2c3d")])
        return self.folder / f"{key}.toml"

    @contextlib.contextmanager
    def _locked(self, key: str) -> Iterator[None]:
        """One writer at a time, over all processes: who creates the lock file holds it."""
        lock = self._path(key).with_suffix(".lock")
        deadline = time.monotonic() + _PATIENCE
        try:
            self.folder.mkdir(parents=True, exist_ok=True)
            while True:
                try:
                    os.close(os.open(lock, os.O_CREAT | os.O_EXCL | os.O_WRONLY))
                    break
                except FileExistsError:
                    with contextlib.suppress(FileNotFoundError):
                        if time.time() - lock.stat().st_mtime > 2.0 * _PATIENCE:
                            lock.unlink()
                    if time.monotonic() > deadline:
                        raise CannotWrite(f"the draft {key} is held by another window; this edit is not kept") from None
                    time.sleep(0.01)
        except OSError as error:
            raise CannotWrite(f"{self.folder} cannot be written ({error.strerror or error})") from None
        try:
            yield
        finally:
            with contextlib.suppress(OSError):
                lock.unlink()


def drafts_folder() -> Path:
    """Where the drafts lie: SETTLEPOINT_DRAFTS, or the user's data folder."""
    stated = os.environ.get("SETTLEPOINT_DRAFTS")
    if stated:
        return Path(stated)
    import platformdirs

    return platformdirs.user_data_path("settlepoint", appauthor=False) / "drafts"


def plain_name(name: str) -> str:
    """A file name without anything that is not plainly part of one."""
    clean = re.sub(r"[^\w .()+,-]", "_", name.rpartition("/")[2].rpartition("\\")[2]).strip()
    return clean[-_LONGEST_NAME:] or "axis.toml"


def sections(text: str) -> tuple[Section, ...]:
    """Every table of an axis file with every key it may have; empty where the text is no TOML."""
    try:
        raw = tomllib.loads(as_text(text.encode("utf-8", errors="replace"), "axis", LARGEST_FILE, "an axis file"))
    except (InputError, ValueError, RecursionError):
        return ()
    return tuple(_sections(Axis, raw, ""))


def _sections(cls: Any, raw: dict[str, Any], path: str) -> Iterator[Section]:
    hints = type_hints(cls)
    own, below = [], []
    for key, field in keys_of(cls).items():
        here, value = f"{path}.{key}" if path else key, raw.get(key)
        declaration, many = field.metadata.get("declaration"), is_list(hints[field.name])
        if declaration is not None and many and isinstance(declaration, Quantity):
            items = value if isinstance(value, list) else []
            own += [Field(f"{here}[{n}]", declaration, as_typed(item)) for n, item in enumerate(items, start=1)]
        elif declaration is not None:
            if key != "kind":
                own.append(Field(here, declaration, as_typed(value)))
        elif many:
            items = value if isinstance(value, list) else []
            below += [(f"{here}[{n}]", hints[field.name], item) for n, item in enumerate(items, start=1)]
        elif isinstance(value, dict) or key in _ALWAYS:
            below.append((here, hints[field.name], value))
    if own:
        yield Section(path, as_typed(raw.get("kind")), tuple(own))
    for here, hint, value in below:
        inner = value if isinstance(value, dict) else {}
        classes = classes_in(hint)
        chosen = classes.get(str(inner.get("kind"))) or (next(iter(classes.values())) if len(classes) == 1 else None)
        if chosen is not None:
            yield from _sections(chosen, inner, here)


def as_typed(value: Any) -> str:
    """A value of the file as a text field shows it."""
    if value is None:
        return ""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, list):
        return ", ".join(as_typed(item) for item in value)
    return str(value)
