"""One axis typed twice, in SI and in inches, pounds and rpm: the result does not depend on the units typed."""

import math
from dataclasses import fields, is_dataclass

import pytest

import axis
from axis.loops.start import designed_start
from axis.tuning.objective import Objective, extreme_plants
from axis.tuning.start import bare_loops
from axis.tuning.variables import space
from tests.cli.command import DATA

SI, INCH = (axis.load(DATA / f"ram_{units}.toml") for units in ("si", "inch"))
EQUAL = 1e-9


def leaves(value, path=""):
    """Path and value of everything that a result holds."""
    if is_dataclass(value):
        for field in fields(value):
            yield from leaves(getattr(value, field.name), f"{path}.{field.name}")
    elif isinstance(value, dict):
        for key, inner in value.items():
            yield from leaves(inner, f"{path}.{key}")
    elif isinstance(value, tuple | list):
        for n, inner in enumerate(value):
            yield from leaves(inner, f"{path}[{n}]")
    else:
        yield path, value


def assert_same(one, other, words=True):
    first, second = dict(leaves(one)), dict(leaves(other))
    assert first.keys() == second.keys()
    assert len(first) > 10
    for path, value in first.items():
        if isinstance(value, float):
            assert second[path] == pytest.approx(value, rel=EQUAL, abs=0.0, nan_ok=False), path
        elif words or not isinstance(value, str):
            assert second[path] == value, path


def test_the_files_are_typed_differently():
    typed = {path for path, text in SI.document.typed.items() if text != INCH.document.typed[path]}
    assert {"load.mass", "transmission[2].stiffness", "motor.max_speed", "loops.velocity.kp", "axis.ambient"} <= typed
    assert len(typed) > 35


def test_the_completed_axis():
    assert_same(SI.axis, INCH.axis)


def test_size():
    one, other = axis.size(SI).sizing, axis.size(INCH).sizing
    assert_same(one, other)
    assert len(one.checks) > 15


def test_the_start_of_tuning():
    def start(study):
        completed = study.axis
        bare, lag = bare_loops(completed)
        plants = extreme_plants(completed)
        sampled = Objective(completed, bare, [{}], plants).margin_plants
        inertia = completed.plant().total_inertia
        found = designed_start(bare, plants, sampled, completed.drive.rates, inertia, 0.02, completed.stated.tuning)
        return found, lag, space(completed, bare, lag).variables

    one, other = start(SI), start(INCH)
    assert_same(one, other)
    assert one[0].loops.velocity.kp > 0.0


def test_check_with_the_same_settings():
    one, other = axis.check(SI).settled, axis.check(INCH).settled
    sample = SI.axis.drive.rates.position_period
    assert one.verdict == "fail"
    assert [(check.id, check.verdict) for check in one.all_checks] == [
        (check.id, check.verdict) for check in other.all_checks
    ]
    assert [move.failing_corners for move in one.moves] == [move.failing_corners for move in other.moves]
    for first, second in zip(one.moves, other.moves, strict=True):
        assert first.worst_corner == second.worst_corner
        for at, beside in ((first.nominal, second.nominal), (first.worst, second.worst)):
            for name in ("time_to_window", "signal", "commanded_end", "observed"):
                assert math.isclose(getattr(at, name), getattr(beside, name), abs_tol=sample), name
