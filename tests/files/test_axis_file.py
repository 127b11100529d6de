"""Reading an axis file: what the document holds, and that the units typed make no difference."""

from __future__ import annotations

import hashlib
import math
from dataclasses import fields, is_dataclass
from pathlib import Path
from typing import Any

import pytest

from axis.description.axis import Axis
from axis.files.axis_file import read, read_text
from axis.files.catalogue import shipped_folder
from axis.files.template import template

# The same axis twice. Right column: 1 in = 25.4 mm, 1 lb = 0.45359237 kg, 1 lbf = 0.45359237 · 9.80665 N (exact).
POUND_FORCE = 0.45359237 * 9.80665
TWICE = [
    ('"38 kg"', f'"{38 / 0.45359237!r} lb"'),
    ('"22 N"', f'"{22 / POUND_FORCE!r} lbf"'),
    ('"31 N"', f'"{31 / POUND_FORCE * 16!r} ozf"'),
    ('"45 N*s/m"', f'"{45 / POUND_FORCE * 0.0254!r} lbf*s/in"'),
    ('"4 mm/s"', f'"{4 / 25.4 * 60!r} in/min"'),
    ('"5 kg"', f'"{5000 / 28.349523125!r} oz"'),
    ('"20 mm"', f'"{20 / 25.4!r} in"'),
    ('"1.1 m"', f'"{1.1 / 0.3048!r} ft"'),
    ('"60 N/um"', f'"{60e6 / POUND_FORCE * 0.0254!r} lbf/in"'),
    ('"0.06 N*m"', f'"{0.06 / POUND_FORCE / 0.0254 * 16!r} ozf*in"'),
    ('"3000 rpm"', f'"{100 * math.pi!r} rad/s"'),
    ('"5000 rpm"', '"5000 1/min"'),
    ('"0.72 N*m/A"', f'"{0.72 / POUND_FORCE / 0.0254!r} lbf*in/A"'),
    ('"43.5 V/krpm"', '"0.0435 V/rpm"'),
    ('"1.5 kg*cm^2"', f'"{1.5e-4 / 0.45359237 / 0.0254**2!r} lb*in^2"'),
    ('"8.4 N*m"', f'"{8.4 / POUND_FORCE / 0.3048!r} lbf*ft"'),
    ('"300 mm"', f'"{300 / 25.4!r} in"'),
    ('"-300 mm"', f'"{-300 / 25.4!r} in"'),
    ('"25 um"', f'"{0.025 / 25.4!r} in"'),
    ('"6 m/s^2"', f'"{6 / 0.0254!r} in/s^2"'),
    ('"30 ms"', '"0.03 s"'),
]


def _floats(part: Any, path: str = "") -> dict[str, float]:
    if is_dataclass(part):
        return {k: v for f in fields(part) for k, v in _floats(getattr(part, f.name), f"{path}.{f.name}").items()}
    if isinstance(part, tuple):
        return {k: v for n, item in enumerate(part) for k, v in _floats(item, f"{path}[{n}]").items()}
    return {path: part} if isinstance(part, float) else {}


def test_units_typed_make_no_difference() -> None:
    text = template()
    for si, other in TWICE:
        assert si in text, si
        text = text.replace(si, other)
    metric, imperial = _floats(read_text(template()).axis), _floats(read_text(text).axis)
    assert imperial == pytest.approx(metric, rel=1e-12)
    assert len(metric) > 50


def test_document_remembers_what_was_typed(tmp_path: Path) -> None:
    path = tmp_path / "axis.toml"
    path.write_text(template(), encoding="utf-8")
    document = read(path)
    assert (document.path, document.text) == (path, template())
    assert document.digest == hashlib.sha256(path.read_bytes()).hexdigest()
    assert document.typed["load.friction.viscous"] == "45 N*s/m"
    assert document.typed["move[2].distance"] == "-300 mm"
    assert document.typed["motor.pole_pairs"] == "4"
    assert "axis.ambient" not in document.typed
    assert (document.from_catalogue, document.catalogue_digests) == ({}, {})
    assert isinstance(document.axis, Axis)
    assert document.axis.moves[1].distance == pytest.approx(-0.3, rel=1e-15)


def test_every_key_the_template_shows_is_right() -> None:
    # The keys behind a # as well: each comment that holds `key = value` reads once the # is away.
    plain = template()
    for shown in ('# ambient = "30 degC"', "# indexes = true"):
        assert shown in plain
        read_text(plain.replace(shown, shown[2:]))
    stage = plain[plain.index("# [[transmission]]") : plain.index('[[transmission]]\nkind = "ball_screw"')]
    document = read_text(plain.replace(stage, stage.replace("\n# ", "\n")[2:]))
    assert [stage.kind for stage in document.axis.transmission] == ["gearbox", "ball_screw"]
    for table in ("motor", "drive"):
        start, end = plain.index(f"[{table}]\n"), plain.index("\n\n", plain.index(f"[{table}]\n"))
        use = plain[start:end].splitlines()[1][2:]
        document = read_text(f"{plain[:start]}[{table}]\n{use}{plain[end:]}")
        assert document.from_catalogue


def test_shipped_axes_read() -> None:
    shipped = sorted(shipped_folder().glob("*.toml"))
    assert shipped
    for path in shipped:
        assert "invented" in path.read_text(encoding="utf-8").splitlines()[0].lower()
        assert read(path).axis.moves
