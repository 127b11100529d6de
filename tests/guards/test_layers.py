"""Imports never climb, and libraries stay behind their fence: `docs/architecture.md` is read and held to its word."""

import ast
import re
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
PAGE = (ROOT / "docs" / "architecture.md").read_text(encoding="utf-8")
SOURCES = [*sorted((ROOT / "axis").rglob("*.py")), ROOT / "app.py"]
ANYWHERE = {"numpy", "scipy"}


def rows(first_column):
    """Cells of the table whose header begins with `first_column`."""
    lines = iter(PAGE.splitlines())
    next(line for line in lines if line.startswith(f"| {first_column} |"))
    next(lines)
    for line in lines:
        if not line.startswith("|"):
            return
        yield [cell.strip() for cell in line.strip("|").split("|")]


def bare(name):
    """`files/` and `cli.py` as the word an import uses."""
    return name.strip("` ").removesuffix("/").removesuffix(".py")


FLOORS = {bare(room): int(floor) for floor, room, _, _ in rows("floor")}
FENCES = {
    bare(one): {bare(room) for room in rooms.split(",")} for names, rooms in rows("library") for one in names.split(",")
}


def allowed(rule):
    """The rooms that a cell of the last column names."""
    rooms = set()
    for word in rule.split(", "):
        floors = re.fullmatch(r"floors? (\d+)(?:–(\d+))?", word)
        if floors:
            low, high = int(floors[1]), int(floors[2] or floors[1])
            rooms |= {room for room, floor in FLOORS.items() if low <= floor <= high}
        elif word.startswith("never "):
            rooms.discard(word.removeprefix("never "))
        elif word != "nothing":
            assert word in FLOORS, f"{word!r} is no room"
            rooms.add(word)
    return rooms


ALLOWED = {bare(room): allowed(rule) | {bare(room)} for _, room, _, rule in rows("floor")}


def room_of(path):
    parts = path.relative_to(ROOT).parts
    return bare(parts[1] if len(parts) > 1 else parts[0])


def imports(tree):
    """Every module a source imports, in any depth; `from axis import x` counts as `axis.x`."""
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, "relative import"
            yield from (f"axis.{alias.name}" for alias in node.names) if node.module == "axis" else (node.module,)


def broken_rules(room, tree):
    """What the imports of a source break."""
    for module in imports(tree):
        top, _, rest = module.partition(".")
        if top == "axis" and rest.split(".")[0] not in ALLOWED[room]:
            yield f"{room} may not import {module}"
        fence = FENCES.get(".".join(module.split(".")[:2]), FENCES.get(top))
        known = top == "axis" or top in sys.stdlib_module_names or top in ANYWHERE
        if fence is not None and room not in fence:
            yield f"{top if top != 'axis' else module} is fenced off from {room}"
        elif fence is None and not known:
            yield f"{top} stands in no row of the fences"


@pytest.mark.parametrize("path", SOURCES, ids=lambda path: str(path.relative_to(ROOT)))
def test_imports_keep_to_the_house(path):
    room = room_of(path)
    assert room in FLOORS, f"docs/architecture.md has no row for {room}"
    assert not list(broken_rules(room, ast.parse(path.read_text(encoding="utf-8"))))


def test_every_row_is_a_room():
    assert set(FLOORS) == {room_of(path) for path in SOURCES}


def test_the_table_itself_never_climbs_and_has_no_circle():
    for room, others in ALLOWED.items():
        for other in others - {room}:
            assert FLOORS[other] <= FLOORS[room], f"{room} may import {other} above it"
            assert room not in ALLOWED[other], f"{room} and {other} may import each other"


@pytest.mark.parametrize(
    ("room", "source"),
    [
        ("mechanics", "from axis.sizing.demand import demand"),
        ("mechanics", "def f():\n    from axis.tuning import tune"),
        ("loops", "import axis.sizing"),
        ("simulation", "from axis import sizing"),
        ("sizing", "import pint"),
        ("mechanics", "from axis.compiled import compiled"),
        ("motion", "import numba"),
        ("sheet", "import requests"),
        ("screens", "import axis.cli"),
    ],
)
def test_the_guard_bites(room, source):
    assert list(broken_rules(room, ast.parse(source)))
