"""Writes docs/glossary.md from the declarations of what a user may state: `python -m tests.docs.glossary`."""

import dataclasses
import typing
from pathlib import Path

from axis.description.axis import Axis, Head
from axis.description.load import Friction
from axis.description.settings import CurrentLoop, Feedforward, PositionLoop, TorqueFilter, VelocityLoop
from axis.description.transmission import BallScrew, Gearbox
from axis.units import Quantity, declarations, pretty

PAGE = Path(__file__).parents[2] / "docs" / "glossary.md"

HEAD = """\
# Glossary

Every value that an axis file may state, made from the declarations in `axis/description/` by
`python -m tests.docs.glossary`; a test fails where this page and the declarations differ. *Kept in* is the unit of the
library and of results, for linear or rotary travel where they differ; *read in* is the unit of screens and sheets. Any
unit of the right dimension may be typed. *Side* says motor or load where confusion would hurt. The words of the method
itself (time to window, settling time, in-position signal, corner, margin, bound) are defined in [model.md](model.md).
"""

# Tables inside tables, where a reader meets them: heading and class.
INSIDE = {
    "load": [("load.friction", Friction)],
    "loops": [
        ("loops.current", CurrentLoop),
        ("loops.velocity", VelocityLoop),
        ("loops.position", PositionLoop),
        ("loops.feedforward", Feedforward),
        ("loops.filters", TorqueFilter),
    ],
}


def tables():
    """(heading, class) of every table of the axis file, in the order in which `Axis` declares them."""
    hints = typing.get_type_hints(Axis)
    yield "axis", Head
    for field in dataclasses.fields(Axis)[1:]:
        key = field.metadata.get("key", field.name)
        if key == "transmission":
            yield 'transmission, kind = "gearbox"', Gearbox
            yield 'transmission, kind = "ball_screw"', BallScrew
            continue
        kind = hints[field.name]
        yield key, next((part for part in (kind, *typing.get_args(kind)) if dataclasses.is_dataclass(part)), kind)
        yield from INSIDE.get(key, [])


def units(declared):
    """Unit it is kept in and unit it is read in, as they are printed."""
    if not isinstance(declared, Quantity):
        kept = "1" if declared.kind in ("ratio", "count") else declared.kind
        return kept, ""
    shown, shown_rotary = declared.shown or declared.unit, declared.shown_rotary or declared.rotary
    kept, read = pretty(declared.unit), pretty(shown)
    if declared.rotary:
        kept, read = f"{kept} or {pretty(declared.rotary)}", f"{read} or {pretty(shown_rotary)}"
    return kept, "" if read == kept else read


def row(name, declared):
    """One line of a table."""
    kept, read = units(declared)
    words = declared.words
    if getattr(declared, "choices", ()):
        words += ": " + ", ".join(f"`{choice}`" for choice in declared.choices)
    side = getattr(declared, "side", "")
    return f"| `{name}` | {declared.symbol} | {kept} | {read} | {words}. | {side} |"


def page():
    """The whole page as text."""
    parts = [HEAD]
    for heading, cls in tables():
        lines = [row(name, declared) for name, declared in declarations(cls).items()]
        if lines:
            table = "| name | symbol | kept in | read in | meaning | side |\n| --- | --- | --- | --- | --- | --- |\n"
            parts.append(f"## {heading}\n\n{table}" + "\n".join(lines) + "\n")
    return "\n".join(parts)


if __name__ == "__main__":
    PAGE.write_text(page(), encoding="utf-8")
