"""Short calculations on the project's functions that give what a published table prints; no formula of their own."""

import math

from axis.machine.motor_constants import torque_constant_to_peak, voltage_constant_to_phase_peak
from axis.machine.thermal import TwoBody, natural_rates, periodic_rises, rises_after, steady_rises
from axis.mechanics.compliance import (
    antiresonance,
    antiresonance_damping_ratio,
    resonance,
    resonance_damping_ratio,
)
from axis.mechanics.reflection import StageFloats, shaft_torque
from axis.mechanics.stages import input_torque, reflected_inertia, screw_ratio
from axis.motion.constant_acceleration import constant_acceleration, constant_acceleration_for_duration
from axis.motion.jerk_limited import jerk_limited


def mass_behind_screw(mass, lead):
    return reflected_inertia(mass, screw_ratio(lead))


def torque_of_vertical_screw(mass, gravity, lead, efficiency):
    weight, ratio = mass * gravity, screw_ratio(lead)
    return {
        name: input_torque(weight, speed, ratio, efficiency, efficiency)
        for name, speed in (("hold", 0.0), ("up", 0.1), ("down", -0.1))
    }


def torque_of_trapezoid(inertia, speed, accelerate, run, decelerate, dwell, friction):
    direct = StageFloats(ratio=1.0, inertia=inertia, drag=0.0, efficiency=1.0, efficiency_back=1.0)
    phases = ((accelerate, speed / accelerate), (run, 0.0), (decelerate, -speed / decelerate))
    torques = [shaft_torque([direct], friction, speed, acceleration) for _, acceleration in phases]
    heat = sum(torque**2 * time for torque, (time, _) in zip(torques, phases, strict=True))
    rms = math.sqrt(heat / (accelerate + run + decelerate + dwell))
    return {"accelerating": torques[0], "decelerating": torques[2], "rms": rms}


def jerk_limited_state(distance, speed, acceleration, jerk, share):
    move = jerk_limited(distance, speed, acceleration, jerk)
    position, velocity, at_acceleration, _ = move.evaluate(share * move.duration)
    return {
        "duration": move.duration,
        "peak_speed": move.peak_speed,
        "peak_acceleration": move.peak_acceleration,
        "position": float(position),
        "velocity": float(velocity),
        "at_acceleration": float(at_acceleration),
    }


def jerk_limited_duration(distance, speed, acceleration, deceleration, jerk):
    return jerk_limited(distance, speed, acceleration, jerk, deceleration).duration


def constant_acceleration_law(shape):
    move = {
        "thirds": constant_acceleration_for_duration(1.0, 1.0),
        "halves": constant_acceleration(1.0, 10.0, 4.0),
    }[shape]
    assert math.isclose(move.duration, 1.0, rel_tol=1e-14)
    return {
        "peak_speed": move.peak_speed,
        "peak_acceleration": move.peak_acceleration,
        "rms_acceleration": math.sqrt(move.squared_acceleration / move.duration),
    }


def torque_constant_for_voltage_constant(torque_basis, voltage_basis):
    """Torque constant in its basis per volt-second of the voltage constant in its own."""
    return 1.5 * voltage_constant_to_phase_peak(1.0, voltage_basis) / torque_constant_to_peak(1.0, torque_basis)


def two_body_step(winding_housing, housing_ambient, winding_capacity, housing_capacity, loss, time):
    body = TwoBody(winding_housing, housing_ambient, winding_capacity, housing_capacity)
    winding, housing = rises_after(body, (0.0, 0.0), loss, time)
    fast, slow = natural_rates(body)
    return {"winding": winding, "housing": housing, "fast": 1.0 / fast, "slow": 1.0 / slow}


def two_body_cycle(winding_housing, housing_ambient, winding_capacity, housing_capacity, loss, on, period):
    body = TwoBody(winding_housing, housing_ambient, winding_capacity, housing_capacity)
    rises = periodic_rises(body, [loss, 0.0], [on, period - on])
    mean = steady_rises(body, loss * on / period)
    return {
        "start_winding": rises.winding[0],
        "start_housing": rises.housing[0],
        "peak_winding": rises.peak_winding,
        "housing_at_peak": rises.housing[1],
        "mean_winding": mean[0],
        "mean_housing": mean[1],
    }


def two_mass(motor_inertia, load_inertia, stiffness, damping):
    return {
        "antiresonance": antiresonance(stiffness, load_inertia),
        "resonance": resonance(stiffness, motor_inertia, load_inertia),
        "resonance_damping": resonance_damping_ratio(stiffness, motor_inertia, load_inertia, damping),
        "antiresonance_damping": antiresonance_damping_ratio(stiffness, load_inertia, damping),
    }
