"""What a figure shows, told without a drawing library: lines, bands, markers, marks, each with its meaning in words.

Numbers stand in the unit that the axis of the figure names. `screen.py` and `paper.py` draw the same description.
"""

from __future__ import annotations

import csv
import io
import itertools
from dataclasses import dataclass
from typing import Literal

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]

LONGEST_TRACE = 5_000

# What a part of a figure means; the renderers give each meaning its colour, and words and strokes say it a second time.
Meaning = Literal["nominal", "worst", "window", "command", "limit", "signal"]
Stroke = Literal["solid", "dashed", "dotted"]
Shape = Literal["circle", "diamond", "square"]


@dataclass(frozen=True)
class Scale:
    """One axis of a figure and the range it shows."""

    label: str
    unit: str
    low: float
    high: float

    @property
    def title(self) -> str:
        return f"{self.label} [{self.unit}]" if self.unit else self.label


@dataclass(frozen=True)
class Line:
    """A trace, at most `LONGEST_TRACE` points long."""

    name: str
    x: Array
    y: Array
    meaning: Meaning
    stroke: Stroke = "solid"


@dataclass(frozen=True)
class Band:
    """The strip between two heights."""

    name: str
    low: float
    high: float
    meaning: Meaning


@dataclass(frozen=True)
class Level:
    """A height that something is compared with."""

    name: str
    y: float
    meaning: Meaning
    stroke: Stroke = "dashed"


@dataclass(frozen=True)
class Marker:
    """A point that is named."""

    name: str
    x: float
    y: float
    meaning: Meaning
    shape: Shape


@dataclass(frozen=True)
class VerticalMark:
    """An instant, with its words in a row of its own above the figure (row 0 is the lowest)."""

    name: str
    x: float
    meaning: Meaning
    row: int = 0
    stroke: Stroke = "solid"


@dataclass(frozen=True)
class Figure:
    """One figure; `words` says in a sentence what it shows, for those who cannot see it."""

    title: str
    words: str
    x: Scale
    y: Scale
    lines: tuple[Line, ...] = ()
    bands: tuple[Band, ...] = ()
    levels: tuple[Level, ...] = ()
    markers: tuple[Marker, ...] = ()
    marks: tuple[VerticalMark, ...] = ()

    @property
    def rows(self) -> int:
        """Rows of words that the vertical marks need above the figure."""
        return max((mark.row + 1 for mark in self.marks), default=0)


def line(name: str, x: Array, y: Array, meaning: Meaning, stroke: Stroke = "solid") -> Line:
    """A trace, thinned where it is longer than can be seen."""
    return Line(name, *decimated(x, y), meaning, stroke)


def decimated(x: Array, y: Array, longest: int = LONGEST_TRACE) -> tuple[Array, Array]:
    """A trace of at most `longest` points: of each bin its lowest and highest point, in order, and both ends."""
    if len(x) <= longest:
        return x, y
    bounds = np.linspace(0, len(x), (longest - 2) // 2 + 1).astype(int)
    kept = {0, len(x) - 1}
    for first, end in itertools.pairwise(bounds.tolist()):
        kept.add(first + int(np.argmin(y[first:end])))
        kept.add(first + int(np.argmax(y[first:end])))
    order = np.array(sorted(kept))
    return x[order], y[order]


def staggered(marks: list[VerticalMark]) -> tuple[VerticalMark, ...]:
    """Marks with a row of words each, so that no words meet: the latest instant lowest."""
    ordered = sorted(marks, key=lambda mark: -mark.x)
    return tuple(VerticalMark(mark.name, mark.x, mark.meaning, row, mark.stroke) for row, mark in enumerate(ordered))


def as_csv(figure: Figure) -> str:
    """The drawn traces for a download: one row a point, trace by trace."""
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(["trace", figure.x.title, figure.y.title])
    for one in figure.lines:
        writer.writerows([one.name, repr(float(x)), repr(float(y))] for x, y in zip(one.x, one.y, strict=True))
    return text.getvalue()
