"""Which cautions an axis needs, told by what the axis is, with the standard that governs each.

The tool computes; it does not certify. Local codes and licensed practice decide.
"""

from __future__ import annotations

from axis.description.axis import Axis
from axis.verdicts import Caution

PRELIMINARY = Caution(
    "Every figure here is computed and preliminary, to be verified on the machine. It supports the work of a qualified "
    "person and replaces no risk assessment; local codes and licensed practice come first.",
    "ISO 12100",
)
FIRST_ENABLE = Caution(
    "First enable with reduced torque, speed and following-error limits and nobody within reach: a wrong commutation "
    "angle, a lost encoder or a wrong sign makes the axis run away.",
    "ISO 12100",
)
DC_LINK = Caution(
    "The DC link stays charged after mains off. Wait the time stated on the drive and measure before touching; an "
    "overvoltage trip loses the controlled stop.",
    "IEC 61800-5-1, IEC 60204-1",
)
RESTART = Caution(
    "Prevent unexpected restart while anyone works at the axis; emergency stop and guards are set by the risk "
    "assessment, not by these settings. A software limit or an in-position signal is no safety function.",
    "ISO 14118, ISO 13850",
)
CRUSHING = Caution(
    "Moving parts and end stops crush. Keep the gaps the standard asks; a stopping time computed here is an estimate, "
    "safeguards are placed by the measured overall stopping performance.",
    "ISO 13854, ISO 13855",
)
HOT = Caution("Motor and braking resistor can be hot enough to burn.", "ISO 13732-1 (guidance)")
SUSPENDED = Caution(
    "The load is pulled down by gravity. Safe torque off removes the torque and does not hold the load: stopping, "
    "brake control and brake test are set by the risk assessment. A holding brake is no service brake. Support the "
    "load mechanically before tuning; preload the torque before the brake opens.",
    "ISO 12100, ISO 13849-1, IEC 61800-5-2",
)


def cautions(axis: Axis) -> tuple[Caution, ...]:
    """The cautions that belong to this axis, the most specific first."""
    suspended = (SUSPENDED,) if axis.head.incline != 0.0 else ()
    return (*suspended, FIRST_ENABLE, DC_LINK, RESTART, CRUSHING, HOT, PRELIMINARY)
