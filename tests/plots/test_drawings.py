"""Both renderers draw the same description: every name in words, every colour explicit, the same bytes again."""

from __future__ import annotations

from dataclasses import replace

from axis.plots.palette import DARK, LIGHT
from axis.plots.paper import to_svg
from axis.plots.screen import to_plotly
from axis.plots.tail import tail
from tests.sheet.sample import settled, study, trace

AXIS = study().axis
FIGURE = tail(AXIS, settled(AXIS).moves[0], trace(amplitude=120e-6), trace())
NAMED = [one.name for part in (FIGURE.lines, FIGURE.bands, FIGURE.markers, FIGURE.marks) for one in part]


def test_paper_says_everything_in_words() -> None:
    svg = to_svg(FIGURE).decode()
    assert svg.startswith("<?xml")
    for name in (*NAMED, FIGURE.x.title, FIGURE.y.title):
        assert f">{name}<" in svg
    assert "<dc:date>" not in svg


def test_paper_is_the_same_twice() -> None:
    assert to_svg(FIGURE) == to_svg(FIGURE)


def test_names_are_never_read_as_formulas() -> None:
    odd = replace(FIGURE, lines=tuple(replace(one, name=r"$\frac{1}{") for one in FIGURE.lines))
    assert r"$\frac{1}{" in to_svg(odd).decode()


def test_screen_says_everything_in_words_on_light_and_dark_ground() -> None:
    for dark, palette in ((False, LIGHT), (True, DARK)):
        drawn = to_plotly(FIGURE, dark)
        words = [one.name for one in drawn.data] + [one.text for one in drawn.layout.annotations]
        assert set(NAMED) <= set(words)
        assert drawn.layout.paper_bgcolor == palette.ground
        colours = {one.line.color for one in drawn.data if one.mode == "lines"}
        assert colours == {palette.meanings["worst"], palette.meanings["nominal"]}
        assert len({one.line.dash for one in drawn.data if one.mode == "lines"}) == 2
        assert list(drawn.layout.xaxis.range) == [FIGURE.x.low, FIGURE.x.high]


def _luminance(colour: str) -> float:
    """Relative luminance after WCAG 2.1."""
    parts = [int(colour[n : n + 2], 16) / 255.0 for n in (1, 3, 5)]
    linear = [part / 12.92 if part <= 0.04045 else ((part + 0.055) / 1.055) ** 2.4 for part in parts]
    return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]


def test_every_colour_stands_out_from_its_ground() -> None:
    for palette in (LIGHT, DARK):
        for colour in (*palette.meanings.values(), palette.text):
            pair = sorted((_luminance(colour), _luminance(palette.ground)))
            ratio = (pair[1] + 0.05) / (pair[0] + 0.05)
            assert ratio >= 3.0, (colour, ratio)  # WCAG 2.1, 1.4.11: graphical objects
