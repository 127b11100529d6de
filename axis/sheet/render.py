"""The settings sheet as bytes, by the ending of the file that is asked for."""

from __future__ import annotations

from axis.errors import InputError, Problem
from axis.study import Study

ENDINGS = (".pdf", ".json")


def render(study: Study, suffix: str, date: str | None = None) -> bytes:
    """The sheet in the form that an ending names; InputError names the endings that exist."""
    if suffix == ".pdf":
        from axis.sheet.pdf import pdf

        return pdf(study, date)
    if suffix == ".json":
        from axis.sheet.as_json import to_json

        return to_json(study)
    rule = f"is no ending of a sheet; a sheet ends in {' or '.join(ENDINGS)}"
    raise InputError([Problem("", rule, f'"{suffix}"', f"sheet{ENDINGS[0]}")])
