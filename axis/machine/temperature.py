"""What temperature does to copper and magnets."""

from __future__ import annotations

COPPER_COEFFICIENT = 0.00393  # [1/K] at 20 °C
TWENTY_CELSIUS = 293.15  # [K]
NEODYMIUM_COEFFICIENT = -0.0011  # [1/K] typical of NdFeB, grade dependent; MEMORY


def copper_resistance_ratio(
    temperature: float,
    stated_temperature: float = TWENTY_CELSIUS,
    coefficient: float = COPPER_COEFFICIENT,
    coefficient_temperature: float = TWENTY_CELSIUS,
) -> float:
    """Winding resistance over its value at the temperature where it was stated.

    Parameters
        temperature [K]: of the winding
        stated_temperature [K]: where the resistance was measured
        coefficient [1/K]: of copper
        coefficient_temperature [K]: to which the coefficient belongs
    Returns [1]
    R/R_0 = (1 + α·(T − T_α))/(1 + α·(T_0 − T_α))
    Source: [copper]
    """
    here = 1.0 + coefficient * (temperature - coefficient_temperature)
    return here / (1.0 + coefficient * (stated_temperature - coefficient_temperature))


def magnet_ratio(
    temperature: float, stated_temperature: float = TWENTY_CELSIUS, coefficient: float = NEODYMIUM_COEFFICIENT
) -> float:
    """Torque and voltage constant over their values at the temperature where they were stated.

    Parameters
        temperature [K]: of the magnets
        stated_temperature [K]: where the constants were measured
        coefficient [1/K]: of the remanence, negative
    Returns [1]
    1 + β·(T − T_0)
    Source: [magnets]; reversible losses only, below the knee of the magnet's grade
    """
    return 1.0 + coefficient * (temperature - stated_temperature)
