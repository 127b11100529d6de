"""Bytes of a file, refused before anything parses them where they could hurt: size, kind, encoding, long lines."""

from __future__ import annotations

import hashlib
import stat
from pathlib import Path

from axis.errors import InputError, Problem

LONGEST_LINE = 1000  # a dotted key of 80,000 characters keeps tomllib busy for half a minute


def read_bytes(path: Path, largest: int, what: str) -> bytes:
    """The whole of a regular file of bounded size; InputError that says what else it is."""
    try:
        status = path.stat()
        if stat.S_ISDIR(status.st_mode):
            raise _wrong(path, f"is a folder, not {what}")
        if not stat.S_ISREG(status.st_mode):
            raise _wrong(path, f"is no regular file, so not {what}")
        if status.st_size > largest:
            raise _too_large(path, largest, what)
        with path.open("rb") as file:
            data = file.read(largest + 1)
    except FileNotFoundError:
        raise _wrong(path, "is not there") from None
    except (OSError, ValueError) as error:  # a path of impossible length or with a NUL
        raise _wrong(path, f"cannot be read ({getattr(error, 'strerror', None) or error})") from None
    if len(data) > largest:
        raise _too_large(path, largest, what)
    return data


def as_text(data: bytes, name: str, largest: int, what: str, longest_line: int = LONGEST_LINE) -> str:
    """UTF-8 text of bounded size and line length, without a byte order mark; line ends become a newline."""
    if len(data) > largest:
        raise _too_large(name, largest, what)
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        value = f"byte {error.start + 1} is 0x{data[error.start]:02x}"
        raise InputError([Problem(name, "is not UTF-8 text", value, "a file saved as UTF-8")]) from None
    for number, line in enumerate(text.splitlines(), start=1):
        if len(line) > longest_line:
            rule = f"is longer than {longest_line} characters"
            raise InputError([Problem(name, rule, f"line {number}", "one key to a line")])
    return text.replace("\r\n", "\n")


def digest_of(data: bytes) -> str:
    """The sha256 of a file's bytes, by which it is recognised."""
    return hashlib.sha256(data).hexdigest()


def _wrong(path: Path, rule: str) -> InputError:
    return InputError([Problem(str(path)[-200:], rule)])


def _too_large(path: Path | str, largest: int, what: str) -> InputError:
    return InputError([Problem(str(path)[-200:], f"is larger than {largest // 1000} kB; not {what}")])
