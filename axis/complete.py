"""Stated axis to completed axis: fills what the file leaves open and tells each value it assumed."""

from __future__ import annotations

import math
from typing import TypeVar

from axis.completion import CompletedAxis, CompletedDrive, CompletedMotor, CompletedMove, Rates
from axis.contradictions import CURRENT_PERIOD, contradictions, cross_checked, refuse_endless
from axis.description.axis import Axis
from axis.description.drive import Drive
from axis.description.load import Friction
from axis.description.motor import CurrentBasis, Motor
from axis.description.moves import Move
from axis.description.transmission import BallScrew, Gearbox
from axis.errors import InputError
from axis.machine.drive import rectified_bus
from axis.machine.motor_constants import (
    current_to_peak,
    torque_constant_to_peak,
    voltage_constant_to_phase_peak,
    winding_to_phase,
)
from axis.machine.temperature import TWENTY_CELSIUS
from axis.machine.thermal import TwoBody, heat_capacity
from axis.mechanics.reflection import StageFloats, lump
from axis.mechanics.solids import STEEL_DENSITY, cylinder_inertia
from axis.mechanics.stages import screw_ratio
from axis.verdicts import Assumption

STANDARD_GRAVITY = 9.80665  # [m/s²] ISO 80000-3

# Taken where the file is silent; each use is told as an assumption.
GEARBOX_EFFICIENCY = 0.95
SCREW_EFFICIENCY = 0.90
DAMPING_RATIO = 0.02
BREAKAWAY_OVER_COULOMB = 1.3
STRIBECK_SPEED = 0.005  # [m/s], or [rad/s] where the axis turns
MODULATION_LIMIT = 0.90
PEAK_TIME = 1.0  # [s]
POLE_PAIRS = 4
ENCODER_COUNTS = 2**20
SETTLE_WITHIN = 0.05  # [s], for the observation only
AMBIENT = 313.15  # [K]
JERK_TIME = 0.02  # [s] from rest to full acceleration


T = TypeVar("T")


class _Notes:
    """Collects assumptions and warnings while an axis is completed."""

    def __init__(self) -> None:
        self.assumptions: list[Assumption] = []
        self.warnings: list[str] = []

    def assume(self, path: str, stated: T | None, default: T, text: str) -> T:
        if stated is not None:
            return stated
        value = default if isinstance(default, float | int | str) else None
        self.assumptions.append(Assumption(path, text, value))
        return default


def _there(value: T | None) -> T:
    """A value of which `contradictions` or the rules of the description have seen that it is stated."""
    assert value is not None
    return value


def complete(axis: Axis) -> CompletedAxis:
    """Complete a stated axis; raises InputError with every value that is missing or contradicts another."""
    problems = contradictions(axis)
    if problems:
        raise InputError(problems)
    notes = _Notes()
    stages = tuple(_stage(stage, f"transmission[{n}]", notes) for n, stage in enumerate(axis.transmission, start=1))
    chain = lump(stages)
    friction = _friction(axis, notes)
    motor = _motor(axis.motor, notes)
    drive = _drive(axis.drive, axis.tolerance.supply_voltage, notes)
    moves = _moves(axis, notes)
    refuse_endless(moves)
    if chain.stiffness == math.inf and axis.transmission:
        notes.assumptions.append(
            Assumption("transmission", "no stiffness is stated: the transmission is taken as rigid")
        )
    ambient = notes.assume("axis.ambient", axis.head.ambient, AMBIENT, "40 °C, at which motors are usually rated")
    settle_within = notes.assume(
        "window.settle_within",
        axis.window.settle_within,
        SETTLE_WITHIN,
        "50 ms, only for how long the rest is observed",
    )
    assert friction.breakaway is not None
    assert friction.stribeck_speed is not None
    return CompletedAxis(
        stated=axis,
        stages=stages,
        ratio=chain.ratio,
        motor_side_inertia=chain.motor_side_inertia,
        load_side_inertia=chain.load_side_inertia,
        stiffness=chain.stiffness,
        damping_ratio=chain.damping_ratio,
        motor_drag=chain.motor_drag,
        load_drag=chain.load_drag,
        load_inertial=axis.load.inertial,
        coulomb=friction.coulomb,
        breakaway=friction.breakaway,
        viscous=friction.viscous,
        stribeck_speed=friction.stribeck_speed,
        gravity=0.0 if axis.rotary else STANDARD_GRAVITY * math.sin(axis.head.incline),
        motor=motor,
        drive=drive,
        moves=moves,
        settle_within=settle_within,
        assumptions=tuple(notes.assumptions),
        ambient=ambient,
        warnings=tuple(notes.warnings),
    )


