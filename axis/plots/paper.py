"""Figures for paper: the neutral description drawn by matplotlib as SVG, the same bytes every time."""

from __future__ import annotations

import io
import math
import threading
from pathlib import Path
from typing import TYPE_CHECKING, Any

from axis.plots.figure import Figure, Shape, Stroke
from axis.plots.palette import LIGHT

if TYPE_CHECKING:
    from matplotlib.axes import Axes

MM = 1.0 / 25.4  # inches
TEXT = 6.0  # points
ROW = 8.2  # points that one row of words above the figure takes

_DASHES: dict[Stroke, Any] = {"solid": "-", "dashed": (0, (4.0, 2.0)), "dotted": (0, (1.0, 1.6))}
_SHAPES: dict[Shape, str] = {"circle": "o", "diamond": "D", "square": "s"}
# Texts stay text and ids come from a fixed salt. matplotlib's settings belong to the whole process, hence the lock.
_SETTINGS: Any = {
    "svg.hashsalt": "settlepoint",
    "svg.fonttype": "none",
    "font.family": ["DejaVu Sans"],
    "font.size": TEXT,
}
_SETTINGS_LOCK = threading.Lock()


def font_folder() -> Path:
    """Where the fonts of the figures lie, for what prints them."""
    import matplotlib

    return Path(matplotlib.get_data_path()) / "fonts" / "ttf"


def to_svg(figure: Figure, width: float = 88.0, height: float = 60.0) -> bytes:
    """The figure as SVG, `width` and `height` in millimetres; needs no screen and keeps no state."""
    import matplotlib
    from matplotlib.backends.backend_svg import FigureCanvasSVG
    from matplotlib.figure import Figure as Canvas

    with _SETTINGS_LOCK, matplotlib.rc_context(_SETTINGS):
        canvas = Canvas(figsize=(width * MM, height * MM))
        FigureCanvasSVG(canvas)
        points = height * MM * 72.0
        named = _names(figure)
        above, below, left = ROW * figure.rows + 3.0, 23.0 + 8.5 * math.ceil(named / 2), 33.0
        across = width * MM * 72.0
        axes = canvas.add_axes(
            (left / across, below / points, (across - left - 5.0) / across, (points - above - below) / points)
        )
        _draw(axes, figure)
        if named:
            _legend(canvas, axes, left / across)
        out = io.BytesIO()
        canvas.savefig(out, format="svg", metadata={"Date": None, "Creator": None})
    return out.getvalue()


def _names(figure: Figure) -> int:
    """Entries of the legend; a single trace is named by its axis."""
    entries = len(figure.bands) + len(figure.lines) + len(figure.markers)
    return entries if entries > 1 else 0


def _legend(canvas: Any, axes: Axes, left: float) -> None:
    legend = canvas.legend(
        *axes.get_legend_handles_labels(),
        loc="lower left",
        bbox_to_anchor=(left, 0.0),
        ncols=2,
        frameon=False,
        borderaxespad=0.0,
        handlelength=2.4,
        columnspacing=1.4,
        labelspacing=0.25,
        fontsize=TEXT - 0.4,
        labelcolor=LIGHT.text,
    )
    for text in legend.get_texts():
        text.set_parse_math(False)


def _draw(axes: Axes, figure: Figure) -> None:
    colour = LIGHT.meanings
    axes.set_xlim(figure.x.low, figure.x.high)
    axes.set_ylim(figure.y.low, figure.y.high)
    axes.set_xlabel(figure.x.title, color=LIGHT.text, labelpad=1.5, parse_math=False)
    axes.set_ylabel(figure.y.title, color=LIGHT.text, labelpad=1.5, parse_math=False)
    axes.grid(color=LIGHT.grid, linewidth=0.4)
    axes.tick_params(length=2.0, width=0.4, colors=LIGHT.text, pad=1.5)
    for side, spine in axes.spines.items():
        spine.set_visible(side in ("left", "bottom"))
        spine.set_linewidth(0.5)
        spine.set_color(LIGHT.text)
    for band in figure.bands:
        axes.axhspan(band.low, band.high, facecolor=colour[band.meaning], alpha=0.14, linewidth=0.0, label=band.name)
        for edge in (band.low, band.high):
            axes.axhline(edge, color=colour[band.meaning], linewidth=0.6)
    for level in figure.levels:
        axes.axhline(level.y, color=colour[level.meaning], linewidth=0.7, linestyle=_DASHES[level.stroke])
        axes.annotate(
            level.name,
            (1.0, level.y),
            xycoords=("axes fraction", "data"),
            xytext=(-2.0, -1.5),
            textcoords="offset points",
            ha="right",
            va="top",
            color=colour[level.meaning],
            parse_math=False,
        )
    for line in figure.lines:
        axes.plot(
            line.x,
            line.y,
            color=colour[line.meaning],
            linewidth=1.1 if line.stroke == "solid" else 0.9,
            linestyle=_DASHES[line.stroke],
            label=line.name,
        )
    for marker in figure.markers:
        axes.plot(
            [marker.x],
            [marker.y],
            linestyle="none",
            marker=_SHAPES[marker.shape],
            markersize=4.0,
            markerfacecolor=LIGHT.ground,
            markeredgecolor=colour[marker.meaning],
            markeredgewidth=1.1,
            label=marker.name,
            clip_on=False,
            zorder=5,
        )
    _draw_marks(axes, figure)


def _draw_marks(axes: Axes, figure: Figure) -> None:
    """Vertical marks; each rises to its own row of words above the figure."""
    middle = 0.5 * (figure.x.low + figure.x.high)
    for mark in figure.marks:
        colour, late = LIGHT.meanings[mark.meaning], mark.x > middle
        axes.axvline(mark.x, color=colour, linewidth=0.8, linestyle=_DASHES[mark.stroke])
        axes.annotate(
            mark.name,
            (mark.x, 1.0),
            xycoords=("data", "axes fraction"),
            xytext=(-2.5 if late else 2.5, ROW * mark.row + 2.0),
            textcoords="offset points",
            ha="right" if late else "left",
            va="bottom",
            color=colour,
            parse_math=False,
            bbox={"facecolor": LIGHT.ground, "edgecolor": "none", "pad": 0.6},
            zorder=6,
            annotation_clip=False,
        )
        axes.annotate(
            "",
            (mark.x, 1.0),
            xycoords=("data", "axes fraction"),
            xytext=(0.0, ROW * (mark.row + 1)),
            textcoords="offset points",
            arrowprops={"arrowstyle": "-", "color": colour, "linewidth": 0.8, "shrinkA": 0.0, "shrinkB": 0.0},
            annotation_clip=False,
            zorder=3,
        )
