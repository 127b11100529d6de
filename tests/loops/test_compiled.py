"""The gate to numba: its cache notices changed sources and does without a writable folder."""

import numpy as np
import pytest

from axis import compiled as gate
from axis.loops import stability


def test_digest_follows_every_source(tmp_path):
    for room in gate.ROOMS:
        (tmp_path / room).mkdir()
        (tmp_path / room / "one.py").write_text("x = 1\n")
    seen = {gate.sources_digest(tmp_path)}
    for room in gate.ROOMS:
        (tmp_path / room / "one.py").write_text("x = 2\n")
        seen.add(gate.sources_digest(tmp_path))
    (tmp_path / gate.ROOMS[0] / "one.py").rename(tmp_path / gate.ROOMS[0] / "two.py")
    seen.add(gate.sources_digest(tmp_path))
    assert len(seen) == len(gate.ROOMS) + 2


def test_first_folder_that_can_be_written(tmp_path):
    blocked = tmp_path / "file"
    blocked.write_text("")
    good = tmp_path / "good"
    assert gate.cache_folder([blocked / "below", good]) == good
    assert gate.cache_folder([blocked / "below"]) is None


def test_only_rooms_whose_changes_are_noticed():
    def stray(x: float) -> float:
        return x

    stray.__module__ = "axis.plots.figure"
    with pytest.raises(ValueError, match="outside the sources"):
        gate.compiled(stray)


@pytest.mark.skipif(gate.UNCOMPILED, reason="compares compiled with plain")
def test_compiled_equals_plain_to_the_bit():
    random = np.random.default_rng(3)
    matrix = random.standard_normal((6, 6))
    matrix *= 0.97 / np.abs(np.linalg.eigvals(matrix)).max()
    assert stability.growth(matrix) == stability.growth.py_func(matrix)