def _stage(stage: Gearbox | BallScrew, path: str, notes: _Notes) -> StageFloats:
    screw = isinstance(stage, BallScrew)
    if isinstance(stage, BallScrew):
        lead = _there(stage.lead)
        ratio = screw_ratio(-lead if stage.left_hand else lead)
        inertia = _screw_inertia(stage, path, notes)
        default_efficiency = SCREW_EFFICIENCY
    else:
        ratio = _there(stage.ratio)
        inertia = notes.assume(f"{path}.inertia", stage.inertia, 0.0, "no inertia is stated: taken as zero")
        default_efficiency = GEARBOX_EFFICIENCY
    efficiency = notes.assume(
        f"{path}.efficiency", stage.efficiency, default_efficiency, f"{default_efficiency:g}, common practice"
    )
    back = max(2.0 - 1.0 / efficiency, 0.01)
    damping = notes.assume(
        f"{path}.damping_ratio",
        stage.damping_ratio if stage.stiffness is not None else 0.0,
        DAMPING_RATIO,
        f"{DAMPING_RATIO:g}, common practice",
    )
    return StageFloats(
        ratio=ratio,
        inertia=inertia,
        drag=notes.assume(f"{path}.drag", stage.drag, 0.0, "no drag is stated: taken as zero"),
        efficiency=efficiency,
        efficiency_back=notes.assume(
            f"{path}.efficiency_back", stage.efficiency_back, back, f"{back:.3g} = 2 - 1/efficiency, by equal friction"
        ),
        stiffness=stage.stiffness if stage.stiffness is not None else math.inf,
        damping_ratio=damping,
        backlash=0.0,
        max_input_speed=stage.max_input_speed if stage.max_input_speed is not None else math.inf,
        linear_output=screw,
    )


def _screw_inertia(stage: BallScrew, path: str, notes: _Notes) -> float:
    if stage.inertia is not None:
        return stage.inertia
    if stage.diameter is None or stage.length is None:
        return notes.assume(f"{path}.inertia", None, 0.0, "neither inertia nor size is stated: taken as zero")
    inertia = cylinder_inertia(stage.diameter, stage.length, STEEL_DENSITY)
    return notes.assume(
        f"{path}.inertia", None, inertia, f"{inertia * 1e4:.3g} kg·cm², a full steel cylinder of the stated size"
    )


def _friction(axis: Axis, notes: _Notes) -> Friction:
    stated = axis.load.friction
    if stated is None:
        notes.assume("load.friction", None, 0.0, "no friction is stated: taken as zero")
        return Friction(coulomb=0.0, breakaway=0.0, viscous=0.0, stribeck_speed=STRIBECK_SPEED)
    breakaway = notes.assume(
        "load.friction.breakaway",
        stated.breakaway,
        BREAKAWAY_OVER_COULOMB * stated.coulomb,
        f"{BREAKAWAY_OVER_COULOMB:g} times the Coulomb friction, common practice",
    )
    speed = stated.stribeck_speed
    if breakaway > stated.coulomb:
        unit = "rad/s" if axis.rotary else "m/s"
        speed = notes.assume(
            "load.friction.stribeck_speed", speed, STRIBECK_SPEED, f"{STRIBECK_SPEED:g} {unit}, common practice"
        )
    return Friction(
        coulomb=stated.coulomb,
        breakaway=breakaway,
        viscous=stated.viscous,
        stribeck_speed=speed if speed is not None else STRIBECK_SPEED,
    )


