"""What motor and drive give together."""

from __future__ import annotations

from axis.completion import CompletedAxis
from axis.machine.envelope import braking_current_at_voltage_limit, peak_torque_at_speed, phase_voltage_limit


def lowest_voltage(axis: CompletedAxis) -> float:
    """[V] Peak phase voltage on the lowest bus that must be expected."""
    return phase_voltage_limit(axis.drive.bus_low, axis.drive.modulation_limit)


def available_torque(axis: CompletedAxis, speed: float, braking: bool, voltage: float) -> float:
    """Largest torque of motor and drive at a speed.

    Parameters
        axis: completed, at a corner
        speed [rad/s]: of the motor
        braking: the torque acts against the motion
        voltage [V]: peak phase voltage that the drive gives
    Returns [N·m]
    driving: `peak_torque_at_speed`; braking: the same with the braking current of the voltage circle
    Source: [krishnan]
    """
    motor = axis.motor
    current = min(motor.peak_current, axis.drive.peak_current)
    winding = (motor.resistance, motor.inductance, motor.voltage_constant, float(motor.pole_pairs))
    if braking:
        current = min(current, braking_current_at_voltage_limit(speed, voltage, *winding))
        return min(motor.torque_constant * current, motor.peak_torque)
    return peak_torque_at_speed(speed, voltage, *winding, motor.torque_constant, current, motor.peak_torque)
