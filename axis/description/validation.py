"""Rules between the values of a stated axis: what belongs together, what excludes what. No physics.

Every rule takes the parts it speaks about and returns all it finds. NaN stands for a value that could not be read and
has been told already: comparisons with it are false, so that no rule complains about it a second time.
"""

from __future__ import annotations

import difflib
import itertools
import math
from collections.abc import Callable, Mapping
from typing import Any

from axis.description.axis import Axis, Head
from axis.description.drive import Drive
from axis.description.load import Load, Payload
from axis.description.motor import BASES, Motor
from axis.description.moves import Move
from axis.description.settings import Loops
from axis.description.transmission import BallScrew, Gearbox, Stage
from axis.errors import Problem
from axis.units import Quantity, declarations, show

MOST_FILTERS = 4  # in the torque path, as the simulation carries them
WHOLE = 1e-6  # how near a ratio of two periods must come to a whole number
CLOSES = 1e-9  # of the path travelled: how near the end of a cycle must come to its start


def problems(axis: Axis) -> list[Problem]:
    """Every rule that a stated axis breaks."""
    return problems_in(vars(axis))


def problems_in(parts: Mapping[str, Any]) -> list[Problem]:
    """The same for an axis of which some parts (field names of `Axis`) could not be read and are absent or None."""
    found: list[Problem] = []
    for names, rule in _RULES:
        if all(parts.get(name) is not None for name in names):
            found += rule(*(parts[name] for name in names))
    return found


def _load(head: Head, load: Load, payloads: tuple[Payload, ...]) -> list[Problem]:
    found = _mass_or_inertia(head, load, "load", '"38 kg"', '"0.12 kg*m^2"')
    friction = load.friction
    if friction is not None and friction.breakaway is not None and friction.breakaway < friction.coulomb:
        rotary = head.travel == "rotary"
        rule = f"must be at least the Coulomb friction, {_text(friction, 'coulomb', rotary)}"
        value = _text(friction, "breakaway", rotary)
        right = f'breakaway = "{_text(friction, "coulomb", rotary)}" or more'
        found.append(Problem("load.friction.breakaway", rule, value, right))
    for n, payload in enumerate(payloads, start=1):
        if payload is None:
            continue
        found += _mass_or_inertia(head, payload, f"payload[{n}]", '"9 kg"', '"0.02 kg*m^2"')
        if payload.name in [other.name for other in payloads[: n - 1] if other is not None] and payload.name:
            found.append(
                Problem(f"payload[{n}].name", "stands twice; each payload has a name of its own", f'"{payload.name}"')
            )
    return found


def _mass_or_inertia(head: Head, part: Load | Payload, path: str, mass: str, inertia: str) -> list[Problem]:
    wanted, other, right = ("inertia", "mass", inertia) if head.travel == "rotary" else ("mass", "inertia", mass)
    found = []
    if getattr(part, other) is not None:
        rule = f"belongs to an axis of the other travel; this one is {head.travel} and takes {wanted}"
        found.append(Problem(f"{path}.{other}", rule, _text(part, other), f"{wanted} = {right}"))
    elif getattr(part, wanted) is None:
        found.append(Problem(f"{path}.{wanted}", "is missing", example=f"{wanted} = {right}"))
    return found


def _transmission(head: Head, transmission: tuple[Stage, ...]) -> list[Problem]:
    found: list[Problem] = []
    screws = [n for n, stage in enumerate(transmission, start=1) if isinstance(stage, BallScrew)]
    for n, stage in enumerate(transmission, start=1):
        path = f"transmission[{n}]"
        if isinstance(stage, BallScrew):
            found += _screw_place(head, n, screws, len(transmission))
            if stage.lead is None:
                found.append(Problem(f"{path}.lead", "is missing", example='lead = "20 mm"'))
        elif isinstance(stage, Gearbox):
            found += gearbox_problems(stage, path)
    if head.travel == "linear" and not screws and None not in transmission:
        rule = "has no stage that turns rotation into travel, and the axis is linear"
        found.append(Problem("transmission", rule, example='a last stage with kind = "ball_screw"'))
    return found


