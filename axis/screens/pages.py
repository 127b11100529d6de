"""The frame of the screens: four steps in any order, the verdict of each beside its name."""

from __future__ import annotations

import logging
from pathlib import Path

import streamlit as st

from axis.screens import desk, look
from axis.verdicts import Verdict

PAGES = Path(__file__).resolve().parent / "app_pages"


def main() -> None:
    """Draw the page that is asked for; the start files call nothing else."""
    st.set_page_config(page_title="Settlepoint", page_icon="📐", layout="wide")
    st.html(look.STYLE)
    desk.arrive()
    desk.take_finished_tuning()
    page = st.navigation(
        [
            st.Page(PAGES / f"{name}.py", title=title, url_path=name, default=name == "describe")
            for name, title in titles().items()
        ],
        position="top",
    )
    st.query_params["axis"] = st.session_state["key"]  # changing the page clears it
    for words in desk.notices():
        st.html(look.box(words, kind="care", role="alert"))
    try:
        page.run()
    except Exception as error:
        logging.getLogger(__name__).exception("a page raised")
        sentence = f"internal error, please report it with the axis file: {type(error).__name__}: {error}"
        st.html(
            look.box(f"This page cannot be drawn. Everything you typed is kept. {sentence}", kind="wrong", role="alert")
        )


def titles() -> dict[str, str]:
    """File of each page → its name with the verdict of its step."""
    on_desk, found = desk.understood(), desk.study()
    sized: Verdict = "not evaluated"
    settled: Verdict = "not evaluated"
    whole: Verdict = "not evaluated"
    if found is not None:
        sized = found.sizing.verdict if found.sizing is not None else "not evaluated"
        settled = found.settled.verdict if found.settled is not None else "not evaluated"
        whole = found.verdict if found.settled is not None and found.sizing is not None else "not evaluated"
    if on_desk is None:
        read = look.in_title("Axis", "not evaluated", "none open")
    elif found is None:
        count = len(on_desk.problems)
        read = look.in_title("Axis", "fail", f"{count} to mend" if count else "not understood")
    else:
        read = look.in_title("Axis", "pass", "understood")
    return {
        "describe": read,
        "sizing": look.in_title("Sizing", sized),
        "settling": look.in_title("Settling and settings", settled),
        "take_along": look.in_title("Sheet", whole),
    }
