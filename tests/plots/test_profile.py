"""One cycle at the motor: the drawn peaks are those of the demand."""

from __future__ import annotations

import math

import numpy as np
import pytest

from axis.plots.profile import profiles
from axis.sizing.size import size
from tests.sheet.sample import study

AXIS = study().axis


def test_peaks_and_limits() -> None:
    speed, torque = profiles(AXIS)
    # 0.6 m/s on a lead of 20 mm are 30 revolutions per second; 5000 rpm and 8.4 N·m stand in the file.
    assert np.abs(speed.lines[0].y).max() == pytest.approx(1800.0)
    assert [level.y for level in speed.levels] == pytest.approx([5000.0, -5000.0])
    assert [level.y for level in torque.levels] == pytest.approx([8.4, -8.4])
    asked = size(AXIS).demand
    assert np.abs(torque.lines[0].y).max() == pytest.approx(asked.peak_torque, rel=1e-3)
    assert torque.x.high == pytest.approx(asked.cycle_time)


def test_the_figure_turns_as_far_as_the_motor() -> None:
    speed = profiles(AXIS)[0].lines[0]
    forward = np.trapezoid(np.maximum(speed.y, 0.0) * 2.0 * math.pi / 60.0, speed.x)
    assert forward == pytest.approx(2.0 * math.pi * 300.0 / 20.0, rel=1e-4)  # 300 mm on a lead of 20 mm
