"""Checks of the drive and of its DC link."""

from __future__ import annotations

import math

import numpy as np

from axis.completion import CompletedAxis
from axis.machine.drive import bucket_capacity, bucket_step, chopper_power, link_energy, mean_power
from axis.sizing.finding import Corner, Finding, Rule
from axis.sizing.motor_checks import SQRT2, at_least, peaks
from axis.sizing.polynomials import cut, product, roots, shifted
from axis.sizing.trace import Trace

NOTHING_RETURNED = "no energy returns to the DC link"
NOTHING_LEFT = "the DC link stores all that returns"


def _continuous(corner: Corner) -> Finding:
    return Finding(corner.load.rms_current / SQRT2, corner.axis.drive.continuous_current / SQRT2)


def _peak(corner: Corner) -> Finding:
    currents = corner.load.peak_torques / corner.axis.motor.torque_constant / SQRT2
    return peaks(corner, currents, corner.axis.drive.peak_current / SQRT2)


def _bucket(corner: Corner) -> Finding:
    drive = corner.axis.drive
    capacity = bucket_capacity(drive.continuous_current, drive.peak_current, drive.peak_time)
    if math.isinf(capacity):
        return Finding(neutral="the drive has no peak current above its continuous current")
    level, growth = bucket_level(corner.axis, corner.load.trace)
    if growth > 0.0:
        return Finding((capacity + growth) / 2.0, capacity / 2.0, "every cycle leaves it a little fuller")
    return Finding(level / 2.0, capacity / 2.0)


def bucket_level(axis: CompletedAxis, course: Trace) -> tuple[float, float]:
    """[A²·s] Highest level of the current-time bucket once the cycle repeats, and what each cycle adds; q-axis peak.

    Between the sign changes of i² − I_cont² the level is monotone; `bucket_step` takes the exact mean of i² of a part.
    """
    continuous = axis.drive.continuous_current
    current = course.torque / axis.motor.torque_constant
    squared = product(current, current)
    above = squared.copy()
    above[:, 0] -= continuous**2
    row, start, duration = cut(course.duration, roots(above, course.duration))
    part = shifted(squared[row], start)
    powers = np.arange(1.0, part.shape[1] + 1.0)
    means = (part / powers * duration[:, None] ** (powers - 1.0)).sum(axis=1)
    steps = list(zip(np.sqrt(np.maximum(means, 0.0)).tolist(), duration.tolist(), strict=True))
    level, highest, ends = 0.0, 0.0, []
    for _ in range(3):  # from empty the level repeats from the second cycle on, unless it grows for ever
        highest = 0.0
        for mean, time in steps:
            level = bucket_step(level, mean, continuous, time)
            highest = max(highest, level)
        ends.append(level)
    growth = ends[2] - ends[1]
    return highest, growth if growth > 1e-9 * highest else 0.0


def _standstill(corner: Corner) -> Finding:
    limit = corner.axis.drive.standstill_current
    if limit is None:
        return Finding(neutral="the drive states no current of its own for standstill")
    if corner.load.standstill_torque == 0.0:
        return Finding(neutral="nothing has to be held at rest")
    held = corner.load.standstill_torque / corner.axis.motor.torque_constant
    return Finding(held / SQRT2, limit / SQRT2)


def _resistor_mean(corner: Corner) -> Finding:
    demand = mean_power(corner.load.returned.resistor_energy, corner.load.trace.cycle_time)
    limit = corner.axis.stated.drive.braking_resistor_power
    neutral = _without_resistor(corner)
    if neutral:
        return Finding(neutral=neutral)
    if limit is None:
        return Finding(missing="drive.braking_resistor_power")
    return Finding(demand, limit)


def _resistor_peak(corner: Corner) -> Finding:
    drive = corner.axis.stated.drive
    neutral = _without_resistor(corner)
    if neutral:
        return Finding(neutral=neutral)
    if drive.braking_resistor_resistance is None:
        return Finding(missing="drive.braking_resistor_resistance")
    if drive.chopper_on_voltage is None:
        return Finding(missing="drive.chopper_on_voltage")
    limit = chopper_power(drive.chopper_on_voltage, drive.braking_resistor_resistance)
    return Finding(corner.load.returned.peak_power, limit)


def _without_resistor(corner: Corner) -> str:
    """Why no resistor is needed; empty where one is."""
    if corner.load.returned.energy == 0.0:
        return NOTHING_RETURNED
    drive = corner.axis.stated.drive
    knows_storage = drive.dc_link_capacitance is not None and drive.chopper_on_voltage is not None
    if knows_storage and corner.load.returned.resistor_energy == 0.0:
        return NOTHING_LEFT
    if drive.braking_resistor_resistance is None and drive.braking_resistor_power is None and _link_known(corner):
        return "there is no braking resistor: the DC link alone counts"
    return ""


def _link_known(corner: Corner) -> bool:
    drive = corner.axis.stated.drive
    return drive.dc_link_capacitance is not None and drive.dc_link_max is not None


def _link(corner: Corner) -> Finding:
    drive, back = corner.axis.stated.drive, corner.load.returned
    if back.energy == 0.0:
        return Finding(neutral=NOTHING_RETURNED)
    if drive.braking_resistor_resistance is not None and drive.chopper_on_voltage is not None:
        return Finding(neutral="the braking resistor keeps the DC link below its trip")
    if drive.dc_link_capacitance is None or drive.dc_link_max is None:
        lacking = "drive.dc_link_capacitance and drive.dc_link_max"
        return Finding(missing=f"{lacking}, or a braking resistor with drive.chopper_on_voltage")
    high = corner.axis.drive.bus_high
    limit = max(link_energy(drive.dc_link_capacitance, high, drive.dc_link_max), 0.0)
    return Finding(back.largest_energy, limit, f"from a bus of {high:.4g} V up to the trip")


DRIVE_RULES = (
    Rule(
        "drive_continuous_current",
        "RMS current against the drive's continuous current (rms)",
        "A",
        "own",
        _continuous,
        ("acceleration", "duration", "dwell"),
        at_least("a drive with a continuous current of at least {} A (rms)"),
    ),
    Rule(
        "drive_peak_current",
        "Peak current against the drive's peak current (rms)",
        "A",
        "own",
        _peak,
        ("acceleration", "duration"),
        at_least("a drive with a peak current of at least {} A (rms)"),
    ),
    Rule(
        "drive_peak_time",
        "Current-time bucket of the drive over the repeated cycle (rms)",
        "A^2*s",
        "own",
        _bucket,
        ("acceleration", "duration", "dwell"),
        at_least("a drive whose peak current and its time leave {} A²·s (rms) above the continuous current"),
    ),
    Rule(
        "drive_standstill_current",
        "Holding current against the drive's current at standstill (rms)",
        "A",
        "own",
        _standstill,
        (),
        at_least("a drive with a standstill current of at least {} A (rms)"),
    ),
    Rule(
        "braking_resistor_power",
        "Mean power of the braking resistor",
        "W",
        "own",
        _resistor_mean,
        ("acceleration", "dwell", "duration"),
        at_least("a braking resistor for at least {} W"),
    ),
    Rule(
        "braking_peak_power",
        "Peak power returned against what the braking resistor takes",
        "W",
        "own",
        _resistor_peak,
        ("acceleration", "speed", "duration"),
        at_least("a chopper and resistor that take at least {} W"),
    ),
    Rule(
        "dc_link_energy",
        "Energy of one braking against what the DC link stores below its trip",
        "J",
        "own",
        _link,
        ("speed", "acceleration", "duration"),
        at_least("a DC link that stores at least {} J, or a braking resistor"),
    ),
)
