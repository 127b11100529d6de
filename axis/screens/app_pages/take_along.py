"""What do I take along? The settings sheet as pages or for machines, and the axis file with its settings."""

from __future__ import annotations

from functools import partial

import streamlit as st

from axis.cautions import cautions
from axis.screens import desk, look
from axis.screens.checks import nothing_open
from axis.screens.watch import watch
from axis.sheet.render import render
from axis.sheet.rows import PRELIMINARY, headline, limit_sentences
from axis.study import Study

TITLE = "What do I take along?"
LONGEST_DATE = 40
FORMS = (
    (".pdf", "Settings sheet, PDF", "application/pdf", "two pages to print and to lay before a colleague"),
    (".json", "Settings sheet, JSON", "application/json", "every figure, for machines"),
)


def show() -> None:
    on_desk, draft = desk.understood(), desk.draft()
    if on_desk is None or draft is None:
        nothing_open(TITLE)
        return
    now = desk.study()
    verdict = now.verdict if now is not None and now.settled is not None else "not evaluated"
    st.html(look.heading(TITLE, verdict, headline(now) if now is not None else "The axis is not understood yet."))
    stem = draft.name.removesuffix(".toml")
    sheet, file = st.columns(2, gap="large")
    with sheet:
        st.html(look.part("The settings sheet", PRELIMINARY))
        if now is None:
            sentence = "A sheet needs an axis that can be computed. To mend:"
            st.html(look.box(sentence, map(str, on_desk.problems), "wrong"))
        else:
            _sheet(now, stem)
    with file:
        st.html(look.part("The axis file", "as it stands here, comments and order kept"))
        has_loops = now is not None and now.document.axis.loops is not None
        st.html(look.box("It carries the settings under [loops]." if has_loops else "It carries no settings yet."))
        if on_desk.problems:
            st.html(look.box("It still has values to be mended; they are in the file as you typed them.", kind="care"))
        st.download_button(
            "Axis file, TOML", data=draft.text.encode(), file_name=f"{stem}.toml", mime="application/toml",
            key="take the axis file", on_click="ignore", width="stretch",
        )  # fmt: skip
    if now is not None:
        _before_it_moves(now)


def _sheet(now: Study, stem: str) -> None:
    if now.document.axis.loops is not None and now.settled is None:
        sentence = "The settling of this axis has not been computed since its last change. The sheet would say so."
        st.html(look.box(sentence, kind="care"))
        known = desk.results()
        if known.checking is None or known.checking.study.document.axis != now.document.axis:
            st.button("Compute it now", on_click=known.start_checking, args=(now,), key="check now")
        else:
            watch(known.checking, now)
    date = st.text_input("Date to print on it (left out: none)", key="date", persist_state="session").strip()
    if len(date) > LONGEST_DATE or not date.isprintable():
        sentence = f"The date must be one line of at most {LONGEST_DATE} characters."
        st.html(look.box(sentence, kind="wrong", role="alert"))
        return
    for ending, words, kind, note in FORMS:
        st.download_button(
            f"{words}: {note}", data=partial(render, now, ending, date or None),
            file_name=f"{stem}-settings{ending}", mime=kind, key=f"take {ending}", on_click="ignore", width="stretch",
            type="primary" if ending == ".pdf" else "secondary",
        )  # fmt: skip


def _before_it_moves(now: Study) -> None:
    needed = cautions(now.document.axis)
    st.html(look.part("Before it moves", "all of these stand on the sheet"))
    first, *others = (f"{caution.text} ({caution.governs})" for caution in needed)
    st.html(look.box(first, kind="care"))
    with st.expander(f"{len(others)} more cautions for this axis"):
        st.html(look.box("On the way to the machine:", others, "care"))
    with st.expander("What these figures do not say"):
        st.html(look.box("Where the computation ends:", limit_sentences(now)))


show()
