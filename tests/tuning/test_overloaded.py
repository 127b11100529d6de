"""The axis that fails on purpose: it says why and what would remedy it, and the remedy, applied, works."""

import re

import pytest

import axis
from axis.study import opened
from tests.tuning.demo import shipped

OVERLOADED = shipped("overloaded.toml")
ACCELERATION = re.compile(r"lower the acceleration of moves? [\d, ]+ to (\S+) m/s²")


@pytest.fixture(scope="module")
def failing():
    sizing = axis.size(OVERLOADED).sizing
    assert sizing.verdict == "fail"
    return {check.id: check for check in sizing.checks if check.verdict == "fail"}


def test_it_says_why(failing):
    """The motor is too small: its torque, its heating and its current fail, and nothing else."""
    assert failing.keys() == {
        "motor_peak_torque",
        "motor_rms_torque",
        "motor_peak_current",
        "motor_winding_temperature",
    }
    for check in failing.values():
        assert check.demand > check.limit
        assert check.margin < 0.0
        assert "worst with load mass +5 %" in check.reason
        assert ACCELERATION.fullmatch(check.remedy), check.remedy


def test_the_remedy_applied_works(failing):
    """Typed into the file as it is said, the lowest of the accelerations makes every check pass; then it is tuned."""
    lowest = min((ACCELERATION.fullmatch(check.remedy)[1] for check in failing.values()), key=float)
    text = OVERLOADED.document.text
    assert text.count('acceleration = "16 m/s^2"') == 2
    mended = opened(OVERLOADED.document.with_text(text.replace('"16 m/s^2"', f'"{lowest} m/s^2"')))
    sized = axis.size(mended)
    assert sized.sizing.verdict == "pass"
    tuned = axis.tune(sized)
    assert tuned.tuned.reason == ""
    assert tuned.verdict == "pass"
    # It was sized again with the jerk that was chosen: a harder jerk must not bring the overload back.
    assert tuned.sizing == axis.size(tuned).sizing


def test_each_remedy_cures_its_own_check(failing):
    for check in failing.values():
        limit = ACCELERATION.fullmatch(check.remedy)[1]
        moves = re.findall(r"\d+(?=,| to)", check.remedy.partition(" to ")[0] + " to")
        document = OVERLOADED.document
        for move in moves:
            document = document.with_value(f"move[{move}].acceleration", f"{limit} m/s^2")
        again = {one.id: one for one in axis.size(opened(document)).sizing.checks}
        assert again[check.id].verdict == "pass", check.remedy
