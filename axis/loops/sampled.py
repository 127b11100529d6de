"""The friction-free axis between two velocity samples, its current loop closed: exact, one matrix."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
from scipy.linalg import expm

from axis.completion import Rates, ShaftPlant
from axis.description.settings import CurrentLoop

Matrix = npt.NDArray[np.float64]


@dataclass(frozen=True)
class SampledPlant:
    """One corner of the axis as the velocity loop sees it.

    State: motor angle [rad], motor speed [rad/s], load angle [rad], load speed [rad/s], current [A], integral of the
    current loop [V], voltage of the previous current sample [V].
    """

    transition: Matrix  # 7×7 over one velocity period
    command: Matrix  # 7, per torque command [N·m] held over one velocity period
    velocity_period: float  # [s]
    position_every: int


def plant_matrices(plant: ShaftPlant) -> tuple[Matrix, Matrix]:
    """Continuous state matrix and voltage input of winding, two inertias and spring.

    State θ_m, ω_m, θ_l, ω_l, i; J_m·ω̇_m = Kt·i − T_s, J_l·ω̇_l = T_s − B·ω_l, T_s = k(θ_m − θ_l) + d(ω_m − ω_l),
    L·di/dt = v − R·i − Ke·ω_m. With an infinite stiffness both inertias move as one and the load's states stay zero.
    """
    a = np.zeros((5, 5))
    a[0, 1] = 1.0
    a[4, 4] = -plant.resistance / plant.inductance
    a[4, 1] = -plant.voltage_constant / plant.inductance
    if math.isinf(plant.stiffness):
        a[1, 4] = plant.torque_constant / plant.total_inertia
        a[1, 1] = -plant.viscous / plant.total_inertia
    else:
        spring = np.array([-plant.stiffness, -plant.damping, plant.stiffness, plant.damping])
        a[1, :4] = spring / plant.motor_inertia
        a[1, 4] = plant.torque_constant / plant.motor_inertia
        a[2, 3] = 1.0
        a[3, :4] = -spring / plant.load_inertia
        a[3, 3] -= plant.viscous / plant.load_inertia
    return a, np.array([0.0, 0.0, 0.0, 0.0, 1.0 / plant.inductance])


def held(a: Matrix, b: Matrix, duration: float) -> tuple[Matrix, Matrix]:
    """Transition over `duration` [s] and response to an input that is held over it: both from one exponential.

    Source: [franklin]
    """
    order = len(b)
    block = np.zeros((order + 1, order + 1))
    block[:order, :order] = a * duration
    block[:order, order] = b * duration
    result = expm(block)
    return result[:order, :order], result[:order, order]


def current_sample(plant: ShaftPlant, rates: Rates, current: CurrentLoop) -> tuple[Matrix, Matrix]:
    """One current sample with the loop closed: transition of the seven states, and input per ampere of command.

    At the sample x_i += (kp/ti)·T_c·(i* − i) and v = kp·(i* − i) + x_i; the previous voltage acts for the computation
    delay, the new one for the rest of the period.
    """
    a, b = plant_matrices(plant)
    wait = rates.computation_delay
    _, by_old = held(a, b, wait)
    after, by_new = held(a, b, rates.current_period - wait)
    whole, _ = held(a, b, rates.current_period)
    transition = np.zeros((7, 7))
    transition[:5, :5] = whole
    transition[:5, 6] = after @ by_old
    if math.isinf(plant.stiffness):
        transition[2, 2] = transition[3, 3] = 0.0
    integral = current.kp / current.ti * rates.current_period
    total = current.kp + integral
    for row, gain in ((slice(0, 5), by_new), (slice(6, 7), np.ones(1))):
        transition[row, 4] -= total * gain
        transition[row, 5] += gain
    transition[5, 5] = 1.0
    transition[5, 4] = -integral
    command = np.concatenate([total * by_new, [integral, total]])
    return transition, command


def sample_plant(plant: ShaftPlant, rates: Rates, current: CurrentLoop, nominal_torque_constant: float) -> SampledPlant:
    """The axis at one corner, sampled at the velocity period with its current loop closed.

    Parameters
        plant: the corner; friction other than viscous is left out
        rates: of the three loops
        current: the current loop as set
        nominal_torque_constant [N·m/A]: by which the drive turns torque commands into currents
    Returns the sampled plant
    Source: [own]
    """
    step, per_ampere = current_sample(plant, rates, current)
    transition = np.eye(7)
    command = np.zeros(7)
    for _ in range(rates.velocity_every):
        transition = step @ transition
        command = step @ command + per_ampere
    return SampledPlant(
        transition=np.ascontiguousarray(transition),
        command=command / nominal_torque_constant,
        velocity_period=rates.velocity_period,
        position_every=rates.position_every,
    )