def _motor(motor: Motor, notes: _Notes) -> CompletedMotor:
    constant, voltage = _constants(motor, notes)
    current_basis = notes.assume(
        "motor.current_basis", motor.current_basis, motor.torque_constant_basis or "rms", "the basis of torque_constant"
    )
    winding = motor.winding_basis or "phase"
    resistance = winding_to_phase(_there(motor.resistance), winding)
    inductance = winding_to_phase(_there(motor.inductance), winding)
    stated_saturated = motor.saturated_inductance
    saturated = notes.assume(
        "motor.saturated_inductance",
        None if stated_saturated is None else winding_to_phase(stated_saturated, winding),
        inductance,
        "the inductance: no saturation is stated",
    )

    def to_peak(value: float | None) -> float | None:
        return None if value is None else current_to_peak(value, current_basis)

    peak_current, peak_torque = to_peak(motor.peak_current), motor.peak_torque
    if peak_current is None:
        guess = _there(peak_torque) / constant
        peak_current = notes.assume("motor.peak_current", None, guess, "peak torque over torque constant, q-axis peak")
    if peak_torque is None:
        peak_torque = notes.assume(
            "motor.peak_torque", None, peak_current * constant, "peak current times torque constant"
        )
    return CompletedMotor(
        torque_constant=constant,
        voltage_constant=voltage,
        resistance=resistance,
        inductance=inductance,
        saturated_inductance=saturated,
        pole_pairs=notes.assume("motor.pole_pairs", motor.pole_pairs, POLE_PAIRS, f"{POLE_PAIRS}, common practice"),
        inertia=_there(motor.inertia),
        peak_current=peak_current,
        peak_torque=peak_torque,
        encoder_counts=notes.assume(
            "motor.encoder_counts", motor.encoder_counts, ENCODER_COUNTS, f"{ENCODER_COUNTS} counts per revolution"
        ),
        stall_torque=motor.stall_torque,
        stall_current=to_peak(motor.stall_current),
        rated_torque=motor.rated_torque,
        rated_current=to_peak(motor.rated_current),
        rated_speed=motor.rated_speed,
        max_speed=motor.max_speed,
        thermal=_thermal(motor),
        constants_temperature=notes.assume(
            "motor.constants_temperature", motor.constants_temperature, TWENTY_CELSIUS, "20 °C, common practice"
        ),
    )


def _thermal(motor: Motor) -> TwoBody | None:
    inner, outer = motor.winding_housing, motor.housing_ambient
    fast, slow = motor.winding_time_constant, motor.housing_time_constant
    if inner is None or outer is None or fast is None or slow is None:
        return None
    return TwoBody(inner, outer, heat_capacity(fast, inner), heat_capacity(slow, outer))


def _constants(motor: Motor, notes: _Notes) -> tuple[float, float]:
    """Torque and voltage constant in the internal basis, cross-checked where both are stated."""
    constant = voltage = None
    if motor.torque_constant is not None:
        constant = torque_constant_to_peak(motor.torque_constant, motor.torque_constant_basis or "rms")
    if motor.voltage_constant is not None:
        voltage = voltage_constant_to_phase_peak(
            motor.voltage_constant, motor.voltage_constant_basis or "line-line rms"
        )
    if constant is not None and voltage is not None:
        checked = cross_checked(motor)
        if checked is not None and checked.kind == "warning":
            notes.warnings.append(f"motor.torque_constant: {checked.text}")
        return constant, voltage
    if constant is not None:
        return constant, notes.assume(
            "motor.voltage_constant", None, constant / 1.5, "from the torque constant, phase peak"
        )
    volts = _there(voltage)
    return notes.assume("motor.torque_constant", None, 1.5 * volts, "from the voltage constant, per peak ampere"), volts


