"""Checks as lines that open, for every page that shows some."""

from __future__ import annotations

from collections.abc import Iterable

import streamlit as st

from axis.screens import look
from axis.screens.look import Markup, text
from axis.sheet.rows import CheckRow


def check_list(rows: Iterable[CheckRow]) -> Markup:
    """One line a check: name, demand, limit, margin as a bar, verdict; opened: what decides, the cure, the rule."""
    head = (
        '<div class="sp-check head"><summary><span>Check</span><span class="sp-number">demand</span>'
        '<span class="sp-number">limit</span><span>demand against limit</span><span>verdict</span></summary></div>'
    )
    return Markup(head + "".join(_line(row) for row in rows))


def _line(row: CheckRow) -> str:
    told = [("decided by", row.reason), ("cure", row.remedy), ("rule", row.source), ("name", row.id)]
    inside = "".join(f"<dt>{name}</dt><dd>{text(words)}</dd>" for name, words in told if words)
    return (
        f'<details class="sp-check"><summary><span>{text(row.name)}</span>'
        f'<span class="sp-number">{text(row.demand)}</span><span class="sp-number">{text(row.limit)}</span>'
        f"{look.margin_bar(row.margin, row.margin_text)}{look.verdict(row.verdict)}</summary>"
        f"<dl>{inside}</dl></details>"
    )


def nothing_open(title: str) -> None:
    """What a step says before there is an axis."""
    st.html(look.heading(title, "not evaluated", "No axis is open in this window."))
    st.html(look.box("Open one on the page of the axis: a shipped one, your own file, or the template."))
