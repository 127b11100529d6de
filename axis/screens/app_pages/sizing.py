"""Does it fit? One line for each check, the tightest first; each opens to its rule and its cure."""

from __future__ import annotations

import streamlit as st

from axis.screens import desk, look
from axis.screens.checks import check_list, nothing_open
from axis.sheet.rows import check_rows, demand_rows
from axis.study import Study


def show() -> None:
    on_desk = desk.understood()
    if on_desk is None:
        nothing_open("Does it fit?")
        return
    now = desk.study()
    found = now if now is not None else desk.results().sized
    if found is None or found.sizing is None:
        st.html(look.heading("Does it fit?", "not evaluated", on_desk.failed or "The axis is not understood yet."))
        st.html(look.box("The page of the axis says what is to be mended.", map(str, on_desk.problems), "wrong"))
        return
    stale = now is None
    st.html(look.heading("Does it fit?", found.sizing.verdict, _sentence(found)))
    if stale:
        sentence = "These checks belong to the axis before your last change, which cannot be computed:"
        st.html(look.box(sentence, map(str, on_desk.problems), "wrong", "alert"))
    st.html(look.stale(check_list(check_rows(found.sizing.checks, found.axis.stated.rotary)), stale))
    st.html(look.part("What the cycle asks"))
    st.html(look.stale(look.table(("", "value"), demand_rows(found), numbers=(1,)), stale))


def _sentence(study: Study) -> str:
    assert study.sizing is not None
    missing = [check for check in study.sizing.checks if check.verdict == "not evaluated"]
    failing = [check for check in study.sizing.checks if check.verdict == "fail"]
    if failing:
        return f"{len(failing)} of {len(study.sizing.checks)} checks fail. Each opens to its rule and its cure."
    if missing:
        return f"{len(missing)} of {len(study.sizing.checks)} checks lack an input and count as no pass."
    return "Every check that applies passes. Each opens to its numbers and its rule."


show()
