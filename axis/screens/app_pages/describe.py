"""Did it understand my axis as I meant it? Opens an axis, takes every value as text, echoes what was understood."""

from __future__ import annotations

import streamlit as st

from axis.files.drafts import Drafts, Section, sections
from axis.screens import desk, look
from axis.screens.chain import chain
from axis.screens.fields import show_sections
from axis.sheet.values import ValueRow, understood
from axis.study import Study

PARTS = {
    "Load and moves": ("axis", "load", "payload", "window", "move"),
    "Transmission": ("transmission",),
    "Motor": ("motor",),
    "Drive": ("drive",),
    "Tolerances and wishes": ("tolerance", "tuning"),
    "Settings": ("loops",),
    "Whole file as text": (),
}
MOST_RECENT = 8
MOST_TOLD = 12


def show() -> None:
    draft = desk.draft()
    if draft is None:
        st.html(look.heading("Open an axis", "not evaluated", "Nothing is open in this window.", "none open"))
        _open()
        return
    found, on_desk = desk.study(), desk.understood()
    assert on_desk is not None
    problems = on_desk.problems
    name = found.document.axis.head.name if found is not None else draft.name
    if found is not None:
        assumed = len(found.axis.assumptions)
        sentence = "One value was" if assumed == 1 else f"{assumed} values were"
        sentence += " not stated but assumed, and hatched below."
        st.html(look.heading(name, "pass", sentence if assumed else "Every value was stated.", "understood"))
    else:
        st.html(look.heading(name, "fail", "It cannot be computed before what follows is mended.", "to mend"))
    if on_desk.failed:
        st.html(look.box(on_desk.failed, kind="wrong", role="alert"))
    if problems:
        count = len(problems)
        told = [str(problem) for problem in problems[:MOST_TOLD]]
        told += [f"and {count} in all"] if count > MOST_TOLD else []
        st.html(look.box("What you typed is kept. To mend:", told, "wrong", "alert"))
    if found is not None:
        for warning in found.axis.warnings:
            st.html(look.box(warning, kind="care"))
        st.html(chain(found))
    with st.expander("Open another axis"):
        _open()
    _values(draft.text, found)


def _open() -> None:
    """The ways to an axis: one of the shipped, a file, a template, what was worked on before."""
    shipped, upload, fresh = st.columns(3, gap="large")
    with shipped:
        st.html(look.part("A shipped axis", "invented data"))
        for path in desk.shipped_axes():
            st.button(path.stem, key=f"open {path.name}", on_click=desk.open_shipped, args=(path,), width="stretch")
    with upload:
        st.html(look.part("Your axis file"))
        st.file_uploader("Axis file (.toml)", type=["toml"], key="upload", on_change=_uploaded)
    with fresh:
        st.html(look.part("From a template"))
        st.button("Start from the template", key="open template", on_click=desk.open_template, width="stretch")
        recent = Drafts().recent(MOST_RECENT)
        if recent:
            st.html(look.part("Worked on before"))
        for one in recent:
            label = f"{one.name}, {one.key}, revision {one.revision}"
            st.button(label, key=f"open {one.key}", on_click=desk.open_draft, args=(one.key,), width="stretch")


def _uploaded() -> None:
    file = st.session_state["upload"]
    if file is not None:
        desk.open_upload(file.name, file.getvalue())


def _values(text: str, found: Study | None) -> None:
    part = st.segmented_control(
        "Part of the axis", list(PARTS), key="part", default=next(iter(PARTS)), label_visibility="collapsed"
    )
    on_desk = desk.understood()
    assert on_desk is not None
    every = sections(text)
    if part == "Whole file as text" or not every:
        _whole(text)
        return
    chosen = [one for one in every if _belongs(one, PARTS[part or next(iter(PARTS))])]
    if not chosen:
        st.html(look.box("Nothing of this stands in the file. Tuning writes the settings; or type the part as text."))
    rows: dict[str, ValueRow] = {}
    if found is not None:
        rows = {row.path: row for group in understood(found) for row in group.rows if row.path}
    rotary = any(field.path == "axis.travel" and field.typed == "rotary" for one in every for field in one.fields)
    with st.container(key="values", gap="xxsmall"):
        show_sections(chosen, rotary, rows, on_desk.problems)
    if found is not None and part == next(iter(PARTS)):
        computed = next(group for group in understood(found) if all(row.origin == "computed" for row in group.rows))
        st.html(look.part(computed.title))
        st.html(look.table(("", "value"), [(row.name, row.value) for row in computed.rows], numbers=(1,)))


def _belongs(section: Section, names: tuple[str, ...]) -> bool:
    return section.path.partition(".")[0].partition("[")[0] in names


def _whole(text: str) -> None:
    """The file itself, for what has no field: another move, another stage, a comment."""
    st.session_state["whole text"] = text
    st.text_area(
        "The axis file; moves, payloads and stages are added and taken away here",
        key="whole text",
        height=560,
        on_change=lambda: desk.type_text(st.session_state["whole text"]),
    )


show()