def _drive(drive: Drive, supply_tolerance: float, notes: _Notes) -> CompletedDrive:
    usual: CurrentBasis = "rms"
    basis = notes.assume("drive.current_basis", drive.current_basis, usual, "rms")
    continuous = _there(drive.continuous_current)
    peak = notes.assume("drive.peak_current", drive.peak_current, continuous, "the continuous current")
    nominal = drive.dc_link_nominal
    if nominal is None and drive.supply_voltage is not None:
        nominal = rectified_bus(drive.supply_voltage)
        notes.assume("drive.dc_link_nominal", None, nominal, f"{nominal:.4g} V, the rectified supply without load")
    nominal = _there(nominal)
    standstill = drive.standstill_current
    period = notes.assume("drive.current_period", drive.current_period, CURRENT_PERIOD, "62.5 us")
    velocity = notes.assume("drive.velocity_period", drive.velocity_period, 2.0 * period, "two current periods")
    position = notes.assume("drive.position_period", drive.position_period, 2.0 * velocity, "two velocity periods")
    return CompletedDrive(
        continuous_current=current_to_peak(continuous, basis),
        peak_current=current_to_peak(peak, basis),
        peak_time=notes.assume("drive.peak_time", drive.peak_time, PEAK_TIME, f"{PEAK_TIME:g} s"),
        standstill_current=None if standstill is None else current_to_peak(standstill, basis),
        bus_nominal=nominal,
        bus_low=drive.dc_link_min if drive.dc_link_min is not None else nominal * (1.0 - supply_tolerance),
        bus_high=nominal * (1.0 + supply_tolerance),
        modulation_limit=notes.assume(
            "drive.modulation_limit", drive.modulation_limit, MODULATION_LIMIT, f"{MODULATION_LIMIT:g}"
        ),
        rates=Rates(
            current_period=period,
            velocity_every=max(round(velocity / period), 1),
            position_every=max(round(position / velocity), 1),
            computation_delay=notes.assume(
                "drive.computation_delay", drive.computation_delay, period, "one current period"
            ),
        ),
    )


def _moves(axis: Axis, notes: _Notes) -> tuple[CompletedMove, ...]:
    payloads = {payload.name: payload.inertial for payload in axis.payloads}
    position, moves = 0.0, []
    for n, move in enumerate(axis.moves):
        distance = move.distance if move.distance is not None else (move.to or 0.0) - position
        position += distance
        jerk, is_open = _jerk(axis, move, n, notes)
        moves.append(
            CompletedMove(
                distance=distance,
                law=move.law,
                speed=move.speed,
                acceleration=move.acceleration,
                deceleration=move.deceleration if move.deceleration is not None else move.acceleration,
                jerk=jerk,
                jerk_open=is_open,
                duration=move.duration,
                dwell=move.dwell,
                payload=payloads[move.payload] if move.payload is not None else 0.0,
                force=move.force,
            )
        )
    return tuple(moves)


def _jerk(axis: Axis, move: Move, n: int, notes: _Notes) -> tuple[float | None, bool]:
    """The jerk limit in force for move `n`, and whether tuning may choose it."""
    if move.law != "jerk_limited" or move.acceleration is None:
        return None, False
    is_open = move.jerk is None or "jerk" in axis.tuning.may_change
    if axis.loops is not None and axis.loops.move_jerk is not None:
        return axis.loops.move_jerk[n], is_open
    assumed = move.acceleration / JERK_TIME
    unit = "rad/s³" if axis.rotary else "m/s³"
    text = f"{assumed:.4g} {unit}, full acceleration after {JERK_TIME * 1e3:g} ms, until tuning chooses it"
    return notes.assume(f"move[{n + 1}].jerk", move.jerk, assumed, text), is_open
