"""A chain of stages seen from the motor shaft: lumped to two inertias on one spring, and walked for torque.

Lumping rule: the softest stage (least stiffness referred to the shaft, the first of equals) is where the spring
stands. A stage's own inertia and drag sit at its input, so the softest stage's own are still motor side; all stages
after it are load side. A chain without any compliance has everything on the motor side but the load itself.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from axis.mechanics.compliance import springs_in_series
from axis.mechanics.stages import input_torque, reflected_inertia, reflected_stiffness


@dataclass(frozen=True)
class StageFloats:
    """One stage, complete, in SI. Output quantities are linear (N, m) where `linear_output`, else N·m and rad."""

    ratio: float  # [rad/m] or [1], signed: input motion over output motion
    inertia: float  # [kg·m²] at the input
    drag: float  # [N·m] load-free, at the input
    efficiency: float  # [1] motor drives load
    efficiency_back: float  # [1] load drives motor
    stiffness: float = math.inf  # [N/m] or [N·m/rad] at the output; infinite: rigid
    damping_ratio: float = 0.0  # [1] of the stage's spring
    backlash: float = 0.0  # [m] or [rad] whole play at the output
    max_input_speed: float = math.inf  # [rad/s] infinite: unknown
    linear_output: bool = False


@dataclass(frozen=True)
class Chain:
    """All stages lumped, at the motor shaft; rotor and load are not in it."""

    ratio: float  # [rad/m] or [1], signed: motor radians per load unit
    motor_side_inertia: float  # [kg·m²]
    load_side_inertia: float  # [kg·m²]
    stiffness: float  # [N·m/rad] infinite: rigid
    damping_ratio: float  # [1] of the one spring
    motor_drag: float  # [N·m]
    load_drag: float  # [N·m]
    backlash: float  # [m] or [rad] at the load


def input_ratios(stages: Sequence[StageFloats]) -> tuple[float, ...]:
    """Motor motion over the motion of each stage's input, then over the load's: one more entry than stages.

    Parameters
        stages: from the motor to the load
    Returns [1], the last [rad/m or 1]
    1, i_1, i_1·i_2, …
    Source: [own]
    """
    ratios = [1.0]
    for stage in stages:
        ratios.append(ratios[-1] * stage.ratio)
    return tuple(ratios)


def lump(stages: Sequence[StageFloats]) -> Chain:
    """The chain at the motor shaft, split at its softest stage.

    Parameters
        stages: from the motor to the load; none for a direct drive
    Returns the lumped chain
    J = Σ J_n/i_n², 1/k = Σ i_{n+1}²/k_n, ζ = Σ ζ_n/k_n / Σ 1/k_n (by strain energy), backlash = Σ b_n·|i_{n+1}/i|
    Source: [own]; the stages between two springs swing with one of them: true while the softest is much the softest
    """
    ratios = input_ratios(stages)
    total = ratios[-1]
    springs = [reflected_stiffness(s.stiffness, i) for s, i in zip(stages, ratios[1:], strict=True)]
    inertias = [reflected_inertia(s.inertia, i) for s, i in zip(stages, ratios[:-1], strict=True)]
    drags = [s.drag / abs(i) for s, i in zip(stages, ratios[:-1], strict=True)]
    stiffness = springs_in_series(springs)
    split = len(stages)
    damping_ratio = 0.0
    if math.isfinite(stiffness):
        split = springs.index(min(springs)) + 1
        damping_ratio = sum(s.damping_ratio * stiffness / k for s, k in zip(stages, springs, strict=True))
    return Chain(
        ratio=total,
        motor_side_inertia=sum(inertias[:split]),
        load_side_inertia=sum(inertias[split:]),
        stiffness=stiffness,
        damping_ratio=damping_ratio,
        motor_drag=sum(drags[:split]),
        load_drag=sum(drags[split:]),
        backlash=sum(s.backlash * abs(i / total) for s, i in zip(stages, ratios[1:], strict=True)),
    )


def input_speeds(stages: Sequence[StageFloats], load_speed: float) -> tuple[float, ...]:
    """Speed of each stage's input, from the motor to the load.

    Parameters
        stages: from the motor to the load
        load_speed [m/s or rad/s]: of the load
    Returns [rad/s]
    ω_n = v·i/i_n
    Source: [own]
    """
    ratios = input_ratios(stages)
    return tuple(load_speed * ratios[-1] / ratio for ratio in ratios[:-1])


def output_torques(
    stages: Sequence[StageFloats], load_force: float, load_speed: float, load_acceleration: float
) -> tuple[float, ...]:
    """Torque, or force, at each stage's output, then at the motor shaft: a walk from the load to the motor.

    Parameters
        stages: from the motor to the load
        load_force [N or N·m]: that moves the load, its own inertia, friction and gravity included
        load_speed [m/s or rad/s]: of the load; zero is standstill: drag holds nothing and η = 1
        load_acceleration [m/s² or rad/s²]: of the load, for the inertia of the stages
    Returns [N·m], the last [N or N·m]: entry n is what is given to stage n+1, the last is the load force
    T_n = T_{n+1}/i_n·(1/η or η_back) + J_n·α_n + drag_n·sign(ω_n)
    Source: [own]; rigid chain, quasi-static
    """
    torques = [load_force]
    torque, speed, acceleration = load_force, load_speed, load_acceleration
    for stage in reversed(stages):
        torque = input_torque(torque, speed, stage.ratio, stage.efficiency, stage.efficiency_back)
        speed *= stage.ratio
        acceleration *= stage.ratio
        torque += stage.inertia * acceleration
        if speed != 0.0:
            torque += math.copysign(stage.drag, speed)
        torques.append(torque)
    return tuple(reversed(torques))


def shaft_torque(
    stages: Sequence[StageFloats], load_force: float, load_speed: float, load_acceleration: float
) -> float:
    """Torque that the motor gives to the chain; the rotor's own inertia comes on top.

    Parameters
        stages: from the motor to the load
        load_force [N or N·m]: that moves the load, its own inertia, friction and gravity included
        load_speed [m/s or rad/s]: of the load
        load_acceleration [m/s² or rad/s²]: of the load
    Returns [N·m]
    first entry of `output_torques`
    Source: [own]
    """
    return output_torques(stages, load_force, load_speed, load_acceleration)[0]
