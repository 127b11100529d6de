"""What one cycle asks of motor, drive and supply."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from axis.completion import CompletedAxis
from axis.machine.drive import braking_energy, copper_loss, link_energy, mean_power
from axis.sizing.polynomials import Array, cut, largest, product, roots, shifted
from axis.sizing.trace import Trace, trace
from axis.sizing.warming import hottest_winding

CELSIUS = 273.15  # [K]


@dataclass(frozen=True)
class Demand:
    """The figures of one cycle, motor side."""

    peak_torque: float  # [N·m]
    rms_torque: float  # [N·m] over moves and dwells
    standstill_torque: float  # [N·m] largest torque that holds the load at rest, without help from friction
    peak_speed: float  # [rad/s]
    mean_speed: float  # [rad/s] mean of |speed|
    peak_current: float  # [A] q-axis peak
    rms_current: float  # [A] RMS over time of the q-axis peak current; the rms phase current is this over √2
    cycle_time: float  # [s]
    inertia_ratio: float  # everything beyond the rotor, with the largest payload, over the rotor
    regenerated_energy: float  # [J] per cycle into the DC link
    brake_resistor_mean_power: float  # [W]
    winding_temperature: (
        float | None
    )  # [K] hottest of the repeated cycle; infinite: the copper runs away; None: unknown

    def as_json(self) -> dict[str, float]:
        """The keys that a results file carries; what is not known is left out."""
        keys = {
            "peak_torque_Nm": self.peak_torque,
            "rms_torque_Nm": self.rms_torque,
            "standstill_torque_Nm": self.standstill_torque,
            "peak_speed_rad_per_s": self.peak_speed,
            "mean_speed_rad_per_s": self.mean_speed,
            "peak_current_Arms": self.peak_current / math.sqrt(2.0),
            "rms_current_Arms": self.rms_current / math.sqrt(2.0),
            "cycle_time_s": self.cycle_time,
            "inertia_ratio": self.inertia_ratio,
            "regenerated_energy_J": self.regenerated_energy,
            "brake_resistor_mean_power_W": self.brake_resistor_mean_power,
        }
        if self.winding_temperature is not None and math.isfinite(self.winding_temperature):
            keys["winding_temperature_degC"] = self.winding_temperature - CELSIUS
        return keys


@dataclass(frozen=True)
class Load:
    """One axis at one corner over its cycle; every figure is computed once, when it is first asked for."""

    axis: CompletedAxis
    course: Trace | None = None  # where it is known already: torques do not depend on the motor's constants

    @cached_property
    def trace(self) -> Trace:
        return self.course if self.course is not None else trace(self.axis)

    @property
    def peak_torques(self) -> Array:
        """[N·m] largest |torque| in each segment."""
        return self.trace.peak_torques

    @property
    def peak_speeds(self) -> Array:
        """[rad/s] largest |speed| in each segment."""
        return self.trace.peak_speeds

    @property
    def rms_torque(self) -> float:
        """[N·m]"""
        return self.trace.rms_torque

    @cached_property
    def rms_current(self) -> float:
        """[A] q-axis peak."""
        return self.rms_torque / self.axis.motor.torque_constant

    @cached_property
    def standstill_torque(self) -> float:
        """[N·m] largest holding torque of the dwells."""
        return float(self.peak_torques[self.trace.resting].max(initial=0.0))

    @cached_property
    def winding_temperature(self) -> float | None:
        """[K] None where the motor's thermal data are unknown; infinite where the copper runs away."""
        return hottest_winding(self.axis, self.trace)

    @cached_property
    def returned(self) -> Returned:
        return returned(self.axis, self.trace)


@dataclass(frozen=True)
class Returned:
    """What the motor gives back to the DC link, cold copper deducted; once the cycle repeats."""

    energy: float  # [J] per cycle
    largest_energy: float  # [J] of one braking without a pause
    peak_power: float  # [W]
    resistor_energy: float  # [J] per cycle that the link does not store below the chopper's voltage


def returned(axis: CompletedAxis, course: Trace) -> Returned:
    """Power at the link: mechanical plus copper loss, a quartic in time on each segment.

    Source: [own]; losses of the drive itself are not in it, so that it is a little more than the link will see
    """
    motor = axis.motor
    per_torque = copper_loss(1.0 / motor.torque_constant, motor.resistance)
    power = product(course.torque, course.speed) + per_torque * product(course.torque, course.torque)
    row, start, duration = cut(course.duration, roots(power, course.duration))
    power = shifted(power[row], start)
    powers = np.arange(1.0, power.shape[1] + 1.0)
    energies = (power / powers * duration[:, None] ** powers).sum(axis=1)
    given = np.maximum(-energies, 0.0)
    episodes, level, overflow = 0.0, 0.0, 0.0
    storage = link_storage(axis)
    for _ in range(2):  # the second cycle starts with what the first one left in the link
        overflow = 0.0
        for energy in energies.tolist():
            level -= energy
            overflow += braking_energy(level, storage)
            level = min(max(level, 0.0), storage)
    running = 0.0
    for energy in energies.tolist():
        running = running - energy if energy < 0.0 else 0.0
        episodes = max(episodes, running)
    return Returned(
        energy=float(given.sum()),
        largest_energy=episodes,
        peak_power=float(largest(-power, duration).max(initial=0.0)),
        resistor_energy=overflow,
    )


def link_storage(axis: CompletedAxis) -> float:
    """[J] What the link takes from the highest bus up to the chopper's voltage; nothing where that is not known."""
    drive = axis.stated.drive
    if drive.dc_link_capacitance is None or drive.chopper_on_voltage is None:
        return 0.0
    return max(link_energy(drive.dc_link_capacitance, axis.drive.bus_high, drive.chopper_on_voltage), 0.0)


def inertia_ratio(axis: CompletedAxis) -> float:
    """Everything beyond the rotor, with the largest payload and without efficiency, over the rotor.

    Parameters
        axis: completed
    Returns [1]
    (J_stages + (m + m_payload)/i²)/J_rotor
    Source: [own]
    """
    plant = axis.plant(axis.heaviest_payload)
    return (plant.total_inertia - axis.motor.inertia) / axis.motor.inertia


def demand(load: Load) -> Demand:
    """The figures of one cycle of the axis as it stands."""
    constant = load.axis.motor.torque_constant
    peak_torque = float(load.peak_torques.max())
    cycle_time = load.trace.cycle_time
    return Demand(
        peak_torque=peak_torque,
        rms_torque=load.rms_torque,
        standstill_torque=load.standstill_torque,
        peak_speed=float(load.peak_speeds.max()),
        mean_speed=load.trace.mean_absolute_speed(),
        peak_current=peak_torque / constant,
        rms_current=load.rms_current,
        cycle_time=cycle_time,
        inertia_ratio=inertia_ratio(load.axis),
        regenerated_energy=load.returned.energy,
        brake_resistor_mean_power=mean_power(load.returned.resistor_energy, cycle_time),
        winding_temperature=load.winding_temperature,
    )
