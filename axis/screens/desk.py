"""The axis on the desk of one window: its draft and what is understood of it; an edit is kept before all else."""

from __future__ import annotations

from dataclasses import dataclass, replace
from pathlib import Path

import streamlit as st

from axis.description.axis import Axis
from axis.description.settings import Loops
from axis.errors import InputError, Problem, SettlepointError
from axis.files.axis_file import LARGEST_FILE, read_text
from axis.files.catalogue import shipped_folder
from axis.files.drafts import KEY, Draft, Drafts, new_key, plain_name
from axis.files.guard import as_text
from axis.files.template import template
from axis.files.write import with_loops, with_value
from axis.screens.jobs import Board, Results
from axis.study import Study, check, opened, size

FORKED = (
    "This axis was changed in another window after you opened it here. Nothing is lost: your change and all that you "
    "see go on in this window as a copy of its own, and the other window keeps what it has."
)


@dataclass(frozen=True)
class Understood:
    """What the text of a draft means: a sized study, or what is wrong with it."""

    study: Study | None
    problems: tuple[Problem, ...] = ()
    failed: str = ""  # why something that was read could not be computed


@st.cache_resource(show_spinner=False)
def board() -> Board:
    """The results of all windows; it outlives the sessions."""
    return Board()


@st.cache_resource(show_spinner=False, max_entries=32)
def understand(text: str) -> Understood:
    """Read, complete and size the axis of a text."""
    try:
        study = opened(read_text(text))
    except InputError as error:
        return Understood(None, error.problems)
    except Exception as error:  # whatever goes wrong, the page that mends it must come up
        return Understood(None, (), internal(error))
    try:
        return Understood(size(study))
    except SettlepointError as error:
        return Understood(study, (), str(error))
    except Exception as error:
        return Understood(study, (), internal(error))


def internal(error: Exception) -> str:
    """A fault of our own, as the user is told of it."""
    return f"internal error, please report it with the axis file: {type(error).__name__}: {error}"


# ---- the draft of this window ----------------------------------------------------------------------------------------


def arrive() -> None:
    """Find the draft that the address names; called first on every run."""
    asked = str(st.query_params.get("axis", ""))
    if st.session_state.get("key") is None or (asked != st.session_state["key"] and _exists(asked)):
        _take_up(asked)
    st.query_params["axis"] = st.session_state["key"]


def _exists(key: str) -> bool:
    return KEY.fullmatch(key) is not None and _read(key) is not None


def _read(key: str) -> Draft | None:
    try:
        return Drafts().read(key) if KEY.fullmatch(key) else None
    except InputError as error:
        notice(str(error))
        return None


def _take_up(asked: str) -> None:
    found = _read(asked)
    usable = found is not None or (KEY.fullmatch(asked) and not (Drafts().folder / f"{asked}.toml").exists())
    st.session_state["key"] = asked if usable else new_key()
    st.session_state["draft"] = found


def draft() -> Draft | None:
    """The draft as this window has seen it; None before an axis is opened."""
    found: Draft | None = st.session_state.get("draft")
    return found


def results() -> Results:
    return board().of(st.session_state["key"])


def understood() -> Understood | None:
    found = draft()
    return None if found is None else understand(found.text)


def study() -> Study | None:
    """The axis on the desk with everything that was computed of just this axis; None while its text is wrong."""
    known, on_desk = results(), understood()
    if on_desk is None or on_desk.study is None:
        return None
    found, axis = on_desk.study, on_desk.study.document.axis
    known.sized = found
    if axis.loops is None:
        return check(found)  # says what is missing; nothing is simulated without settings
    if known.is_settled(axis) and known.settled is not None:
        found = replace(found, settled=known.settled.settled)
        if known.is_tuned(axis) and known.tuned is not None and known.tuned.document.axis.loops == axis.loops:
            found = replace(found, tuned=known.tuned.tuned)
    return found


def keep(text: str) -> None:
    """Keep a new text of the draft: on the desk at once, and on disk under its revision."""
    seen = draft()
    assert seen is not None
    try:
        kept = Drafts().write(seen, text)
    except SettlepointError as error:
        kept = replace(seen, text=text)
        notice(f"Your change stands on this screen but could not be kept on disk: {error}")
    if kept.key != seen.key:
        board().copy(seen.key, kept.key)
        notice(FORKED)
    st.session_state["draft"], st.session_state["key"] = kept, kept.key
    st.query_params["axis"] = kept.key


def open_text(name: str, text: str) -> None:
    """Put another axis on the desk; the one before stays in its draft."""
    if draft() is not None:
        st.session_state["key"] = new_key()
    st.session_state["draft"] = Draft(st.session_state["key"], 0, plain_name(name), text)
    keep(text)


def open_draft(key: str) -> None:
    found = _read(key)
    if found is not None:
        st.session_state["key"], st.session_state["draft"] = key, found
        st.query_params["axis"] = key


def shipped_axes() -> list[Path]:
    """The axis files that come with the tool."""
    return sorted(shipped_folder().glob("*.toml"))


def open_shipped(path: Path) -> None:
    open_text(path.name, path.read_text(encoding="utf-8"))


def open_template() -> None:
    open_text("my-axis.toml", template())


def open_upload(name: str, data: bytes) -> None:
    """Put an uploaded file on the desk, right or wrong, as long as it is text of sensible size."""
    try:
        text = as_text(data, plain_name(name), LARGEST_FILE, "an axis file")
    except InputError as error:
        notice(f"{error}. The axis that was open stays open." if draft() is not None else f"{error}.")
        return
    open_text(name, text)


def type_value(path: str, typed: str) -> None:
    """Keep one value as typed, right or wrong; empty takes it out of the file."""
    seen = draft()
    assert seen is not None
    clean = typed.strip()
    if len(clean) > 1 and clean[0] == clean[-1] == '"':  # as the examples of the messages are written
        clean = clean[1:-1]
    try:
        keep(with_value(seen.text, path, clean))
    except InputError as error:
        notice(f"This change could not be made: {error}")


def type_text(text: str) -> None:
    """Keep the whole file as typed."""
    keep(text.replace("\r\n", "\n"))


def take_loops(loops: Loops) -> None:
    """Put settings under [loops] of the axis."""
    seen, found = draft(), study()
    if seen is not None and found is not None:
        keep(with_loops(seen.text, loops, found.document.axis.rotary))


def take_finished_tuning() -> None:
    """Settings that were found go to an axis that has none; where it has some, a button asks."""
    known, found = results(), study()
    job = known.tuning
    if found is None or job is None or not job.ended or job.seen or known.tuned is None:
        return
    job.seen = True
    axis: Axis = found.document.axis
    if axis.loops is None and known.is_tuned(axis) and known.tuned.tuned is not None and not job.failed:
        take_loops(known.tuned.tuned.loops)


# ---- what the user is told once --------------------------------------------------------------------------------------


def notice(text: str) -> None:
    """Tell something on the next drawing of the page."""
    st.session_state.setdefault("notices", []).append(text)


def notices() -> list[str]:
    """What is to be told now."""
    told: list[str] = st.session_state.pop("notices", [])
    return told
