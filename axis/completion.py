"""The completed axis: every value present, in coherent units, with the list of what was assumed (see `complete.py`).

All later rooms receive only completed axes, so that no formula asks whether a value is there. What stays unknown is
None in a few marked fields, and the checks that need it are `not evaluated`.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, replace

from axis.description.axis import Axis
from axis.description.moves import Law
from axis.machine.thermal import TwoBody
from axis.mechanics.compliance import spring_damping
from axis.mechanics.reflection import StageFloats
from axis.motion.constant_acceleration import constant_acceleration, constant_acceleration_for_duration
from axis.motion.jerk_limited import jerk_limited, jerk_limited_for_duration
from axis.motion.pieces import Profile
from axis.verdicts import Assumption


@dataclass(frozen=True)
class ShaftPlant:
    """Two inertias on one spring, all at the motor shaft; winding in q-axis peak quantities."""

    motor_inertia: float  # [kg·m²] rotor and all stages on the motor side of the spring
    load_inertia: float  # [kg·m²] load, payload and all stages beyond the spring
    stiffness: float  # [N·m/rad] infinite: the two inertias are one
    damping: float  # [N·m·s/rad] parallel to the spring
    motor_coulomb: float  # [N·m] drag on the motor side, Coulomb
    coulomb: float  # [N·m] load side, Coulomb
    breakaway: float  # [N·m] load side, at rest; not below `coulomb`
    viscous: float  # [N·m·s/rad] load side
    stribeck_speed: float  # [rad/s] load side
    load_torque: float  # [N·m] gravity and process force, against positive shaft rotation
    torque_constant: float  # [N·m/A] per peak q-axis current
    voltage_constant: float  # [V·s/rad] peak phase voltage
    resistance: float  # [ohm] phase
    inductance: float  # [H] phase
    pole_pairs: int

    @property
    def total_inertia(self) -> float:
        """[kg·m²]"""
        return self.motor_inertia + self.load_inertia


@dataclass(frozen=True)
class Rates:
    """Sampling of the three loops; the slower periods are whole multiples of the faster ones."""

    current_period: float  # [s]
    velocity_every: int  # velocity period over current period
    position_every: int  # position period over velocity period
    computation_delay: float  # [s] from sampling to the new voltage, 0 to one current period

    @property
    def velocity_period(self) -> float:
        """[s]"""
        return self.current_period * self.velocity_every

    @property
    def position_period(self) -> float:
        """[s]"""
        return self.velocity_period * self.position_every


@dataclass(frozen=True)
class Limits:
    """What the drive can give at one corner of the supply."""

    continuous_current: float  # [A] q-axis peak
    peak_current: float  # [A] q-axis peak; the smaller of drive and motor
    peak_time: float  # [s] the drive allows its own peak current from an empty bucket
    drive_peak_current: float  # [A] q-axis peak, of the drive alone: sets the bucket's capacity
    voltage: float  # [V] peak phase voltage, bus/√3 times the modulation limit
    encoder_counts: float  # per motor revolution; infinite: no quantisation


@dataclass(frozen=True)
class CompletedMotor:
    """The motor in one basis: q-axis peak current, peak phase voltage, phase winding."""

    torque_constant: float  # [N·m/A]
    voltage_constant: float  # [V·s/rad]
    resistance: float  # [ohm]
    inductance: float  # [H]
    saturated_inductance: float  # [H]
    pole_pairs: int
    inertia: float  # [kg·m²]
    peak_current: float  # [A]
    peak_torque: float  # [N·m]
    encoder_counts: int
    stall_torque: float | None  # [N·m]
    stall_current: float | None  # [A]
    rated_torque: float | None  # [N·m]
    rated_current: float | None  # [A]
    rated_speed: float | None  # [rad/s]
    max_speed: float | None  # [rad/s]
    thermal: TwoBody | None = None  # None: the data sheet does not state both bodies
    constants_temperature: float = 293.15  # [K] where torque constant and resistance were stated


@dataclass(frozen=True)
class CompletedDrive:
    """The drive in q-axis peak current, with its bus."""

    continuous_current: float  # [A]
    peak_current: float  # [A]
    peak_time: float  # [s]
    standstill_current: float | None  # [A]
    bus_nominal: float  # [V]
    bus_low: float  # [V] lowest bus that must be expected
    bus_high: float  # [V] highest bus the supply gives
    modulation_limit: float
    rates: Rates


@dataclass(frozen=True)
class CompletedMove:
    """One move with all its limits."""

    distance: float  # [m] or [rad], signed
    law: Law
    speed: float | None  # [m/s] or [rad/s]; None: by duration
    acceleration: float | None  # [m/s²]
    deceleration: float | None  # [m/s²]
    jerk: float | None  # [m/s³]; None: the law has no jerk limit
    jerk_open: bool  # tuning may choose it
    duration: float | None  # [s]
    dwell: float  # [s]
    payload: float  # [kg] or [kg·m²]
    force: float  # [N] against positive travel


def move_profile(move: CompletedMove) -> Profile:
    """The set-points of one move; raises NotComputable where its time is too short for its limits."""
    distance, speed, acceleration, deceleration = move.distance, move.speed, move.acceleration, move.deceleration
    if move.duration is not None:
        if move.law == "jerk_limited":
            return jerk_limited_for_duration(distance, move.duration, speed, acceleration, move.jerk, deceleration)
        return constant_acceleration_for_duration(distance, move.duration, speed, acceleration, deceleration)
    assert speed is not None
    assert acceleration is not None
    if move.law == "jerk_limited":
        assert move.jerk is not None
        return jerk_limited(distance, speed, acceleration, move.jerk, deceleration)
    return constant_acceleration(distance, speed, acceleration, deceleration)


@dataclass(frozen=True)
class CompletedAxis:
    """An axis with nothing left open. Load units are metres, or radians where it turns."""

    stated: Axis
    stages: tuple[StageFloats, ...]
    ratio: float  # [rad/m] or [1], signed: motor radians per load unit
    motor_side_inertia: float  # [kg·m²] stages on the motor side of the spring, without the rotor
    load_side_inertia: float  # [kg·m²] stages beyond the spring, at the shaft
    stiffness: float  # [N·m/rad] at the shaft; infinite: rigid
    damping_ratio: float
    motor_drag: float  # [N·m] at the shaft, motor side
    load_drag: float  # [N·m] at the shaft, beyond the spring
    load_inertial: float  # [kg] or [kg·m²]
    coulomb: float  # [N] or [N·m], at the load
    breakaway: float  # [N] or [N·m]
    viscous: float  # [N·s/m] or [N·m·s/rad]
    stribeck_speed: float  # [m/s] or [rad/s]
    gravity: float  # [m/s²] share of gravity against positive travel
    motor: CompletedMotor
    drive: CompletedDrive
    moves: tuple[CompletedMove, ...]
    settle_within: float  # [s] as stated, or assumed for the observation
    assumptions: tuple[Assumption, ...]
    ambient: float = 313.15  # [K]
    warnings: tuple[str, ...] = ()

    @property
    def heaviest_payload(self) -> float:
        """[kg] or [kg·m²]"""
        return max(move.payload for move in self.moves)

    def plant(self, payload: float = 0.0, force: float = 0.0) -> ShaftPlant:
        """The axis at its motor shaft while it carries `payload` [kg] against `force` [N]."""
        inertial = self.load_inertial + payload
        load_inertia = self.load_side_inertia + inertial / self.ratio**2
        motor_inertia = self.motor.inertia + self.motor_side_inertia
        empty = self.load_side_inertia + self.load_inertial / self.ratio**2
        return ShaftPlant(
            motor_inertia=motor_inertia,
            load_inertia=load_inertia,
            stiffness=self.stiffness,
            damping=spring_damping(self.stiffness, motor_inertia, empty, self.damping_ratio),
            motor_coulomb=self.motor_drag,
            coulomb=self.load_drag + self.coulomb / abs(self.ratio),
            breakaway=self.load_drag + self.breakaway / abs(self.ratio),
            viscous=self.viscous / self.ratio**2,
            stribeck_speed=self.stribeck_speed * abs(self.ratio),
            load_torque=(inertial * self.gravity + force) / self.ratio,
            torque_constant=self.motor.torque_constant,
            voltage_constant=self.motor.voltage_constant,
            resistance=self.motor.resistance,
            inductance=self.motor.inductance,
            pole_pairs=self.motor.pole_pairs,
        )

    def move_plant(self, move: CompletedMove) -> ShaftPlant:
        """The axis at its motor shaft during one move."""
        return self.plant(move.payload, move.force)

    def limits(self) -> Limits:
        """What drive and motor give on the nominal bus."""
        drive, motor = self.drive, self.motor
        return Limits(
            continuous_current=drive.continuous_current,
            peak_current=min(drive.peak_current, motor.peak_current),
            peak_time=drive.peak_time,
            drive_peak_current=drive.peak_current,
            voltage=drive.bus_nominal / math.sqrt(3.0) * drive.modulation_limit,
            encoder_counts=float(motor.encoder_counts),
        )


def at_corner(axis: CompletedAxis, corner: Mapping[str, float]) -> CompletedAxis:
    """The axis with its tolerances at one corner; the drive's settings stay nominal.

    Parameters
        axis: nominal
        corner [1]: tolerance name to signed share; left out: 0
    Returns the axis there
    value·(1 + share); friction scales Coulomb, break-away and viscous together, torque_constant both constants; a
    supply below nominal is the lowest bus that must be expected
    Source: [own]
    """
    share = {
        "load_mass": 0.0,
        "friction": 0.0,
        "torque_constant": 0.0,
        "stiffness": 0.0,
        "supply_voltage": 0.0,
        **corner,
    }
    mass, friction = 1.0 + share["load_mass"], 1.0 + share["friction"]
    constant = 1.0 + share["torque_constant"]
    bus = axis.drive.bus_nominal * (1.0 + share["supply_voltage"])
    if share["supply_voltage"] < 0.0:
        bus = axis.drive.bus_low
    return replace(
        axis,
        load_inertial=axis.load_inertial * mass,
        moves=tuple(replace(move, payload=move.payload * mass) for move in axis.moves),
        coulomb=axis.coulomb * friction,
        breakaway=axis.breakaway * friction,
        viscous=axis.viscous * friction,
        stiffness=axis.stiffness * (1.0 + share["stiffness"]),
        motor=replace(
            axis.motor,
            torque_constant=axis.motor.torque_constant * constant,
            voltage_constant=axis.motor.voltage_constant * constant,
        ),
        drive=replace(axis.drive, bus_nominal=bus),
    )
