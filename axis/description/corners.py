"""Tolerances to corners: every combination of the ends that apply."""

from __future__ import annotations

import itertools
from collections.abc import Mapping
from dataclasses import fields

from axis.description.wishes import Tolerance

Corner = Mapping[str, float]  # tolerance name -> signed share, e.g. {"load_mass": 0.05, "friction": -0.4}

# A residual that vanishes at whole periods of the load's oscillation hides between the ends of these two.
FIVE_POINTS = ("load_mass", "stiffness")
SHARES = (-1.0, -0.5, 0.0, 0.5, 1.0)


def corners(tolerance: Tolerance) -> list[dict[str, float]]:
    """Every combination of tolerance ends; load mass and stiffness take five points each, ends included.

    The nominal axis is none of them: it is computed beside them.
    """
    names, points = [], []
    for field in fields(tolerance):
        share = float(getattr(tolerance, field.name))
        if share > 0:
            steps = SHARES if field.name in FIVE_POINTS else (-1.0, 1.0)
            names.append(field.name)
            points.append([step * share for step in steps])
    combinations = itertools.product(*points)
    return [dict(zip(names, shares, strict=True)) for shares in combinations if any(shares)]
