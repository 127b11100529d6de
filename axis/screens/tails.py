"""The tail of a move as a chart, with explicit ranges and the drawn data to take along."""

from __future__ import annotations

from dataclasses import replace

import streamlit as st

from axis.description.moves import Window
from axis.errors import SettlepointError
from axis.plots.figure import Figure, Scale, as_csv
from axis.plots.screen import to_plotly
from axis.plots.tail import tail
from axis.screens import desk, look
from axis.settling.check import tail_trace
from axis.settling.verdict import MoveVerdict
from axis.sheet.shown import declared
from axis.study import Study
from axis.units import Quantity, in_shown, parse

BEFORE = "worst corner before the last change"


def _figure(study: Study, move: MoveVerdict) -> Figure:
    """The tail of a move, drawn once, and over it that of the axis before the last change."""
    known = desk.results()
    if move.number not in known.figures:
        loops = study.document.axis.loops
        assert loops is not None
        nominal, worst = tail_trace(study.axis, loops, {}), tail_trace(study.axis, loops, move.worst_corner)
        known.figures[move.number] = tail(study.axis, move, nominal, worst)
    figure, before = known.figures[move.number], known.before.get(move.number)
    if before is None or before.y.unit != figure.y.unit:
        return figure
    old = [replace(line, name=BEFORE, meaning="command", stroke="dotted") for line in before.lines[:1]]
    return replace(figure, lines=(*figure.lines, *old))


@st.fragment
def show_tail(study: Study, move: MoveVerdict, stale: bool) -> None:
    """The chart of one move; its ranges are typed, because a zoom by hand is lost at the next drawing."""
    try:
        figure = _figure(study, move)
    except SettlepointError as error:
        st.html(look.box(f"The tail cannot be drawn: {error}", kind="wrong"))
        return
    chart = st.empty()
    rotary, number = study.axis.stated.rotary, move.number
    first, last, low, high, csv = st.columns([1, 1, 1, 1, 1], vertical_alignment="bottom")
    time, length = declared(Window, "time"), declared(Window, "position")
    with first:
        x_low = _limit("Time from", f"from {number}", figure.x.low, time, False, "-10 ms")
    with last:
        x_high = _limit("Time to", f"to {number}", figure.x.high, time, False, "60 ms")
    with low:
        y_low = _limit("Error from", f"low {number}", figure.y.low, length, rotary, "")
    with high:
        y_high = _limit("Error to", f"high {number}", figure.y.high, length, rotary, "")
    with csv:
        st.download_button(
            "Data (CSV)", data=lambda: as_csv(figure).encode(), file_name=f"tail-move-{number}.csv", mime="text/csv",
            key=f"csv {number}", on_click="ignore", width="stretch",
        )  # fmt: skip
    if x_low < x_high and y_low < y_high:
        figure = replace(figure, x=_cut(figure.x, x_low, x_high), y=_cut(figure.y, y_low, y_high))
    else:
        st.html(look.box("A range must begin below its end; the whole tail is shown.", kind="wrong", role="alert"))
    dark = st.context.theme.type == "dark"
    words = f"{figure.words} Computed before the last change." if stale else figure.words
    drawn = to_plotly(figure, dark)
    if stale:
        drawn.update_layout(title={"text": "computed before your last change", "x": 0.5, "y": 0.02})
    chart.plotly_chart(
        drawn, key=f"tail {number}", theme=None, width="stretch", config={"displayModeBar": False}, alt=words
    )


def _cut(scale: Scale, low: float, high: float) -> Scale:
    return replace(scale, low=low, high=high)


def _limit(label: str, key: str, whole: float, declaration: Quantity, rotary: bool, right: str) -> float:
    """One end of a range as typed with its unit; empty shows everything."""
    typed = st.text_input(label, key=key, placeholder=right or "all", persist_state="session", autocomplete="off")
    if not typed.strip():
        return whole
    free = replace(declaration, above=None, at_least=None)
    try:
        return in_shown(parse(typed, free, rotary, label), free, rotary)
    except SettlepointError as error:
        st.html(look.box(str(error), kind="wrong", role="alert"))
        return whole
