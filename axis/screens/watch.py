"""Long work on a page: drawn by itself while it goes on, so that the rest of the page stays free."""

from __future__ import annotations

import streamlit as st

from axis.screens import desk, look
from axis.screens.jobs import Job
from axis.study import Study

EVERY = 0.4  # [s]


def watch(job: Job | None, again: Study | None = None) -> None:
    """Draw a job until it ends, then the whole page anew; where it gave no result, say why and offer it `again`."""
    if job is None:
        return
    if not job.ended:
        _progress(job)
    elif job.failed:
        st.html(look.box(f"The {job.name} gave no result: {job.failed}", kind="wrong", role="alert"))
        if again is not None:
            st.button("Compute it again", on_click=desk.results().check_again, args=(again,), key=f"again {job.name}")


@st.fragment(run_every=EVERY)
def _progress(job: Job) -> None:
    if job.ended:
        st.rerun(scope="app")
    bar, stop = st.columns([6, 1], vertical_alignment="bottom")
    with bar:
        st.progress(job.share, text=f"{job.name.capitalize()}: {job.best}")
    with stop:
        st.button("Stop", key=f"stop {job.name}", on_click=job.stop, disabled=job.stopping, width="stretch")
