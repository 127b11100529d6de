"""Short calculations on the project's loop functions that give what a table prints; no formula of their own."""

import math

from axis.completion import Rates
from axis.loops.current import current_delay, design_current_loop
from axis.loops.filters import notch
from axis.loops.response import delayed_integrator_margins, delayed_integrator_step, step_response
from axis.loops.textbook import symmetrical_optimum


def polynomial(text):
    """`"1 2.2 1"` to coefficients; a table reader has turned a single number into a float."""
    return [float(word) for word in str(text).split()]


def step_figures(numerator, denominator):
    response = step_response(polynomial(numerator), polynomial(denominator))
    return {
        "overshoot_pct": 100.0 * response.overshoot,
        "undershoot_pct": 100.0 * response.undershoot,
        "t90": response.rise_time(0.9),
        "t10_to_90": response.rise_time(0.9) - response.rise_time(0.1),
        "t100": response.rise_time(1.0),
        "settle_1pct": response.settling_time(0.01),
        "settle_2pct": response.settling_time(0.02),
        "settle_5pct": response.settling_time(0.05),
    }


def printed_overshoot(denominator):
    """Rounded as the book prints them."""
    figures = step_figures("1", denominator)
    return {"overshoot": round(figures["overshoot_pct"], 2), "undershoot": round(figures["undershoot_pct"], 2)}


def overshoot_of_pi_zero(zeta):
    response = step_response([2.0 * zeta, 1.0], [1.0, 2.0 * zeta, 1.0])
    return {"overshoot_pct": 100.0 * response.overshoot, "peak_time": response.turns[1]}


def notch_with_dampings(rate, centre, zero_damping, pole_damping):
    angle = 2.0 * math.pi * centre
    depth = zero_damping / pole_damping
    b0, b1, b2, a1, a2 = notch(angle, 2.0 * pole_damping * angle, depth, 1.0 / rate)
    return {"b0": b0, "b1": b1, "b2": b2, "a1": a1, "a2": a2}


def current_loop(period, inductance, resistance):
    rates = Rates(current_period=period, velocity_every=1, position_every=1, computation_delay=period)
    loop = design_current_loop(resistance, inductance, rates)
    return {
        "delay": current_delay(rates.computation_delay, period),
        "kp": loop.kp,
        "ti": loop.ti,
        "ki": loop.kp / loop.ti,
    }


def current_loop_on_lag(delay, inductance, resistance):
    """The whole delay given, as half a period of hold and the rest of computation."""
    rates = Rates(current_period=delay, velocity_every=1, position_every=1, computation_delay=delay / 2.0)
    loop = design_current_loop(resistance, inductance, rates)
    return {"kp": loop.kp, "ti": loop.ti}


def symmetrical(inertia, torque_constant, lag):
    gains = symmetrical_optimum(inertia, lag)
    return {"kp_current": gains.kp / torque_constant, "kp_torque": gains.kp, "ti": gains.ti, "kv": gains.kv}


def delayed_integrator(gain, delay, peak_time):
    margin, phase = delayed_integrator_margins(gain, delay)
    return {
        "overshoot_pct": 100.0 * (delayed_integrator_step(gain, delay, peak_time) - 1.0),
        "gain_margin": margin,
        "phase_margin_deg": math.degrees(phase),
    }