def _screw_place(head: Head, n: int, screws: list[int], count: int) -> list[Problem]:
    path = f"transmission[{n}].kind"
    if head.travel == "rotary":
        rule = "gives linear travel, and the axis is rotary"
        return [Problem(path, rule, '"ball_screw"', 'kind = "gearbox", or [axis] travel = "linear"')]
    if n != screws[0]:
        return [Problem(path, "turns rotation into travel a second time; one stage does", '"ball_screw"')]
    if n != count:
        return [Problem(path, "must be the last stage: what follows it would have to turn", '"ball_screw"')]
    return []


def gearbox_problems(stage: Gearbox, path: str = "") -> list[Problem]:
    """A gearbox has a ratio, and its peak torque is not below the nominal one."""
    found = []
    if stage.ratio is None:
        found.append(Problem(f"{path}.ratio", "is missing", example="ratio = 3, or use = a row of a catalogue"))
    elif stage.ratio == 0.0:
        found.append(Problem(f"{path}.ratio", "must not be zero", "0", "ratio = 3"))
    if stage.nominal_torque is not None and stage.peak_torque is not None and stage.peak_torque < stage.nominal_torque:
        value, nominal = _text(stage, "peak_torque"), _text(stage, "nominal_torque")
        right = f'peak_torque = "{nominal}" or more'
        found.append(Problem(f"{path}.peak_torque", f"is below the nominal torque, {nominal}", value, right))
    return found


def motor_problems(motor: Motor, path: str = "motor") -> list[Problem]:
    """The basis of each constant is asked, never guessed; continuous values stay below peak values."""
    found = []
    if motor.torque_constant is None and motor.voltage_constant is None:
        right = 'torque_constant = "0.72 N*m/A" and torque_constant_basis = "rms", or use = a row of a catalogue'
        found.append(Problem(f"{path}.torque_constant", "is missing, and so is voltage_constant", example=right))
    for basis, names in BASES.items():
        stated = [name for name in names if getattr(motor, name) is not None]
        falls_back = basis == "current_basis" and motor.torque_constant is not None  # takes that constant's basis
        if stated and getattr(motor, basis) is None and not falls_back:
            means = "mean" if len(stated) > 1 else "means"
            rule = f"is missing: {' and '.join(stated)} {means} nothing without it, and it is not guessed"
            right = declarations(Motor)[basis].example
            found.append(Problem(f"{path}.{basis}", rule, example=f"{basis} = {right}"))
    for low, high in (
        ("rated_torque", "peak_torque"),
        ("stall_torque", "peak_torque"),
        ("rated_current", "peak_current"),
        ("stall_current", "peak_current"),
        ("rated_speed", "max_speed"),
        ("saturated_inductance", "inductance"),
    ):
        found += _ordered(motor, path, low, high)
    return found


def _drive(drive: Drive) -> list[Problem]:
    found = []
    if drive.supply_voltage is None and drive.dc_link_nominal is None:
        right = 'supply_voltage = "400 V", or use = a row of a catalogue'
        found.append(Problem("drive.supply_voltage", "is missing, and so is dc_link_nominal", example=right))
    return found + drive_problems(drive)


