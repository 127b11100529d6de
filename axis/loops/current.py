"""The current loop by the modulus optimum."""

from __future__ import annotations

from axis.completion import Rates
from axis.description.settings import CurrentLoop


def current_delay(computation_delay: float, current_period: float) -> float:
    """Delay between sampling the current and the middle of the voltage that answers it.

    Parameters
        computation_delay [s]: from sampling to the new voltage
        current_period [s]: the voltage is held for it
    Returns [s]
    T_d = computation_delay + current_period/2; with one period of computation the usual 1.5 periods
    Source: [ufnalski]
    """
    return computation_delay + current_period / 2.0


def modulus_optimum_gain(inductance: float, delay: float) -> float:
    """Proportional gain of the PI current controller.

    Parameters
        inductance [H]: of one phase, saturated: there the loop is fastest
        delay [s]: of the loop
    Returns [V/A]
    K_pi = L/(2·T_d)
    Source: [kessler1955]; 4.3 % overshoot and 65.5° for the delay taken as a lag, 4.05 % and 61.4° for the true delay
    """
    return inductance / (2.0 * delay)


def modulus_optimum_integral_time(inductance: float, resistance: float) -> float:
    """Integral time that cancels the winding's own lag.

    Parameters
        inductance [H]: of one phase
        resistance [ohm]: of one phase
    Returns [s]
    T_i = L/R
    Source: [kessler1955]
    """
    return inductance / resistance


def current_loop_lag(inductance: float, kp: float) -> float:
    """Equivalent lag of the closed current loop.

    Parameters
        inductance [H]: of one phase
        kp [V/A]: proportional gain
    Returns [s]
    L/K_pi, which is 2·T_d at the modulus optimum: the slope of the closed loop's phase at frequency zero
    Source: [own]; stops being true where T_i is far from L/R, and beyond about a third of the loop's bandwidth
    """
    return inductance / kp


def design_current_loop(resistance: float, saturated_inductance: float, rates: Rates) -> CurrentLoop:
    """The current loop by the modulus optimum.

    Parameters
        resistance [ohm]: of one phase, cold: there the integral time is longest
        saturated_inductance [H]: of one phase at peak current, where the loop is fastest
        rates: of the three loops
    Returns the settings
    Source: [kessler1955]
    """
    delay = current_delay(rates.computation_delay, rates.current_period)
    return CurrentLoop(
        kp=modulus_optimum_gain(saturated_inductance, delay),
        ti=modulus_optimum_integral_time(saturated_inductance, resistance),
    )
