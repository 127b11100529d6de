"""Text to SI floats and back, and the one declaration of a physical field. The only home of pint."""

from __future__ import annotations

import dataclasses
from dataclasses import dataclass
from typing import Any


@dataclass(frozen=True)
class Quantity:
    """What a dataclass field means: read by the file walker, catalogues, screens, sheets and the glossary.

    `unit` is the SI unit the float is kept in; `rotary` replaces it where the axis turns ("" when it is the same);
    `shown` is the unit people read it in (`shown_rotary` where the axis turns). Bounds are in SI.
    """

    unit: str
    words: str
    rotary: str = ""
    shown: str = ""
    shown_rotary: str = ""
    above: float | None = None
    at_least: float | None = None
    below: float | None = None
    at_most: float | None = None
    example: str = ""
    symbol: str = ""
    side: str = ""  # "motor" or "load" where confusion would hurt
    alternatives: tuple[tuple[str, float], ...] = ()  # other units a data sheet may use: (unit, SI value of one)


@dataclass(frozen=True)
class Plain:
    """A field that carries no unit: a count, a ratio, a name or one of a few words."""

    words: str
    kind: str  # "count", "ratio", "text", "choice", "flag", "names"
    choices: tuple[str, ...] = ()
    above: float | None = None
    at_least: float | None = None
    below: float | None = None
    at_most: float | None = None
    example: str = ""
    symbol: str = ""


def quantity(unit: str, words: str, *, default: Any = dataclasses.MISSING, **more: Any) -> Any:
    """Declare a physical field once: SI unit, words, bounds (see `Quantity`)."""
    return dataclasses.field(default=default, metadata={"declaration": Quantity(unit, words, **more)})


def plain(kind: str, words: str, *, default: Any = dataclasses.MISSING, **more: Any) -> Any:
    """Declare a field without a unit once: kind, words, bounds or choices (see `Plain`)."""
    return dataclasses.field(default=default, metadata={"declaration": Plain(words, kind, **more)})