def drive_problems(drive: Drive, path: str = "drive") -> list[Problem]:
    """Voltages in order, periods whole multiples, the delay within one current period."""
    found = _ordered(drive, path, "continuous_current", "peak_current")
    link = ("dc_link_min", "dc_link_nominal", "chopper_on_voltage", "dc_link_max")
    stated = [name for name in link if getattr(drive, name) is not None]
    for low, high in itertools.pairwise(stated):
        found += _ordered(drive, path, low, high)
    if drive.supply_phases == 2:
        found.append(Problem(f"{path}.supply_phases", "must be 1 or 3", "2", "supply_phases = 3"))
    uneven = _multiple(drive, path, "velocity_period", "current_period")
    found += uneven or _multiple(drive, path, "position_period", "velocity_period")
    delay, period = drive.computation_delay, drive.current_period
    if delay is not None and period is not None and delay > period * (1.0 + WHOLE):
        rule = f"is longer than one current period, {_text(drive, 'current_period')}"
        right = f'computation_delay = "{_text(drive, "current_period")}" or less'
        found.append(Problem(f"{path}.computation_delay", rule, _text(drive, "computation_delay"), right))
    return found


def _multiple(drive: Drive, path: str, slow: str, fast: str) -> list[Problem]:
    slower, faster = getattr(drive, slow), getattr(drive, fast)
    if slower is None or faster is None or not math.isfinite(slower / faster):
        return []
    times = max(round(slower / faster), 1)
    if abs(slower / faster - times) <= WHOLE * times:
        return []
    whole = f"is no whole multiple of {fast}, {_text(drive, fast, digits=6)}"
    right = f'{slow} = "{show(times * faster, _declared(drive, slow), digits=6)}"'
    return [Problem(f"{path}.{slow}", whole, _text(drive, slow, digits=6), right)]


def _moves(head: Head, moves: tuple[Move, ...], payloads: tuple[Payload, ...]) -> list[Problem]:
    if not moves:
        return [Problem("move", "is missing: an axis has at least one move", example='[[move]] distance = "300 mm"')]
    found: list[Problem] = []
    names = [payload.name for payload in payloads if payload is not None]
    for n, move in enumerate(moves, start=1):
        if move is not None:
            found += _one_move(move, f"move[{n}]", head.travel == "rotary", names)
    if None not in moves:
        found += _standstill(head, moves) + _cycle(head, moves)
    return found


def _one_move(move: Move, path: str, rotary: bool, names: list[str]) -> list[Problem]:
    found = []
    length, speed, acceleration = (
        ("90 deg", "360 deg/s", "2000 deg/s^2") if rotary else ("300 mm", "0.6 m/s", "9 m/s^2")
    )
    if move.distance is None and move.to is None:
        right = f'distance = "{length}", or to = "{length}"'
        found.append(Problem(f"{path}.distance", "is missing, and so is to", example=right))
    elif move.distance is not None and move.to is not None:
        found.append(
            Problem(f"{path}.to", "stands beside distance; a move has one of the two", _text(move, "to", rotary))
        )
    limits = [n for n in ("speed", "acceleration", "deceleration", "jerk") if getattr(move, n) is not None]
    if move.duration is not None and limits:
        rule = f"stands beside {limits[0]}; a move has its limits or its duration"
        found.append(Problem(f"{path}.duration", rule, _text(move, "duration")))
    elif move.duration is None:
        for name, right in (("speed", speed), ("acceleration", acceleration)):
            if getattr(move, name) is None:
                example = f'{name} = "{right}", or a duration in place of the limits'
                found.append(Problem(f"{path}.{name}", "is missing", example=example))
    if move.law == "constant_acceleration" and move.jerk is not None:
        rule = "has no meaning for the law constant_acceleration"
        found.append(Problem(f"{path}.jerk", rule, _text(move, "jerk", rotary), 'law = "jerk_limited"'))
    if move.payload is not None and move.payload not in names:
        near = difflib.get_close_matches(move.payload, names, n=1)
        rule = "names no payload of this file" + (f'; did you mean "{near[0]}"?' if near else "")
        right = f'payload = "{(near or names or ["full tray"])[0]}", and a [[payload]] of that name'
        found.append(Problem(f"{path}.payload", rule, f'"{move.payload}"', right))
    return found


