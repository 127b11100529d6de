"""Mass and inertia of standard solids about their own axis."""

from __future__ import annotations

import math

STEEL_DENSITY = 7850.0  # [kg/m³]


def cylinder_mass(diameter: float, length: float, density: float = STEEL_DENSITY) -> float:
    """Mass of a solid cylinder.

    Parameters
        diameter [m]: outer
        length [m]: along the axis
        density [kg/m³]: of the material
    Returns [kg]
    m = ρ·π·d²·L/4
    Source: [own]
    """
    return density * math.pi * diameter**2 * length / 4.0


def cylinder_inertia(diameter: float, length: float, density: float = STEEL_DENSITY) -> float:
    """Inertia of a solid cylinder (disc, shaft, screw) about its axis.

    Parameters
        diameter [m]: outer; of a screw the diameter that gives its mass, between root and nominal
        length [m]: along the axis
        density [kg/m³]: of the material
    Returns [kg·m²]
    J = m·d²/8
    Source: [own]
    """
    return cylinder_mass(diameter, length, density) * diameter**2 / 8.0


def hollow_cylinder_mass(outer: float, inner: float, length: float, density: float = STEEL_DENSITY) -> float:
    """Mass of a hollow cylinder.

    Parameters
        outer [m]: outer diameter
        inner [m]: diameter of the bore
        length [m]: along the axis
        density [kg/m³]: of the material
    Returns [kg]
    m = ρ·π·(D² − d²)·L/4
    Source: [own]
    """
    return density * math.pi * (outer**2 - inner**2) * length / 4.0


def hollow_cylinder_inertia(outer: float, inner: float, length: float, density: float = STEEL_DENSITY) -> float:
    """Inertia of a hollow cylinder (tube, ring) about its axis.

    Parameters
        outer [m]: outer diameter
        inner [m]: diameter of the bore
        length [m]: along the axis
        density [kg/m³]: of the material
    Returns [kg·m²]
    J = m·(D² + d²)/8
    Source: [own]
    """
    return hollow_cylinder_mass(outer, inner, length, density) * (outer**2 + inner**2) / 8.0
