"""Bases of motor constants and the cross-check that names the reading that would agree."""

import itertools
import math

import pytest

from axis.machine.motor_constants import (
    BASIS_FACTORS,
    CURRENT_FACTOR,
    VOLTAGE_FACTOR,
    cross_check,
    current_to_peak,
    torque_constant_to_peak,
    voltage_constant_to_phase_peak,
    winding_to_phase,
)

PHASE_VOLTAGE = 0.2  # [V·s/rad] of a motor with 0.3 N·m per peak ampere, 1.5 times; numbers of our own
STATED_TORQUE = {"peak": 0.3, "rms": 0.3 * math.sqrt(2.0)}
STATED_VOLTAGE = {
    "phase peak": 0.2,
    "phase rms": 0.2 / math.sqrt(2.0),
    "line-line peak": 0.2 * math.sqrt(3.0),
    "line-line rms": 0.2 * math.sqrt(1.5),
}
READINGS = list(itertools.product(CURRENT_FACTOR, VOLTAGE_FACTOR))


def check(torque, voltage, torque_basis, voltage_basis):
    return cross_check(
        torque_constant_to_peak(torque, torque_basis),
        voltage_constant_to_phase_peak(voltage, voltage_basis),
        torque_basis,
        voltage_basis,
    )


def test_power_balance_in_every_basis():
    """T·ω = Σ e·i: peak quantities 3/2, rms phase quantities 3."""
    for basis in CURRENT_FACTOR:
        assert torque_constant_to_peak(STATED_TORQUE[basis], basis) * current_to_peak(7.0, basis) == pytest.approx(
            STATED_TORQUE[basis] * 7.0, rel=1e-14
        )
    for basis, stated in STATED_VOLTAGE.items():
        assert voltage_constant_to_phase_peak(stated, basis) == pytest.approx(PHASE_VOLTAGE, rel=1e-14)


def test_windings():
    assert winding_to_phase(2.6, "line-line") == 1.3
    assert winding_to_phase(2.6, "phase") == 2.6


@pytest.mark.parametrize(("torque_basis", "voltage_basis"), READINGS)
def test_rightly_read_constants_agree(torque_basis, voltage_basis):
    found = check(STATED_TORQUE[torque_basis], STATED_VOLTAGE[voltage_basis], torque_basis, voltage_basis)
    assert found.kind == "ok"
    assert found.text == ""


def changed(true, read):
    return (true[0] != read[0]) + (true[1] != read[1])


@pytest.mark.parametrize(("true", "read"), [(t, r) for t in READINGS for r in READINGS if changed(t, r) == 1])
def test_one_wrong_basis_is_an_error_that_names_the_right_one(true, read):
    """Whatever single basis is misread, the true reading is among those named, and stands in the sentence."""
    found = check(STATED_TORQUE[true[0]], STATED_VOLTAGE[true[1]], *read)
    assert found.kind == "error"
    assert true in found.readings
    assert f'torque_constant_basis = "{true[0]}"' in found.text
    assert f'voltage_constant_basis = "{true[1]}"' in found.text


def test_two_wrong_bases_are_found_where_they_leave_a_basis_factor():
    """Two misreadings can cancel (√2 with √2) or leave 2/√3, which is no basis factor; all else is an error."""
    for true, read in itertools.product(READINGS, READINGS):
        if changed(true, read) == 2:
            found = check(STATED_TORQUE[true[0]], STATED_VOLTAGE[true[1]], *read)
            size = max(found.ratio, 1.0 / found.ratio)
            if size < 1.0 + 1e-9:
                assert found.kind == "ok"
            elif any(abs(size / factor - 1.0) < 1e-9 for factor in BASIS_FACTORS):
                assert found.kind == "error"
                assert found.readings


@pytest.mark.parametrize(
    ("ratio", "kind", "named"),
    [
        (1.0, "ok", False),
        (1.019, "ok", False),
        (0.981, "ok", False),
        (1.03, "warning", False),
        (1.149, "warning", False),  # below 0.94·√1.5 = 1.1513
        (1.16, "error", True),  # within 6 % of √1.5
        (0.87, "warning", False),
        (0.86, "error", True),  # 1/√1.5 = 0.8165, times 1.06 is 0.8655
        (1.31, "error", False),  # between √1.5·1.06 = 1.298 and √2·0.94 = 1.329
        (1.34, "error", False),  # √2 too large, and no voltage basis above line-line rms by √2
        (1.7, "error", True),  # √3: phase rms
        (0.72, "error", True),  # 1/√2: peak, or line-line peak
        (5.0, "error", False),
        (0.2, "error", False),
    ],
)
def test_borders_of_the_finding(ratio, kind, named):
    found = cross_check(1.5 * ratio, 1.0, "rms", "line-line rms")
    assert found.kind == kind
    assert bool(found.readings) is named


def test_sentence():
    found = check(0.72, 0.72, "peak", "line-line peak")
    assert found.ratio == pytest.approx(2.0 / math.sqrt(3.0), rel=1e-12)
    assert found.kind == "error"
    assert "1.155 times" in found.text
