"""Stated axis to completed axis: every value present, in coherent units, with the list of what was assumed."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class ShaftPlant:
    """Two inertias on one spring, everything referred to the motor shaft; winding in q-axis peak quantities."""

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
