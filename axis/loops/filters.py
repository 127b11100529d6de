"""The discrete filters of the drive: coefficients used by the simulation and by the margins alike.

All are y = b0·u + b1·u₁ + b2·u₂ − a1·y₁ − a2·y₂ at the velocity period, given as the tuple (b0, b1, b2, a1, a2), and
run in the transposed direct form: y = b0·u + s1; s1 = b1·u − a1·y + s2; s2 = b2·u − a2·y.
"""

from __future__ import annotations

import math

from axis.description.settings import TorqueFilter

Coefficients = tuple[float, float, float, float, float]


def lowpass_share(time_constant: float, period: float) -> float:
    """Share of the remaining difference that a first-order low-pass takes at each sample.

    Parameters
        time_constant [s]: 0 is no filter
        period [s]: of the samples
    Returns [1]
    share = 1 − exp(−period/time_constant), the exact pole of the filter behind a hold
    Source: [franklin]
    """
    return 1.0 if time_constant <= 0.0 else -math.expm1(-period / time_constant)


def lowpass(corner: float, period: float) -> Coefficients:
    """Low-pass of first order that acts in the sample it is fed in.

    Parameters
        corner [rad/s]: corner frequency
        period [s]: of the samples
    Returns [1]
    y += share·(u − y), share = 1 − exp(−corner·period)
    Source: [franklin]
    """
    share = lowpass_share(1.0 / corner, period)
    return share, 0.0, 0.0, share - 1.0, 0.0


def notch(centre: float, width: float, depth: float, period: float) -> Coefficients:
    """Notch of finite depth, its centre kept exact.

    Parameters
        centre [rad/s]: centre frequency, below half the sampling rate
        width [rad/s]: twice the pole damping times the centre
        depth [1]: gain that is left at the centre; 1 is no notch
        period [s]: of the samples
    Returns [1]
    (s² + 2ζz·W·s + W²)/(s² + 2ζp·W·s + W²), ζp = width/(2·centre), ζz = depth·ζp, s = (2/period)·(z − 1)/(z + 1),
    W = (2/period)·tan(centre·period/2)
    Source: [rbj]; stops being true at half the sampling rate, where no filter can act: refused there
    """
    if not 0.0 < centre * period < math.pi:
        raise ValueError("the centre of a notch must lie between zero and half the sampling rate")
    warped = math.tan(centre * period / 2.0)
    poles = warped * width / centre
    zeros = depth * poles
    square = warped * warped
    scale = 1.0 / (1.0 + poles + square)
    turn = 2.0 * (square - 1.0) * scale
    return (1.0 + zeros + square) * scale, turn, (1.0 - zeros + square) * scale, turn, (1.0 - poles + square) * scale


def torque_filter(setting: TorqueFilter, period: float) -> Coefficients:
    """Coefficients of one filter of the torque path.

    A notch without a stated width is as wide as its centre frequency (pole damping 0.5), without a stated depth it
    leaves a tenth.

    Parameters
        setting: the filter as the drive stores it
        period [s]: velocity period
    Returns [1]
    Source: [own]
    """
    if setting.kind == "lowpass":
        return lowpass(setting.frequency, period)
    width = setting.frequency if setting.width is None else setting.width
    depth = 0.1 if setting.depth is None else setting.depth
    return notch(setting.frequency, width, depth, period)


def delay_at_rest(coefficients: Coefficients, period: float) -> float:
    """Delay of a filter for slow signals, which is what it adds to the lags of the loop.

    Parameters
        coefficients [1]: b0, b1, b2, a1, a2
        period [s]: of the samples
    Returns [s]
    delay = period·( (b1 + 2·b2)/(b0 + b1 + b2) − (a1 + 2·a2)/(1 + a1 + a2) ), the slope of the phase at frequency zero
    Source: [franklin]
    """
    b0, b1, b2, a1, a2 = coefficients
    return period * ((b1 + 2.0 * b2) / (b0 + b1 + b2) - (a1 + 2.0 * a2) / (1.0 + a1 + a2))
