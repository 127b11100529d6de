"""The one gate to numba: compiles a plain function of numbers and keeps the machine code for the next start.

The cache folder carries a digest of the sources that may be compiled, because numba looks only at the file of the
outermost function: a changed formula in another file would silently go on giving its old result. Where the
package's own folder cannot be written, the user's cache folder serves; where that cannot either, every start compiles.
With SETTLEPOINT_UNCOMPILED=1 everything stays plain Python: slow, and the same numbers.
"""

from __future__ import annotations

import hashlib
import os
import tempfile
from collections.abc import Callable
from pathlib import Path
from typing import Any, TypeVar

F = TypeVar("F", bound=Callable[..., Any])

ROOMS = ("mechanics", "motion", "machine", "loops", "simulation")
UNCOMPILED = os.environ.get("SETTLEPOINT_UNCOMPILED", "") == "1"


def sources_digest(package: Path) -> str:
    """Digest of every source that may end up in machine code."""
    digest = hashlib.sha256()
    for room in ROOMS:
        for source in sorted((package / room).glob("*.py")):
            digest.update(source.name.encode() + b"\0" + source.read_bytes() + b"\0")
    return digest.hexdigest()[:16]


def cache_folder(candidates: list[Path]) -> Path | None:
    """The first folder that can be made and written; None where there is none."""
    for folder in candidates:
        try:
            folder.mkdir(parents=True, exist_ok=True)
            with tempfile.TemporaryFile(dir=folder):
                return folder
        except OSError:
            continue
    return None


def _gate() -> tuple[Callable[[Any], Any], Callable[[Any], Any], Path | None]:
    if UNCOMPILED:
        return (lambda function: function), (lambda function: function), None
    import numba
    from numba.extending import register_jitable
    from platformdirs import user_cache_path

    package = Path(__file__).parent
    name = f"compiled-{sources_digest(package)}"
    folder = cache_folder([package / "__pycache__" / name, user_cache_path("settlepoint") / name])
    if folder is not None:
        settings: Any = numba.config
        settings.CACHE_DIR = str(folder)
    whole = numba.njit(cache=folder is not None, nogil=True)
    part = register_jitable
    return whole, part, folder


_compiler, _part_compiler, CACHE_FOLDER = _gate()


def _seen(function: F) -> F:
    """The function, if the cache would notice a change of it."""
    room = function.__module__.split(".")[1:2]
    if room and room[0] not in ROOMS and function.__module__.startswith("axis."):
        raise ValueError(f"{function.__module__} is outside the sources whose changes the cache notices: {ROOMS}")
    return function


def compiled(function: F) -> F:
    """Compile a function of numbers and arrays at its first call; no fastmath, so that the digits stay the same."""
    result: F = _compiler(_seen(function))
    return result


def compiled_part(function: F) -> F:
    """A function that becomes part of the compiled functions that call it; called from Python it stays plain Python."""
    result: F = _part_compiler(_seen(function))
    return result
