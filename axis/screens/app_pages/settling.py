"""Does it settle, why not, and what do I set? The tail of every move, the settings, the search for them."""

from __future__ import annotations

import streamlit as st

from axis.cautions import DC_LINK, FIRST_ENABLE, SUSPENDED, cautions
from axis.screens import desk, look
from axis.screens.checks import check_list, nothing_open
from axis.screens.jobs import Job, without_loops
from axis.screens.tails import show_tail
from axis.screens.watch import watch
from axis.sheet.rows import check_rows, comparison_rows, headline, margin_rows, move_rows, path_rows
from axis.sheet.settings import setting_rows
from axis.study import DEFAULT_RUNS, DEFAULT_SEED, Study
from axis.verdicts import Check

LEAST_RUNS, MOST_RUNS, LONGEST_NUMBER = 100, 1_000_000, 11
TITLE = "Does it settle?"
AT_THE_ENABLE = (SUSPENDED, FIRST_ENABLE, DC_LINK)


def show() -> None:
    on_desk, now, known = desk.understood(), desk.study(), desk.results()
    if on_desk is None:
        nothing_open(TITLE)
        return
    loops = now.document.axis.loops if now is not None else None
    if now is not None and loops is not None and now.settled is None and not _running(known.tuning):
        known.start_checking(now)
    shown = now if now is not None and now.settled is not None else known.settled
    verdict = now.settled.verdict if now is not None and now.settled is not None else "not evaluated"
    st.html(look.heading(TITLE, verdict, headline(now) if now is not None else "The axis is not understood yet."))
    stale = shown is not now
    if now is None:
        st.html(look.box("The axis has to be mended first:", map(str, on_desk.problems), "wrong", "alert"))
    watch(known.checking if now is not None and now.settled is None and loops is not None else None, now)
    _search(now)
    if shown is None or shown.settled is None:
        if now is not None and loops is not None:
            _settings(now, False)
        return
    if stale:
        st.html(look.box("What follows was computed before your last change and does not speak of it.", kind="care"))
    _moves(shown, stale)
    _settings(shown, stale)
    _why(shown, stale)


# ---- long work -------------------------------------------------------------------------------------------------------


def _running(job: Job | None) -> bool:
    return job is not None and not job.ended


def _search(now: Study | None) -> None:
    """The search for settings: its button, its progress, and what it found."""
    known = desk.results()
    job = known.tuning
    if _running(job):
        watch(job)
        if job is not None and (now is None or not _same(job, now)):
            st.html(look.box("The search runs on the axis as it was when you started it.", kind="care"))
        return
    watch(job)
    if now is None:
        return
    has_loops = now.document.axis.loops is not None
    label = "Search settings" if has_loops else "Search settings: this axis has none yet"
    with st.expander(label, expanded=not has_loops):
        _start(now)
    found = known.tuned
    if found is None or found.tuned is None:
        return
    if not known.is_tuned(now.document.axis):
        sentence = "The search that was made belongs to the axis before your last change; search again for this one."
        st.html(look.box(sentence, kind="care"))
    elif found.tuned.loops != now.document.axis.loops:
        sentence = "The axis has other settings than the search found. Yours are kept until you replace them."
        st.html(look.box(sentence, kind="care"))
        st.button("Replace the settings by those found", on_click=desk.take_loops, args=(found.tuned.loops,))


def _same(job: Job, now: Study) -> bool:
    return without_loops(job.study.document.axis) == without_loops(now.document.axis)


def _start(now: Study) -> None:
    seed, runs, button = st.columns([1, 1, 2], vertical_alignment="bottom")
    with seed:
        typed_seed = st.text_input("Seed", value=str(DEFAULT_SEED), key="seed", persist_state="session")
    with runs:
        typed_runs = st.text_input(
            "Budget, simulated cycles", value=str(DEFAULT_RUNS), key="runs", persist_state="session"
        )
    numbers = _whole(typed_seed, 0, 2**31), _whole(typed_runs, LEAST_RUNS, MOST_RUNS)
    with button:
        pressed = st.button("Search settings", type="primary", disabled=None in numbers, width="stretch")
    if numbers[0] is None:
        st.html(look.box("Seed: write a whole number from 0 on, such as 1.", kind="wrong", role="alert"))
    if numbers[1] is None:
        sentence = f"Budget: write a whole number from {LEAST_RUNS} to {MOST_RUNS}, such as {DEFAULT_RUNS}."
        st.html(look.box(sentence, kind="wrong", role="alert"))
    if pressed and numbers[0] is not None and numbers[1] is not None:
        desk.results().start_tuning(now, numbers[0], numbers[1])
        st.rerun()


def _whole(typed: str, least: int, most: int) -> int | None:
    clean = typed.strip()
    plain = clean.isascii() and clean.isdigit() and len(clean) <= LONGEST_NUMBER
    return int(clean) if plain and least <= int(clean) <= most else None


# ---- what was found --------------------------------------------------------------------------------------------------


def _moves(study: Study, stale: bool) -> None:
    assert study.settled is not None
    rotary = study.axis.stated.rotary
    for move, verdict in zip(move_rows(study), study.settled.moves, strict=True):
        st.html(look.part(move.title, f"{move.sentence}; worst {move.worst_corner}", move.verdict))
        picture, figures = st.columns([5, 4], gap="medium")
        with picture:
            show_tail(study, verdict, stale)
        with figures:
            rows = [(row.name, row.nominal, row.worst) for row in move.figures]
            st.html(look.stale(look.table(("", "nominal", "worst corner"), rows, numbers=(1, 2)), stale))
        with st.expander(f"Checks of move {move.number}", expanded=move.verdict != "pass"):
            st.html(look.stale(check_list(move.checks), stale))
    whole: tuple[Check, ...] = study.settled.checks
    if whole:
        st.html(look.part("The axis as a whole"))
        st.html(look.stale(check_list(check_rows(whole, rotary)), stale))


def _settings(study: Study, stale: bool) -> None:
    st.html(look.part("What do I set?", "before the drive is enabled, read the lines in the double frame"))
    needed = cautions(study.document.axis)
    for caution in AT_THE_ENABLE:
        if caution in needed:
            st.html(look.box(f"{caution.text} ({caution.governs})", kind="care"))
    rows = [
        (f"{row.name}, {row.symbol}" if row.symbol else row.name, row.text, row.note, row.origin)
        for row in setting_rows(study)
    ]
    head = ("setting", "value", "refers to", "where it comes from")
    st.html(look.stale(look.table(head, rows, numbers=(1,)), stale))


def _why(study: Study, stale: bool) -> None:
    """Margins, the textbook beside the search, and the path the search took."""
    margins = margin_rows(study)
    if margins:
        st.html(look.part("Stability margins", "each at the computed corner where it is smallest"))
        rows = [
            (row.name, row.asked, row.found, row.textbook, look.verdict("pass" if row.holds else "fail"))
            for row in margins
        ]
        st.html(look.stale(look.table(("", "asked", "found", "textbook", ""), rows), stale))
    compared = comparison_rows(study)
    if compared:
        st.html(look.part("Beside the textbook's settings"))
        rows_of = [(row.name, row.here, row.textbook) for row in compared]
        st.html(look.stale(look.table(("", "found", "textbook"), rows_of), stale))
        st.html(look.part("The path of the search"))
        st.html(look.stale(look.table(("step", "time to window, worst", ""), path_rows(study)), stale))


show()
