"""Current-time bucket, DC link and losses."""

import math

import pytest

from axis.compiled import compiled
from axis.machine.drive import (
    braking_energy,
    bucket_capacity,
    bucket_step,
    chopper_power,
    copper_loss,
    link_energy,
    mean_power,
    rectified_bus,
)


def test_peak_current_fills_an_empty_bucket_in_the_peak_time():
    capacity = bucket_capacity(8.0, 20.0, 3.0)
    level = 0.0
    for _ in range(3000):
        level = bucket_step(level, 20.0, 8.0, 1e-3)
    assert level == pytest.approx(capacity, rel=1e-12)


def test_bucket_has_a_floor_and_keeps_its_level_at_the_continuous_current():
    assert bucket_step(5.0, 0.0, 8.0, 1.0) == 0.0
    assert bucket_step(5.0, -8.0, 8.0, 1.0) == 5.0
    assert bucket_capacity(8.0, 8.0, 3.0) == math.inf


def test_bucket_counts_either_sign_of_the_current():
    assert bucket_step(1.0, -12.0, 8.0, 0.1) == bucket_step(1.0, 12.0, 8.0, 0.1) == pytest.approx(1.0 + 8.0)


def test_compiled_bucket_gives_the_same_digits():
    assert compiled(bucket_step)(1.7, 12.3, 8.0, 62.5e-6) == bucket_step(1.7, 12.3, 8.0, 62.5e-6)


def test_link():
    """400 V rectified is 565.7 V; 470 µF from 560 V to 760 V take 62.04 J, by hand."""
    assert rectified_bus(400.0) == pytest.approx(565.6854249, rel=1e-9)
    assert link_energy(470e-6, 560.0, 760.0) == pytest.approx(0.5 * 470e-6 * (577600.0 - 313600.0), rel=1e-14)
    assert braking_energy(50.0, 62.04) == 0.0
    assert mean_power(braking_energy(100.0, 62.04), 0.5) == pytest.approx(75.92)
    assert chopper_power(760.0, 60.0) == pytest.approx(9626.6667, rel=1e-7)


def test_copper_loss_of_three_phases():
    """3·R·I_rms² with I_rms = i/√2."""
    assert copper_loss(10.0, 0.9) == pytest.approx(3 * 0.9 * (10.0 / math.sqrt(2.0)) ** 2, rel=1e-14)
