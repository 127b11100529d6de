"""Text fields for the values of an axis file: a row each, with its words, the text as typed and what was understood."""

from __future__ import annotations

from collections.abc import Iterable

import streamlit as st

from axis.errors import Problem
from axis.files.catalogue import shipped_folder, tables
from axis.files.drafts import Field, Section
from axis.screens import desk, look
from axis.sheet.values import ValueRow
from axis.units import Plain, Quantity, example, pretty, shown_unit

_TAGS = {"stated": "stated", "catalogue": "catalogue", "assumed": "assumed", "computed": "computed"}
_NAMES = {  # first step of a path → title of the part
    "axis": "Axis",
    "load": "Load",
    "load.friction": "Friction of the load",
    "payload": "Payload",
    "transmission": "Transmission, stage",
    "motor": "Motor",
    "drive": "Drive",
    "window": "In-position window",
    "move": "Move",
    "tolerance": "Tolerances, plus or minus",
    "tuning": "Asked of the tuning",
    "loops": "Settings, the moves' jerk",
    "loops.current": "Settings, current loop",
    "loops.velocity": "Settings, velocity loop",
    "loops.position": "Settings, position loop",
    "loops.feedforward": "Settings, feedforward",
    "loops.filters": "Settings, filter in the torque path",
}


def show_sections(
    shown: Iterable[Section], rotary: bool, rows: dict[str, ValueRow], problems: tuple[Problem, ...]
) -> None:
    """Every value of some tables as fields."""
    for section in shown:
        note = section.kind.replace("_", " ")
        st.html(look.part(title(section.path), f"{note}   [{section.path}]".strip()))
        own = [problem for problem in problems if problem.path == section.path]
        if own:
            st.html(look.box("To mend here:", map(str, own), "wrong"))
        for field in section.fields:
            if not field.typed and _of_other_travel(field.path, rotary):
                continue
            wrong = [str(problem) for problem in problems if problem.path == field.path]
            _row(field, rotary, rows.get(field.path), wrong)


def _of_other_travel(path: str, rotary: bool) -> bool:
    """A mass where the axis turns, an inertia where it travels in a line."""
    return path.startswith(("load.", "payload[")) and path.endswith(".mass" if rotary else ".inertia")


def title(path: str) -> str:
    """What a table of the file is called: "Move 2"."""
    name, _, number = path.rpartition("[")
    return f"{_NAMES[name]} {number.rstrip(']')}" if number and name else _NAMES[path]


def _row(field: Field, rotary: bool, understood: ValueRow | None, wrong: list[str]) -> None:
    words, typed, echo = st.columns([5, 4, 8], gap="small", vertical_alignment="center")
    declared = field.declaration
    key = field.path.rpartition(".")[2]
    with words:
        mark = look.symbol(declared.symbol)
        st.html(f'<div class="sp-label">{look.text(declared.words)} {mark} <small>{look.text(key)}</small></div>')
    with typed:
        _input(field, rotary)
    with echo:
        st.html(_echo(field, understood, wrong))


def _input(field: Field, rotary: bool) -> None:
    key = f"field {field.path}"
    declared = field.declaration
    label = f"{declared.words} ({field.path})"
    st.session_state[key] = field.typed  # the draft is the truth; the field shows what it keeps
    options = _options(field)
    if options is not None:
        st.session_state[key] = field.typed or None
        st.selectbox(
            label,
            options,
            key=key,
            index=None,
            label_visibility="collapsed",
            placeholder="not stated",
            accept_new_options=field.path.endswith("use"),
            on_change=_typed,
            args=(field.path, key),
        )
        return
    right = example(declared, rotary) if isinstance(declared, Quantity) else declared.example
    st.text_input(
        label,
        key=key,
        label_visibility="collapsed",
        placeholder=_hint(declared, rotary, right),
        autocomplete="off",
        on_change=_typed,
        args=(field.path, key),
    )


def _hint(declared: Quantity | Plain, rotary: bool, right: str) -> str:
    if isinstance(declared, Quantity):
        return f"in {pretty(shown_unit(declared, rotary))}, e.g. {right.strip('[]').strip(chr(34))}"
    return f"e.g. {right.strip('[]').strip(chr(34))}" if right else ""


def _options(field: Field) -> list[str] | None:
    """The words that may stand in a field of few words; what stands there now is always among them."""
    declared = field.declaration
    found: list[str]
    if field.path.endswith(".use"):
        found = _catalogue_rows(field.path.partition(".")[0].partition("[")[0])
    elif isinstance(declared, Plain) and declared.kind == "choice":
        found = list(declared.choices)
    elif isinstance(declared, Plain) and declared.kind == "flag":
        found = ["true", "false"]
    elif isinstance(declared, Plain) and declared.kind == "names" and len(declared.choices) == 1:
        found = list(declared.choices)
    else:
        return None
    return found if field.typed in ("", *found) else [field.typed, *found]


@st.cache_resource(show_spinner=False)
def _catalogue_rows(part: str) -> list[str]:
    kind = "gearbox" if part == "transmission" else part
    return [name for table in tables(kind, None, shipped_folder()) for name in table.names]


def _typed(path: str, key: str) -> None:
    desk.type_value(path, st.session_state[key] or "")


def _echo(field: Field, understood: ValueRow | None, wrong: list[str]) -> str:
    """What was understood of a value, or what is wrong with it, by name."""
    if wrong:
        said = "<br>".join(f"▲ {look.text(words)}" for words in wrong)
        return f'<div class="sp-echo sp-wrong" role="alert">{said}</div>'
    if understood is None:
        said = "" if field.typed else "<small>not stated</small>"
        return f'<div class="sp-echo">{said}</div>'
    tag = f'<span class="sp-tag {understood.origin}">{_TAGS[understood.origin]}</span>'
    as_used = f"<b>{look.text(understood.value)}</b>"
    typed = f" <small>typed {look.text(understood.echo)}</small>" if understood.echo else ""
    note = f" <small>{look.text(understood.note)}</small>" if understood.note else ""
    return f'<div class="sp-echo">{tag}{as_used}{typed}{note}</div>'
