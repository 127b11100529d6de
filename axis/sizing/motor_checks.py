"""Checks of the motor: torque, current, speed, temperature."""

from __future__ import annotations

import math
from collections.abc import Callable

from axis.machine.envelope import continuous_torque, phase_voltage
from axis.sizing.available import available_torque, lowest_voltage
from axis.sizing.demand import CELSIUS, Load, inertia_ratio
from axis.sizing.finding import Corner, Finding, Rule
from axis.sizing.polynomials import Array

_SAMPLES = 16  # parts of one segment, before the best is narrowed down
_NARROWINGS = 40  # by the golden section
_GOLDEN = 0.5 * (math.sqrt(5.0) - 1.0)
RPM = 2.0 * math.pi / 60.0
SQRT2 = math.sqrt(2.0)


def largest_along(load: Load, share: Callable[[float, float], float]) -> tuple[float, float, float, tuple[int, ...]]:
    """The largest share of a limit along the cycle, where it stands, and the moves in which it exceeds one.

    The share of a speed and a torque grows with both where the motor drives, and is smaller where it brakes: the share
    at a segment's two peaks bounds the segment, and only what that bound leaves open is looked at closely.

    Parameters
        load: the axis over its cycle
        share [1]: of a speed [rad/s] and a torque [N·m]
    Returns [1], [rad/s], [N·m], moves counted from 0
    Source: [own]
    """
    course = load.trace
    bounds = [share(*peaks) for peaks in zip(load.peak_speeds.tolist(), load.peak_torques.tolist(), strict=True)]
    best, where = -1.0, (0.0, 0.0)
    above = set()
    for n in sorted(range(len(bounds)), key=bounds.__getitem__, reverse=True):
        if bounds[n] <= max(best, 0.0) and (bounds[n] <= 1.0 or int(course.move[n]) in above):
            continue
        found, point = _largest_inside(load, n, share)
        if found > 1.0:
            above.add(int(course.move[n]))
        if found > best:
            best, where = found, point
    return max(best, 0.0), *where, tuple(sorted(above))


def _largest_inside(load: Load, n: int, share: Callable[[float, float], float]) -> tuple[float, tuple[float, float]]:
    v0, v1, v2 = load.trace.speed[n].tolist()
    t0, t1, t2 = load.trace.torque[n].tolist()
    duration = float(load.trace.duration[n])

    def at(time: float) -> tuple[float, float]:
        return v0 + time * (v1 + time * v2), t0 + time * (t1 + time * t2)

    shares = [share(*at(duration * k / _SAMPLES)) for k in range(_SAMPLES + 1)]
    best = max(range(_SAMPLES + 1), key=shares.__getitem__)
    low, high = duration * max(best - 1, 0) / _SAMPLES, duration * min(best + 1, _SAMPLES) / _SAMPLES
    for _ in range(_NARROWINGS):
        left, right = high - _GOLDEN * (high - low), low + _GOLDEN * (high - low)
        if share(*at(left)) < share(*at(right)):
            low = left
        else:
            high = right
    time = max((0.5 * (low + high), duration * best / _SAMPLES), key=lambda each: share(*at(each)))
    return share(*at(time)), at(time)


def _peak_torque(corner: Corner) -> Finding:
    axis, voltage = corner.axis, lowest_voltage(corner.axis)

    def share(speed: float, torque: float) -> float:
        available = available_torque(axis, speed, speed * torque < 0.0, voltage)
        return abs(torque) / available if available > 0.0 else math.inf

    _, speed, torque, moves = largest_along(corner.load, share)
    limit = available_torque(axis, speed, speed * torque < 0.0, voltage)
    reason = f"at {abs(speed) / RPM:.4g} rpm on a bus of {axis.drive.bus_low:.4g} V"
    return Finding(abs(torque), limit, reason, moves=moves)


def _voltage(corner: Corner) -> Finding:
    axis, motor, voltage = corner.axis, corner.axis.motor, lowest_voltage(corner.axis)

    def needed(speed: float, torque: float) -> float:
        current = torque / motor.torque_constant
        return phase_voltage(
            current, speed, motor.resistance, motor.inductance, motor.voltage_constant, float(motor.pole_pairs)
        )

    _, speed, torque, moves = largest_along(corner.load, lambda speed, torque: needed(speed, torque) / voltage)
    reason = f"at {abs(speed) / RPM:.4g} rpm and {torque:.4g} N·m on a bus of {axis.drive.bus_low:.4g} V"
    return Finding(needed(speed, torque), voltage, reason, moves=moves)


def _peak_current(corner: Corner) -> Finding:
    motor = corner.axis.motor
    return peaks(corner, corner.load.peak_torques / motor.torque_constant / SQRT2, motor.peak_current / SQRT2)


def _rms_torque(corner: Corner) -> Finding:
    motor, load = corner.axis.motor, corner.load
    if motor.rated_torque is None or motor.rated_speed is None:
        return Finding(missing="motor.rated_torque and motor.rated_speed")
    stall = motor.stall_torque if motor.stall_torque is not None else motor.rated_torque
    speed = load.trace.mean_absolute_speed()
    limit = corner.strength * continuous_torque(speed, stall, motor.rated_torque, motor.rated_speed)
    return Finding(load.rms_torque, limit, f"at a mean speed of {speed / RPM:.4g} rpm")


