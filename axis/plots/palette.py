"""The colour of each meaning, safe for colour-blind eyes (after Okabe and Ito), on light and on dark ground."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from axis.plots.figure import Meaning


@dataclass(frozen=True)
class Palette:
    """Colours of one ground."""

    ground: str
    text: str
    grid: str
    meanings: Mapping[Meaning, str]


LIGHT = Palette(
    ground="#ffffff",
    text="#1d2733",
    grid="#dde2e8",
    meanings={
        "nominal": "#0072b2",
        "worst": "#c04a00",
        "window": "#009e73",
        "command": "#4a5563",
        "limit": "#8a2e5d",
        "signal": "#6b4fa0",
    },
)
DARK = Palette(
    ground="#11161d",
    text="#e6ebf1",
    grid="#303945",
    meanings={
        "nominal": "#56b4e9",
        "worst": "#f0a03c",
        "window": "#2fc79a",
        "command": "#aeb9c6",
        "limit": "#e58fbd",
        "signal": "#b9a2ea",
    },
)
