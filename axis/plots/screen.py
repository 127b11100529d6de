"""Figures for the screen: the neutral description as a plotly figure, in light or dark."""

from __future__ import annotations

from typing import TYPE_CHECKING

from axis.plots.figure import Figure, Shape, Stroke
from axis.plots.palette import DARK, LIGHT, Palette

if TYPE_CHECKING:
    import plotly.graph_objects as go

HEIGHT = 270  # pixels of the drawn part
ABOVE, BELOW = 12, 95  # pixels round it: beside the rows of words, and for the axis and the legend
ROW = 19  # pixels that one row of words above the figure takes

_DASHES: dict[Stroke, str] = {"solid": "solid", "dashed": "dash", "dotted": "dot"}
_SHAPES: dict[Shape, str] = {"circle": "circle-open", "diamond": "diamond-open", "square": "square-open"}


def to_plotly(figure: Figure, dark: bool = False) -> go.Figure:
    """The figure for `st.plotly_chart(..., theme=None, alt=figure.words)`; every colour is explicit."""
    import plotly.graph_objects as go

    palette = DARK if dark else LIGHT
    drawn = go.Figure()
    for line in figure.lines:
        drawn.add_scatter(
            x=line.x,
            y=line.y,
            name=line.name,
            mode="lines",
            line={"color": palette.meanings[line.meaning], "width": 2, "dash": _DASHES[line.stroke]},
        )
    for marker in figure.markers:
        drawn.add_scatter(
            x=[marker.x],
            y=[marker.y],
            name=marker.name,
            mode="markers",
            marker={
                "color": palette.meanings[marker.meaning],
                "size": 11,
                "symbol": _SHAPES[marker.shape],
                "line": {"width": 2},
            },
        )
    _strips(drawn, figure, palette)
    _marks(drawn, figure, palette)
    ruling = {"gridcolor": palette.grid, "zerolinecolor": palette.grid, "linecolor": palette.text, "ticks": "outside"}
    drawn.update_layout(
        height=HEIGHT + ROW * figure.rows + ABOVE + BELOW,
        margin={"l": 70, "r": 20, "t": ROW * figure.rows + ABOVE, "b": BELOW},
        paper_bgcolor=palette.ground,
        plot_bgcolor=palette.ground,
        font={"color": palette.text, "size": 13},
        legend={"orientation": "h", "yanchor": "top", "y": -0.24, "x": 0.0},
        xaxis={
            "title": {"text": figure.x.title, "font": {"size": 13}},
            "range": [figure.x.low, figure.x.high],
            **ruling,
        },
        yaxis={
            "title": {"text": figure.y.title, "font": {"size": 13}},
            "range": [figure.y.low, figure.y.high],
            **ruling,
        },
        hovermode="x unified",
    )
    return drawn


def _strips(drawn: go.Figure, figure: Figure, palette: Palette) -> None:
    for band in figure.bands:
        colour = palette.meanings[band.meaning]
        drawn.add_hrect(y0=band.low, y1=band.high, fillcolor=colour, opacity=0.16, line_width=0, layer="below")
        for edge in (band.low, band.high):
            drawn.add_hline(y=edge, line={"color": colour, "width": 1})
        drawn.add_annotation(
            text=band.name,
            x=1.0,
            xref="paper",
            xanchor="right",
            y=band.low,
            yanchor="top",
            showarrow=False,
            font={"color": colour, "size": 12},
        )
    for level in figure.levels:
        colour = palette.meanings[level.meaning]
        drawn.add_hline(y=level.y, line={"color": colour, "width": 1.5, "dash": _DASHES[level.stroke]})
        drawn.add_annotation(
            text=level.name,
            x=1.0,
            xref="paper",
            xanchor="right",
            y=level.y,
            yanchor="top",
            showarrow=False,
            font={"color": colour, "size": 12},
        )


def _marks(drawn: go.Figure, figure: Figure, palette: Palette) -> None:
    """Vertical marks; each rises to its own row of words above the figure."""
    middle = 0.5 * (figure.x.low + figure.x.high)
    for mark in figure.marks:
        colour = palette.meanings[mark.meaning]
        drawn.add_shape(
            type="line",
            x0=mark.x,
            x1=mark.x,
            xref="x",
            y0=0.0,
            y1=1.0 + ROW * (mark.row + 1) / HEIGHT,
            yref="paper",
            line={"color": colour, "width": 1.5, "dash": _DASHES[mark.stroke]},
        )
        drawn.add_annotation(
            text=mark.name,
            x=mark.x,
            xanchor="right" if mark.x > middle else "left",
            xshift=-4 if mark.x > middle else 4,
            y=1.0,
            yref="paper",
            yanchor="bottom",
            yshift=ROW * mark.row,
            showarrow=False,
            font={"color": colour, "size": 12},
            bgcolor=palette.ground,
        )
