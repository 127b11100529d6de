"""End to end on the demo axis: the tool's own settings hold at every corner, its two rivals each miss at some.

One tuning with the default budget serves the whole module.
"""

import json
import shutil

import pytest

import axis
from axis.cli import run
from axis.description.wishes import Tolerance
from axis.files.write import save_loops
from axis.loops.margins import margins_hold
from axis.loops.sampled import sample_plant
from axis.tuning.objective import margin_corners
from axis.tuning.result import Reference
from tests.tuning.demo import changed, failing_corners, shipped

DEMO = shipped("carriage.toml")


@pytest.fixture(scope="module")
def tuned():
    return axis.tune(DEMO)


def test_the_demo_is_no_toy():
    """Stroke, window, antiresonance, break-away and tolerances are not milder than a demo has to be."""
    stated, completed = DEMO.document.axis, DEMO.axis
    assert min(abs(move.distance) for move in completed.moves) >= 0.2
    assert stated.window.position == pytest.approx(25e-6)
    for payload in (0.0, completed.heaviest_payload):
        plant = completed.plant(payload)
        assert (plant.stiffness / plant.load_inertia) ** 0.5 <= 2.0 * 3.14159265 * 60.0
    assert completed.breakaway >= 1.3 * completed.coulomb
    # The five tolerances of the axis file's reference page.
    assert stated.tolerance == Tolerance(
        load_mass=0.05, friction=0.4, torque_constant=0.05, stiffness=0.2, supply_voltage=0.1
    )


def test_the_tools_own_settings_hold_at_every_corner(tuned):
    assert tuned.settled.corners == 201  # nominal, and 5·5·2·2·2
    assert failing_corners(tuned) == 0
    assert tuned.settled.verdict == "pass"
    assert tuned.tuned.verdict == "pass"
    assert tuned.tuned.reason == ""
    window = DEMO.document.axis.window
    for move in tuned.settled.moves:
        assert move.worst.settling_time <= window.settle_within
        assert move.worst.signal >= move.worst.time_to_window
        assert abs(move.worst.rest_error) <= window.position


def test_the_margins_asked_for_hold_at_every_corner(tuned):
    """By the decision of the exact loop at every corner, five steps of mass and stiffness, each payload."""
    loops, rates = tuned.tuned.loops, DEMO.axis.drive.rates
    constant = DEMO.axis.motor.torque_constant
    corners = margin_corners(DEMO.axis, (-1.0, -0.5, 0.0, 0.5, 1.0))
    assert len(corners) == 2 * (5 * 5 * 2 + 1)
    for corner, plant in corners:
        sampled = sample_plant(plant, rates, loops.current, constant)
        assert margins_hold(sampled, loops, DEMO.axis.stated.tuning), corner
    margins = tuned.tuned.result.margins
    assert margins.stable
    assert margins.gain_margin_up_dB >= 6.0
    assert margins.gain_margin_down_dB >= 6.0
    assert margins.phase_margin_deg >= 30.0
    assert margins.peak_sensitivity <= 2.0


def test_the_textbook_settings_miss_at_some_corner(tuned):
    textbook: Reference = tuned.tuned.textbook
    assert textbook.settled.verdict == "fail"
    assert max(move.failing_corners for move in textbook.settled.moves) >= 1
    assert textbook.worst_time > tuned.tuned.result.worst_time
    assert textbook.loops.move_jerk == tuned.tuned.loops.move_jerk  # the same moves
    assert textbook.loops.filters == tuned.tuned.loops.filters  # behind the same filters


def test_settings_tuned_on_the_nominal_axis_alone_miss_at_some_corner():
    nominal = axis.tune(changed(DEMO, tolerance=Tolerance()))
    assert nominal.settled.corners == 1
    assert nominal.settled.verdict == "pass"
    checked = axis.check(changed(DEMO, loops=nominal.tuned.loops))
    assert checked.settled.verdict == "fail"
    assert failing_corners(checked) >= 1


def test_no_faster_than_the_bound(tuned):
    """The rigid axis's bound may be beaten by the swing of the load, by some per cent and not more."""
    found = tuned.tuned
    assert found.machine_bound < found.bound
    assert found.result.worst_time > 0.9 * found.bound


def test_the_path_is_told(tuned):
    designed, searched = tuned.tuned.path[0], tuned.tuned.path[-1]
    assert designed.name.startswith("designed: prototype of order")
    assert f"seed {tuned.tuned.seed}" in searched.name
    assert (searched.failing_corners, searched.margins_hold) == (0, True)
    assert searched.worst_time == tuned.tuned.result.worst_time


def test_written_settings_give_the_same_figures_to_the_digit(tuned, tmp_path, capsys):
    path = tmp_path / "carriage.toml"
    shutil.copy(DEMO.document.path, path)
    save_loops(path, axis.load(path).document, tuned.tuned.loops)
    assert "# the jerk is left open: tuning chooses it" in path.read_text(encoding="utf-8")
    loaded = axis.load(path)
    assert loaded.document.axis.loops == tuned.tuned.loops
    assert run(["check", str(path), "--json"]) == 0
    found = json.loads(capsys.readouterr().out)
    for move, told in zip(tuned.settled.moves, found["moves"], strict=True):
        assert told["worst"]["time_to_window_s"] == move.worst.time_to_window
        assert told["worst"]["corner"] == dict(move.worst_corner)
        assert told["worst"]["rest_error_m"] == move.worst.rest_error
        assert told["nominal"]["in_position_signal_s"] == move.nominal.signal
    assert [one["demand"] for one in found["checks"]] == [check.demand for check in tuned.settled.all_checks]


def test_settings_can_be_typed_into_a_drive(tuned):
    """Four significant digits and no more, so that what was verified is what is typed."""
    loops = tuned.tuned.loops
    for value in (
        loops.current.kp,
        loops.velocity.kp,
        loops.velocity.ti * 1e3,
        loops.position.kv,
        loops.feedforward.torque,
        *loops.move_jerk,
    ):
        assert float(f"{value:.4g}") == pytest.approx(value, rel=1e-12)


def test_a_study_after_tuning_says_the_jerk_it_moves_with(tuned):
    assert [move.jerk for move in tuned.axis.moves] == list(tuned.tuned.loops.move_jerk)
    resized = axis.size(tuned)
    assert (resized.sizing.verdict, resized.verdict) == ("pass", "pass")
