"""The sampled cascade, lifted to the position period and broken at the torque command.

Between two velocity samples the state z holds the seven of the plant (see `sampled`), the previous motor angle, the
filtered velocity, the integral of the velocity loop, two states of each torque filter, and last the velocity command
of the position loop. A velocity sample is z ← A·z + b·w, y = c·z: w is the torque command that acts, y the one that
the controller asks for; the closed loop has w = k·y, k = 1.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
import numpy.typing as npt

from axis.description.settings import Loops
from axis.loops.filters import lowpass_share, torque_filter
from axis.loops.sampled import SampledPlant

Real = npt.NDArray[np.float64]


@dataclass(frozen=True)
class OpenLoop:
    """One velocity sample, open at the torque command, and what happens at the position sample."""

    step: Real  # A
    acting: Real  # b
    torque: Real  # c
    draw: Real  # R: state after the position sample from the state before it, the old velocity command left out
    every: int  # velocity samples in a position period


def open_loop(sampled: SampledPlant, loops: Loops) -> OpenLoop:
    """The controller written round the sampled plant, in the order of execution of a sample, set-points zero.

    ω_f ← ω_f + share·((θ_m − θ_prev)/T_v − ω_f);  x ← x + Kp·a·T_v·(ω_p − ω_f);  u = Kp·(b·ω_p − ω_f) + x;  u passes
    the torque filters;  ω_p = −Kv·θ_m at each position sample.
    """
    period, velocity = sampled.velocity_period, loops.velocity
    n = 11 + 2 * len(loops.filters)
    last = n - 1
    step = np.zeros((n, n))
    step[:7, :7] = sampled.transition
    step[7, 0] = 1.0
    share = lowpass_share(velocity.filter, period)
    speed, integral = step[8], step[9]
    speed[8] = 1.0 - share
    speed[0] = share / period
    speed[7] = -share / period
    integral -= velocity.kp / velocity.ti * period * speed
    integral[9] = 1.0
    integral[last] = velocity.kp / velocity.ti * period
    torque = integral - velocity.kp * speed
    torque[last] += velocity.kp * velocity.setpoint_weight
    for place, setting in enumerate(loops.filters):
        b0, b1, b2, a1, a2 = torque_filter(setting, period)
        first = 10 + 2 * place
        filtered = b0 * torque
        filtered[first] += 1.0
        step[first] = b1 * torque - a1 * filtered
        step[first, first + 1] += 1.0
        step[first + 1] = b2 * torque - a2 * filtered
        torque = filtered
    step[last, last] = 1.0
    acting = np.zeros(n)
    acting[:7] = sampled.command
    draw = np.eye(n)[:, :last]
    draw[last, 0] = -loops.position.kv
    return OpenLoop(step, acting, torque, draw, sampled.position_every)


def closed_loop(loop: OpenLoop, factor: complex = 1.0) -> npt.NDArray[Any]:
    """Transition over one position period with the torque command multiplied by a factor."""
    closed = loop.step + (factor * loop.acting)[:, None] * loop.torque
    period = loop.draw
    for _ in range(loop.every):
        period = closed @ period
    return period[:-1]


def lifted_sensitivity(loop: OpenLoop) -> tuple[Real, Real, Real, Real]:
    """M, B, C, D of the map from a torque added at each velocity sample of a position period to the torque that acts.

    S(z) = D + C·(z·1 − M)⁻¹·B, as many rows and columns as velocity samples. With the closed sample F = A + b·c:
    M = F^n·R, column s of B is F^(n−1−s)·b, row s of C is c·F^s·R, D has ones on and c·F^(s−r−1)·b below its diagonal.
    """
    closed = loop.step + loop.acting[:, None] * loop.torque
    inputs = np.empty((len(loop.acting), loop.every))
    direct = np.eye(loop.every)
    outputs = np.empty((loop.every, loop.draw.shape[1]))
    state, period = loop.acting, loop.draw
    for s in range(loop.every):
        inputs[:, loop.every - 1 - s] = state
        outputs[s] = loop.torque @ period
        for r in range(loop.every - 1 - s):
            direct[r + s + 1, r] = loop.torque @ state
        state, period = closed @ state, closed @ period
    return period[:-1].copy(), inputs[:-1].copy(), outputs, direct