def _standstill_torque(corner: Corner) -> Finding:
    motor, held = corner.axis.motor, corner.load.standstill_torque
    if held == 0.0:
        return Finding(neutral="nothing has to be held at rest")
    if motor.stall_torque is None:
        return Finding(missing="motor.stall_torque")
    resting = corner.load.trace.resting & (corner.load.peak_torques > corner.strength * motor.stall_torque)
    moves = tuple(sorted(set(corner.load.trace.move[resting].tolist())))
    return Finding(held, corner.strength * motor.stall_torque, moves=moves)


def _speed(corner: Corner) -> Finding:
    if corner.axis.motor.max_speed is None:
        return Finding(missing="motor.max_speed")
    return peaks(corner, corner.load.peak_speeds, corner.axis.motor.max_speed)


def _winding(corner: Corner) -> Finding:
    stated, hottest = corner.axis.stated.motor, corner.load.winding_temperature
    if hottest is None:
        return Finding(
            missing="motor.winding_housing, motor.housing_ambient, motor.winding_time_constant and "
            "motor.housing_time_constant"
        )
    if stated.max_winding_temperature is None:
        return Finding(missing="motor.max_winding_temperature")
    limit, ambient = stated.max_winding_temperature, corner.axis.ambient
    if math.isinf(hottest):
        return Finding(None, limit - CELSIUS, "the copper's loss grows faster than its heat flows off", ratio=math.inf)
    share = (hottest - ambient) / (limit - ambient) if limit > ambient else math.inf
    return Finding(
        hottest - CELSIUS, limit - CELSIUS, f"copper loss alone, ambient {ambient - CELSIUS:.4g} °C", ratio=share
    )


def _inertia(corner: Corner) -> Finding:
    return Finding(inertia_ratio(corner.axis), neutral="information: no fixed limit; the verdict of the loops decides")


def peaks(corner: Corner, values: Array, limit: float) -> Finding:
    """The largest of one value a segment beside one limit, and the moves that exceed it.

    Parameters
        corner: the axis at one corner
        values: one a segment
        limit [rad/s, N·m, N or A]: of all
    Returns the finding
    Source: [own]
    """
    moves = tuple(sorted(set(corner.load.trace.move[values > limit].tolist())))
    return Finding(float(values.max()), limit, moves=moves)


def at_least(what: str, unit: float = 1.0) -> Callable[[Finding], str]:
    """Remedy by another part.

    Parameters
        what: with braces where the demand stands, rounded up
        unit [1]: SI value of one unit of the number in the braces
    Returns the remedy of a finding
    Source: [own]
    """

    def text(finding: Finding) -> str:
        return what.format(_rounded_up(finding.demand / unit, 3)) if finding.demand is not None else ""

    return text


def _rounded_up(value: float, digits: int) -> str:
    """The value with so many significant digits, never below it."""
    if value <= 0.0:
        return "0"
    step = 10.0 ** (math.floor(math.log10(value)) - digits + 1)
    return f"{math.ceil(value / step * (1.0 - 1e-12)) * step:.{digits}g}"


def _torque_part(finding: Finding) -> str:
    assert finding.demand is not None
    return f"a motor and drive that give at least {_rounded_up(finding.demand, 3)} N·m {finding.reason}"


MOTOR_RULES = (
    Rule(
        "motor_peak_torque",
        "Motor peak torque against the torque-speed envelope",
        "N*m",
        "krishnan",
        _peak_torque,
        ("acceleration", "speed", "duration"),
        _torque_part,
    ),
    Rule(
        "motor_voltage",
        "Phase voltage (peak) at the lowest bus",
        "V",
        "krishnan",
        _voltage,
        ("speed", "acceleration", "duration"),
        at_least("a drive that gives a phase voltage of at least {} V (peak)"),
    ),
    Rule(
        "motor_peak_current",
        "Motor peak current (rms)",
        "A",
        "own",
        _peak_current,
        ("acceleration", "duration"),
        at_least("a motor with a peak current of at least {} A (rms)"),
    ),
    Rule(
        "motor_rms_torque",
        "RMS torque at mean speed against the continuous torque",
        "N*m",
        "common-practice",
        _rms_torque,
        ("acceleration", "duration", "dwell"),
        at_least("a motor with a continuous torque of at least {} N·m"),
    ),
    Rule(
        "motor_standstill_torque",
        "Holding torque at rest against the stall torque",
        "N*m",
        "own",
        _standstill_torque,
        (),
        at_least("a motor with a stall torque of at least {} N·m"),
    ),
    Rule(
        "motor_speed",
        "Motor speed",
        "rad/s",
        "own",
        _speed,
        ("speed", "duration"),
        at_least("a motor for at least {} rpm", RPM),
    ),
    Rule(
        "motor_winding_temperature",
        "Winding temperature of the repeated cycle",
        "degC",
        "own",
        _winding,
        ("acceleration", "duration", "dwell"),
        at_least("a motor whose winding may reach {} °C"),
    ),
    Rule("inertia_ratio", "Inertia beyond the rotor over the rotor", "1", "own", _inertia),
)
