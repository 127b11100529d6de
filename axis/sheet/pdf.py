"""The settings sheet as PDF: rows and figures handed to typst as data, which it never evaluates."""

from __future__ import annotations

import json
import re
from collections.abc import Sequence
from pathlib import Path
from typing import Any

from axis.cautions import cautions
from axis.plots.figure import Figure
from axis.plots.paper import font_folder, to_svg
from axis.plots.profile import profiles
from axis.plots.tail import tails
from axis.sheet.rows import (
    PRELIMINARY,
    CheckRow,
    MoveRows,
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
from axis.sheet.shown import WORDS, tool_version
from axis.sheet.values import ValueRow, understood
from axis.study import Study

TEMPLATE = Path(__file__).with_name("sheet.typ")
FIGURE_WIDTH, FIGURE_HEIGHT = 92.0, 54.0  # [mm]
PROFILE_WIDTH, PROFILE_HEIGHT = 58.0, 25.0  # [mm]
_LONG_WORD = re.compile(r"\S{33,}")
_PIECE = re.compile(r"(\S{16})(?=\S)")


def pdf(study: Study, date: str | None = None) -> bytes:
    """The sheet on A4 pages; the tails are simulated once more for their pictures. No date is printed unless given."""
    return typeset(study, tails(study), date)


def typeset(study: Study, figures: Sequence[Figure], date: str | None = None) -> bytes:
    """The sheet with the tails of its moves already drawn up."""
    import typst

    return typst.compile(
        TEMPLATE,
        format="pdf",
        sys_inputs={"sheet": json.dumps(sheet_data(study, figures, date), allow_nan=False)},
        font_paths=[font_folder()],
        ignore_system_fonts=True,
        timestamp=0,
    )


def sheet_data(study: Study, figures: Sequence[Figure], date: str | None) -> dict[str, Any]:
    """All that stands on the sheet, as texts."""
    rotary = study.axis.stated.rotary
    sized = study.sizing.checks if study.sizing is not None else ()
    whole = study.settled.checks if study.settled is not None else ()
    data: dict[str, Any] = {
        "name": study.document.axis.head.name,
        "verdict": study.verdict,
        "word": WORDS[study.verdict],
        "headline": headline(study),
        "date": date or "",
        "made_by": f"Settlepoint {tool_version()}",
        "input": f"axis file {study.document.digest[:12]}",
        "footer": PRELIMINARY,
        "groups": [{"title": group.title, "rows": [_value(row) for row in group.rows]} for group in understood(study)],
        "sized": study.sizing is not None,
        "profiles": [
            {"words": one.words, "picture": to_svg(one, PROFILE_WIDTH, PROFILE_HEIGHT).decode()}
            for one in profiles(study.axis)
        ],
        "demand": [list(row) for row in demand_rows(study)],
        "checks": [_check(row) for row in check_rows(sized, rotary)],
        "whole": [_check(row) for row in check_rows(whole, rotary)],
        "settings": [vars(row) | {"text": row.text} for row in setting_rows(study)],
        "margins": [vars(row) for row in margin_rows(study)],
        "tuned": study.tuned is not None,
        "comparison": [[row.name, row.here, row.textbook] for row in comparison_rows(study)],
        "path": [list(row) for row in path_rows(study)],
        "cautions": [{"text": one.text, "governs": one.governs} for one in cautions(study.document.axis)],
        "limits": list(limit_sentences(study)),
    }
    drawn = ("profiles",)
    return {k: v if k in drawn else _breakable(v) for k, v in data.items()} | {"moves": _moves(study, figures)}


def _moves(study: Study, figures: Sequence[Figure]) -> list[dict[str, Any]]:
    """The moves, each with its picture."""
    moves = []
    for move, figure in zip(move_rows(study), figures, strict=True):
        told = {
            "title": move.title,
            "verdict": move.verdict,
            "word": WORDS[move.verdict],
            "sentence": move.sentence,
            "corner": move.worst_corner,
            "figures": [[row.name, row.nominal, row.worst] for row in move.figures],
            "checks": [_move_check(row, move) for row in move.checks],
            "words": figure.words,
        }
        moves.append(_breakable(told) | {"picture": to_svg(figure, FIGURE_WIDTH, FIGURE_HEIGHT).decode()})
    return moves


def _value(row: ValueRow) -> dict[str, Any]:
    return {"name": row.name, "echo": row.echo, "value": row.value, "origin": row.origin, "note": row.note}


def _check(row: CheckRow) -> dict[str, Any]:
    return vars(row) | {"word": WORDS[row.verdict]}


def _move_check(row: CheckRow, move: MoveRows) -> dict[str, Any]:
    """A check below its move and beside the move's worst corner, neither of which it says again."""
    return _check(row) | {
        "name": row.name.removesuffix(f", move {move.number}"),
        "reason": row.reason.replace(move.worst_corner, "at that corner"),
    }


def _breakable(value: Any) -> Any:
    """Texts whose endless words may break across lines."""
    if isinstance(value, str):
        return _LONG_WORD.sub(lambda word: _PIECE.sub("\\1\u200b", word.group()), value)
    if isinstance(value, list):
        return [_breakable(one) for one in value]
    if isinstance(value, dict):
        return {key: _breakable(one) for key, one in value.items()}
    return value
