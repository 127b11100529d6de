"""The JSON object: the keys that files promise, SI, no NaN, reproducible."""

from __future__ import annotations

import json
import math
from collections.abc import Iterator
from dataclasses import replace
from typing import Any

import pytest

from axis.sheet.as_json import check_json, sheet_json, size_json, to_json, tune_json
from axis.study import opened
from tests.sheet.sample import CORNER, NEVER, document, settled, study

STUDY = study()
ALWAYS = {"format", "version", "axis", "inputs", "seed", "assumptions", "verdict", "checks", "cautions"}
CHECK_KEYS = {"id", "name", "demand", "limit", "unit", "margin", "verdict", "source", "remedy"}


@pytest.mark.parametrize("made", [size_json(STUDY), tune_json(STUDY), check_json(STUDY), sheet_json(STUDY)])
def test_what_every_object_holds(made: dict[str, Any]) -> None:
    assert set(made) >= ALWAYS
    assert made["axis"] == "Sample axis (invented)"
    assert made["inputs"] == {"axis_file": STUDY.document.digest}
    assert made["checks"]
    assert all(set(check) >= CHECK_KEYS for check in made["checks"])
    assert {check["verdict"] for check in made["checks"]} <= {"pass", "fail", "not evaluated", "not applicable"}
    assert made["cautions"]
    assert all(set(caution) == {"text", "governs"} for caution in made["cautions"])
    json.dumps(made, allow_nan=False)


def test_size() -> None:
    demand = size_json(STUDY)["demand"]
    assert set(demand) >= {
        "peak_torque_Nm",
        "rms_torque_Nm",
        "peak_speed_rad_per_s",
        "mean_speed_rad_per_s",
        "peak_current_Arms",
        "rms_current_Arms",
        "cycle_time_s",
        "inertia_ratio",
        "regenerated_energy_J",
        "brake_resistor_mean_power_W",
    }
    assert demand["peak_speed_rad_per_s"] == pytest.approx(2.0 * math.pi * 30.0)  # 0.6 m/s on a lead of 20 mm


def test_tune() -> None:
    made = tune_json(STUDY)
    assert made["seed"] == 1
    loops = made["loops"]
    assert loops["current"] == {"kp_V_per_A": 22.0, "ti_s": 4.7e-3}
    assert loops["velocity"] == {"kp_Nms_per_rad": 1.9, "ti_s": 6e-3, "setpoint_weight": 0.4, "filter_s": 0.2e-3}
    assert loops["position"] == {"kv_per_s": 85.0}
    assert loops["feedforward"] == {"velocity": 1.0, "torque": 0.95}
    assert loops["filters"][1]["kind"] == "notch"
    assert loops["filters"][1]["frequency_rad_per_s"] == pytest.approx(2.0 * math.pi * 210.0)
    assert loops["move_jerk"] == [311.1, 287.4]
    margins = made["margins"]
    assert margins["gain_margin_up_dB"] == 9.3
    assert margins["gain_margin_down_dB"] is None  # nothing found within the range that is looked at
    assert margins["worst_corner"] == CORNER
    assert {"textbook", "bound", "machine_bound", "path"} <= set(made)
    assert made["textbook"]["time_to_window_s"] is None
    assert made["bound"]["time_to_window_s"] == 1.06
    assert made["path"][0]["time_to_window_s"] is None


def test_check() -> None:
    made = check_json(STUDY)
    assert made["corners"] == 2
    first = made["moves"][0]
    assert first["commanded_end_s"] == 0.61
    assert first["worst"]["corner"] == CORNER
    wanted = {
        "time_to_window_s",
        "in_position_signal_s",
        "overshoot_m",
        "peak_following_error_m",
        "peak_torque_Nm",
        "peak_current_Arms",
        "current_saturated_s",
        "voltage_saturated_s",
    }
    assert set(first["nominal"]) >= wanted
    assert set(first["worst"]) >= wanted
    assert first["worst"]["time_to_window_s"] == pytest.approx(0.6412)
    assert first["worst"]["peak_current_Arms"] == pytest.approx(7.2 / math.sqrt(2.0))


def test_never_is_null() -> None:
    made = check_json(replace(STUDY, settled=settled(STUDY.axis, NEVER)))
    assert made["moves"][0]["worst"]["time_to_window_s"] is None
    assert made["moves"][0]["worst"]["in_position_signal_s"] is None
    assert made["verdict"] == "fail"
    assert not [value for value in _leaves(made) if isinstance(value, float) and not math.isfinite(value)]


def test_a_turning_axis_ends_its_keys_in_radians() -> None:
    from axis.completion import CompletedAxis

    axis: CompletedAxis = STUDY.axis
    turning = replace(axis, stated=replace(axis.stated, head=replace(axis.stated.head, travel="rotary")))
    made = check_json(replace(STUDY, axis=turning))
    assert "overshoot_rad" in made["moves"][0]["nominal"]
    assert "overshoot_m" not in made["moves"][0]["nominal"]


def test_without_settings_the_check_says_what_is_missing() -> None:
    from axis.study import check

    made = check_json(check(opened(document(loops=None))))
    assert made["verdict"] == "not evaluated"
    assert "settlepoint tune" in made["unevaluated"]
    assert "moves" not in made


def test_the_file_is_the_same_twice_and_reads_back() -> None:
    first = to_json(study())
    assert first == to_json(study())
    assert json.loads(first) == json.loads(json.dumps(sheet_json(STUDY)))


@pytest.mark.parametrize("name", ['Quote " and \\ backslash', "Ünïcode µ → Ω", "<script>alert(1)</script>"])
def test_any_name_survives(name: str) -> None:
    assert json.loads(to_json(study(name)))["axis"] == name


def _leaves(value: Any) -> Iterator[Any]:
    if isinstance(value, dict | list):
        for one in value.values() if isinstance(value, dict) else value:
            yield from _leaves(one)
    else:
        yield value
