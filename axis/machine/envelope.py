"""Torque over speed: voltage circle, current limit, magnet limit; and the continuous line.

Field-oriented control with no d-axis current. Plain arithmetic: sizing compiles it.
"""

from __future__ import annotations

import math


def phase_voltage_limit(bus: float, modulation: float) -> float:
    """Largest peak phase voltage that the drive gives without overmodulation.

    Parameters
        bus [V]: DC-link voltage
        modulation [1]: share of the circle that the drive uses
    Returns [V]
    V = V_dc/√3·m
    Source: [krishnan]
    """
    return bus / math.sqrt(3.0) * modulation


def phase_voltage(
    current: float,
    speed: float,
    resistance: float,
    inductance: float,
    voltage_constant: float,
    pole_pairs: float,
) -> float:
    """Peak phase voltage that a steady current needs at a speed.

    Parameters
        current [A]: q-axis peak, with the sign of its torque
        speed [rad/s]: of the shaft, signed
        resistance [ohm]: of one phase
        inductance [H]: of one phase
        voltage_constant [V·s/rad]: peak phase voltage
        pole_pairs [1]: of the rotor
    Returns [V]
    √((p·ω·L·i)² + (R·i + K_E·ω)²)
    Source: [krishnan]
    """
    across = pole_pairs * speed * inductance * current
    along = resistance * current + voltage_constant * speed
    return math.sqrt(across * across + along * along)


def current_at_voltage_limit(
    speed: float,
    voltage: float,
    resistance: float,
    inductance: float,
    voltage_constant: float,
    pole_pairs: float,
) -> float:
    """Largest driving q-axis current that the voltage leaves at a speed; zero where the EMF takes it all.

    Parameters
        speed [rad/s]: of the shaft, either sign
        voltage [V]: largest peak phase voltage
        resistance [ohm]: of one phase
        inductance [H]: of one phase
        voltage_constant [V·s/rad]: peak phase voltage
        pole_pairs [1]: of the rotor
    Returns [A]
    larger root of (p·ω·L·i)² + (R·i + K_E·|ω|)² = V²
    Source: [krishnan]
    """
    emf = voltage_constant * abs(speed)
    if emf >= voltage:
        return 0.0
    impedance = resistance**2 + (pole_pairs * speed * inductance) ** 2
    left = (voltage - emf) * (voltage + emf)
    along = resistance * emf
    return left / (along + math.sqrt(along**2 + impedance * left))


def braking_current_at_voltage_limit(
    speed: float,
    voltage: float,
    resistance: float,
    inductance: float,
    voltage_constant: float,
    pole_pairs: float,
) -> float:
    """Largest braking q-axis current that the voltage leaves at a speed, as a positive number.

    Parameters
        speed [rad/s]: of the shaft, either sign
        voltage [V]: largest peak phase voltage
        resistance [ohm]: of one phase
        inductance [H]: of one phase
        voltage_constant [V·s/rad]: peak phase voltage
        pole_pairs [1]: of the rotor
    Returns [A]
    larger root of (p·ω·L·i)² + (K_E·|ω| − R·i)² = V²; zero where the EMF alone exceeds V
    Source: [krishnan]
    """
    emf = voltage_constant * abs(speed)
    if emf >= voltage:
        return 0.0
    impedance = resistance**2 + (pole_pairs * speed * inductance) ** 2
    along = resistance * emf
    return (along + math.sqrt(along**2 + impedance * (voltage - emf) * (voltage + emf))) / impedance


def speed_at_voltage_limit(
    current: float,
    voltage: float,
    resistance: float,
    inductance: float,
    voltage_constant: float,
    pole_pairs: float,
) -> float:
    """Largest speed at which a driving current still finds its voltage; zero where it never does.

    Parameters
        current [A]: q-axis peak, not negative
        voltage [V]: largest peak phase voltage
        resistance [ohm]: of one phase
        inductance [H]: of one phase
        voltage_constant [V·s/rad]: peak phase voltage
        pole_pairs [1]: of the rotor
    Returns [rad/s]
    larger root of (p·ω·L·i)² + (R·i + K_E·ω)² = V²
    Source: [krishnan]
    """
    drop = resistance * current
    if drop >= voltage:
        return 0.0
    per_speed = voltage_constant**2 + (pole_pairs * inductance * current) ** 2
    left = (voltage - drop) * (voltage + drop)
    along = voltage_constant * drop
    return left / (along + math.sqrt(along**2 + per_speed * left))


def peak_torque_at_speed(
    speed: float,
    voltage: float,
    resistance: float,
    inductance: float,
    voltage_constant: float,
    pole_pairs: float,
    torque_constant: float,
    current_limit: float,
    magnet_limit: float,
) -> float:
    """Largest driving torque at a speed.

    Parameters
        speed [rad/s]: of the shaft, either sign
        voltage [V]: largest peak phase voltage
        resistance [ohm]: of one phase
        inductance [H]: of one phase
        voltage_constant [V·s/rad]: peak phase voltage
        pole_pairs [1]: of the rotor
        torque_constant [N·m/A]: per peak q-axis current
        current_limit [A]: q-axis peak, the smaller of drive and motor
        magnet_limit [N·m]: peak torque of the motor; infinite where only its current is stated
    Returns [N·m]
    min(K_T·min(I_limit, i_voltage(ω)), T_magnet)
    Source: [krishnan]
    """
    available = current_at_voltage_limit(speed, voltage, resistance, inductance, voltage_constant, pole_pairs)
    return min(torque_constant * min(current_limit, available), magnet_limit)


def continuous_torque(speed: float, stall_torque: float, rated_torque: float, rated_speed: float) -> float:
    """Torque that the motor holds for ever at a speed: a straight line through stall and rated point.

    Parameters
        speed [rad/s]: of the shaft, either sign
        stall_torque [N·m]: continuous at standstill
        rated_torque [N·m]: continuous at rated speed
        rated_speed [rad/s]: of the rated point
    Returns [N·m], not negative
    T_0 + (T_N − T_0)·|ω|/ω_N
    Source: [common-practice]; a data sheet's own curve bends below the line, more so beyond the rated point
    """
    return max(stall_torque + (rated_torque - stall_torque) * abs(speed) / rated_speed, 0.0)