def _positions(moves: tuple[Move, ...]) -> list[float]:
    """Where each move ends, from a start at zero."""
    at, ends = 0.0, []
    for move in moves:
        if move.to is not None and move.distance is None:
            at = move.to
        else:
            at += move.distance if move.distance is not None else math.nan
        ends.append(at)
    return ends


def _standstill(head: Head, moves: tuple[Move, ...]) -> list[Problem]:
    """A move of no length is a dwell, not a move."""
    found, before = [], 0.0
    for n, (move, end) in enumerate(zip(moves, _positions(moves), strict=True), start=1):
        if abs(end - before) <= CLOSES * max(abs(end), abs(before)):
            key = "distance" if move.distance is not None else "to"
            rule = "moves nowhere; lengthen the dwell of the move before it instead"
            found.append(Problem(f"move[{n}].{key}", rule, _text(move, key, head.travel == "rotary")))
        before = end
    return found


def _cycle(head: Head, moves: tuple[Move, ...]) -> list[Problem]:
    ends = _positions(moves)
    travelled = sum(abs(b - a) for a, b in itertools.pairwise([0.0, *ends]))
    if head.indexes or not abs(ends[-1]) > CLOSES * travelled:
        return []
    rotary = head.travel == "rotary"
    declared = _declared(moves[-1], "distance")
    there, back = (show(sign * ends[-1], declared, rotary, digits=6) for sign in (1.0, -1.0))
    rule = f"does not close: after move[{len(moves)}] the axis stands {there} from its start"
    right = f'one more move with distance = "{back}", or [axis] indexes = true'
    return [Problem("move", rule, f"the cycle of {len(moves)} move{'s' * (len(moves) > 1)}", right)]


def _loops(moves: tuple[Move, ...], loops: Loops) -> list[Problem]:
    found = []
    jerks = loops.move_jerk
    if jerks is not None and len(jerks) != len(moves):
        rule = f"must hold one jerk for each of the {len(moves)} moves"
        found.append(Problem("loops.move_jerk", rule, f"a list of {len(jerks)}", "one entry per [[move]], in order"))
    if len(loops.filters) > MOST_FILTERS:
        rule = f"are more than a drive's torque path holds here, {MOST_FILTERS}"
        found.append(Problem("loops.filters", rule, f"{len(loops.filters)} filters", "a low-pass and a notch"))
    for n, item in enumerate(loops.filters, start=1):
        if item is None:
            continue
        path = f"loops.filters[{n}]"
        for name, right in (("width", '"60 Hz"'), ("depth", "0.1")):
            if item.kind == "notch" and getattr(item, name) is None:
                found.append(Problem(f"{path}.{name}", "is missing: a notch needs it", example=f"{name} = {right}"))
            if item.kind == "lowpass" and getattr(item, name) is not None:
                found.append(
                    Problem(f"{path}.{name}", "belongs to a notch, and this is a low-pass", example="left out")
                )
    return found


def _ordered(part: Any, path: str, low: str, high: str) -> list[Problem]:
    small, large = getattr(part, low), getattr(part, high)
    if small is None or large is None or not small > large:
        return []
    value, limit = _text(part, low, digits=6), _text(part, high, digits=6)
    return [Problem(f"{path}.{low}", f"is above {high}, {limit}", value, f'{low} = "{limit}" or less')]


def _declared(part: Any, name: str) -> Quantity:
    declaration = declarations(type(part))[name]
    assert isinstance(declaration, Quantity)
    return declaration


def _text(part: Any, name: str, rotary: bool = False, digits: int = 4) -> str:
    return show(getattr(part, name), _declared(part, name), rotary, digits)


_Rule = Callable[..., list[Problem]]
_RULES: tuple[tuple[tuple[str, ...], _Rule], ...] = (
    (("head", "load", "payloads"), _load),
    (("head", "transmission"), _transmission),
    (("motor",), motor_problems),
    (("drive",), _drive),
    (("head", "moves", "payloads"), _moves),
    (("moves", "loops"), _loops),
)
