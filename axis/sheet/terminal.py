"""The rows of the sheet as plain text for the command line."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence

from axis.cautions import cautions
from axis.sheet.rows import (
    PRELIMINARY,
    CheckRow,
    check_rows,
    comparison_rows,
    demand_rows,
    headline,
    limit_sentences,
    margin_rows,
    move_rows,
    path_rows,
)
from axis.sheet.settings import setting_rows
from axis.sheet.shown import NOTHING, SHAPES, WORDS, percent
from axis.sheet.values import understood
from axis.study import Study


def size_text(study: Study) -> str:
    """Demand, checks and assumptions."""
    sizing = study.sizing
    if sizing is None:
        return headline(study)
    lines = [f"{study.document.axis.head.name}: {WORDS[sizing.verdict]}", "", "The cycle asks"]
    lines += _columns(demand_rows(study))
    lines += ["", "Sizing checks, what fails first, then the tightest"]
    lines += _checks(check_rows(sizing.checks, study.axis.stated.rotary))
    assumed = [row for group in understood(study) for row in group.rows if row.origin == "assumed"]
    if assumed:
        lines += ["", "Assumed, nobody stated it"]
        lines += _columns([(row.path, row.value, row.note) for row in assumed])
    lines += [f"warning: {warning}" for warning in study.axis.warnings]
    return "\n".join(lines)


def tune_text(study: Study) -> str:
    """Settings with their origin, margins, and what they are compared with; nothing where none were found."""
    if study.tuned is None:
        return ""
    lines = ["", "What to set"]
    lines += _columns([(f"{row.name} {row.symbol}".rstrip(), row.text, row.origin) for row in setting_rows(study)])
    lines += ["", "Margins, smallest over the corners"]
    margins = [(row.name, row.asked, row.found, row.textbook) for row in margin_rows(study)]
    lines += _columns([("", "asked", "here", "textbook"), *margins])
    lines += ["", "Beside the textbook settings"]
    comparison = [(row.name, row.here, row.textbook) for row in comparison_rows(study)]
    lines += _columns([("", "here", "textbook"), *comparison])
    lines += ["", "Path of the tuning"]
    lines += _columns(path_rows(study))
    lines += ["", "Before the hand acts"]
    lines += [f"  {one.text} ({one.governs})" for one in cautions(study.document.axis)[:2]]
    return "\n".join(lines)


def check_text(study: Study) -> str:
    """Every move, nominal and at its worst corner, then the verdict."""
    if study.settled is None:
        return f"{study.document.axis.head.name}: {headline(study)}"
    lines: list[str] = []
    for move in move_rows(study):
        lines += ["", f"{move.title}: {WORDS[move.verdict]}, {move.sentence}", f"  worst {move.worst_corner}"]
        lines += _columns([("", "nominal", "worst"), *((row.name, row.nominal, row.worst) for row in move.figures)])
        lines += _checks(move.checks)
    lines += ["", "Axis as a whole"]
    lines += _checks(check_rows(study.settled.checks, study.axis.stated.rotary))
    lines += ["", *limit_sentences(study)]
    lines += ["", f"{SHAPES[study.verdict]} {WORDS[study.verdict]}: {headline(study)}", f"({PRELIMINARY})"]
    return "\n".join(lines)


def _checks(rows: Iterable[CheckRow]) -> list[str]:
    lines = []
    for row in rows:
        numbers = f": {row.demand}" if row.demand != NOTHING else ""
        if row.limit != NOTHING and row.margin is not None:
            left = f"{row.margin_text} left" if row.margin >= 0.0 else f"{percent(-row.margin)} over"
            numbers += f" of {row.limit}, {left}"
        lines.append(f"  {SHAPES[row.verdict]} {WORDS[row.verdict]:<14} {row.name}{numbers}")
        if row.verdict in ("fail", "not evaluated") and row.reason:
            lines.append(f"      {row.reason}")
        if row.remedy:
            lines.append(f"      remedy: {row.remedy}")
    return lines


def _columns(rows: Iterable[Sequence[str]]) -> Iterator[str]:
    """Rows under each other, every column as wide as its longest text."""
    table = [tuple(row) for row in rows]
    if not table:
        return
    widths = [max(len(row[n]) for row in table) for n in range(len(table[0]))]
    for row in table:
        yield "  " + "  ".join(text.ljust(width) for text, width in zip(row, widths, strict=True)).rstrip()
