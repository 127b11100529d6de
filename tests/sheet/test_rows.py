"""The rows of the sheet: what was understood, what must be set, what came out."""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path

import pytest

from axis.files.axis_file import read
from axis.files.catalogue import shipped_folder
from axis.sheet.rows import (
    check_rows,
    comparison_rows,
    demand_rows,
    headline,
    limit_sentences,
    margin_rows,
    move_rows,
    path_rows,
)
from axis.sheet.settings import setting_rows
from axis.sheet.shown import SHAPES, WORDS
from axis.sheet.values import ValueRow, understood
from axis.study import Study, opened
from axis.verdicts import Check, Verdict
from tests.sheet.sample import NEVER, TEXT, document, settled, study

STUDY = study()


def _by_path(shown: Study) -> dict[str, ValueRow]:
    return {row.path: row for group in understood(shown) for row in group.rows if row.path}


ROWS = _by_path(STUDY)


def test_a_value_is_shown_as_typed_and_as_used() -> None:
    row = ROWS["load.mass"]
    # 83.8 lb · 0.45359237 kg/lb = 38.011… kg
    assert (row.typed, row.echo, row.value, row.origin) == ("83.8 lb", "83.8 lb", "38 kg", "stated")
    assert ROWS["transmission[1].length"].echo == "0.7 m"
    assert ROWS["transmission[1].length"].value == "700 mm"


def test_what_reads_the_same_is_not_repeated() -> None:
    for path in ("window.position", "motor.torque_constant", "transmission[1].lead", "move[1].payload"):
        assert ROWS[path].typed
        assert ROWS[path].echo == ""


def test_digits_that_were_typed_are_not_rounded_away() -> None:
    shown = opened(document(text=TEXT.replace('"300 mm"', '"301.25 mm"').replace('"-300 mm"', '"-301.25 mm"')))
    assert _by_path(shown)["move[1].distance"].value == "301.25 mm"


def test_every_assumption_is_a_row_that_says_so() -> None:
    for one in STUDY.axis.assumptions:
        assert ROWS[one.path].origin == "assumed", one.path
        assert ROWS[one.path].value, one.path
    assert ROWS["drive.velocity_period"].value == "125 µs"
    assert ROWS["drive.velocity_period"].note == "two current periods"
    # 400 V · √2 = 565.7 V
    assert ROWS["drive.dc_link_nominal"].value == "566 V"
    assert ROWS["axis.incline"].origin == "assumed"


def test_nothing_that_was_typed_is_missing() -> None:
    bases = {"motor.torque_constant_basis", "motor.winding_basis", "drive.current_basis"}
    titles = {"axis.name", "payload[1].name", "transmission[1].kind"}
    assert set(STUDY.document.typed) - set(ROWS) == bases | titles
    assert ROWS["motor.resistance"].value == "2.6 Ω (line-line)"
    assert ROWS["drive.peak_current"].value == "20 A (rms)"


def test_values_of_a_catalogue_name_their_row() -> None:
    (file, *_) = sorted(Path(shipped_folder()).glob("carriage.toml"))
    rows = _by_path(opened(read(file)))
    assert rows["motor.torque_constant"].origin == "catalogue"
    assert rows["motor.torque_constant"].note.startswith("motors.csv: ")


def test_what_is_computed_is_marked() -> None:
    rows = {row.name: row for group in understood(STUDY) for row in group.rows if row.origin == "computed"}
    assert rows["Travel per motor revolution"].value == "20 mm"
    # √(4.6e6/43.01)/2π = 52.05 Hz full, √(4.6e6/38.01)/2π = 55.36 Hz empty, screw inertia beyond the spring apart
    assert rows["Antiresonance, largest payload to empty"].value.endswith("Hz")


@pytest.mark.parametrize("rotary", [False, True])
def test_what_fails_comes_first_then_the_tightest(rotary: bool) -> None:
    def check(name: str, verdict: Verdict, margin: float | None) -> Check:
        return Check(name, name, verdict, "own", demand=1.0, limit=2.0, unit="N*m", margin=margin)

    told = [
        check("roomy", "pass", 0.9),
        check("neutral", "not applicable", None),
        check("stable", "pass", None),
        check("open", "not evaluated", None),
        check("tight", "pass", 0.1),
        check("bad", "fail", -0.1),
        check("worse", "fail", -0.5),
    ]
    rows = check_rows(told, rotary)
    assert [row.name for row in rows] == ["worse", "bad", "open", "tight", "roomy", "stable", "neutral"]
    assert (rows[0].demand, rows[0].limit, rows[0].margin_text) == ("1 N·m", "2 N·m", "-50 %")
    assert len({SHAPES[row.verdict] for row in rows}) == len({WORDS[row.verdict] for row in rows}) == 4


def test_settings_are_exact_and_say_where_they_come_from() -> None:
    rows = {row.path: row for row in setting_rows(STUDY)}
    assert {path: row.text for path, row in rows.items()} == {
        "current.kp": "22 V/A",
        "current.ti": "4.7 ms",
        "velocity.kp": "1.9 N·m·s/rad",
        "velocity.ti": "6 ms",
        "velocity.setpoint_weight": "0.4",
        "velocity.filter": "0.2 ms",
        "position.kv": "85 1/s",
        "feedforward.velocity": "1",
        "feedforward.torque": "0.95",
        "filters[1].frequency": "800 Hz",
        "filters[2].frequency": "210 Hz",
        "filters[2].width": "60 Hz",
        "filters[2].depth": "0.1",
        "move_jerk[1]": "311.1 m/s³",
        "move_jerk[2]": "287.4 m/s³",
    }
    assert rows["current.kp"].origin == "modulus optimum from R, L and delay"
    assert rows["velocity.kp"].origin == rows["move_jerk[1]"].origin == "search, worst corner"
    assert all(row.origin for row in rows.values())


def test_settings_of_a_file_say_that_they_were_typed() -> None:
    typed = setting_rows(opened(document()))
    assert {row.origin for row in typed} == {"as in the axis file"}
    assert setting_rows(opened(document(loops=None))) == ()


def test_a_typed_current_loop_that_is_the_modulus_optimum_is_recognised() -> None:
    from axis.loops.current import design_current_loop
    from tests.sheet.sample import LOOPS

    motor = STUDY.axis.motor
    optimum = design_current_loop(motor.resistance, motor.saturated_inductance, STUDY.axis.drive.rates)
    rows = setting_rows(opened(document(loops=replace(LOOPS, current=optimum))))
    assert rows[0].origin == "as in the axis file; equals the modulus optimum from R, L and delay"


def test_a_move_tells_nominal_and_worst() -> None:
    first = move_rows(STUDY)[0]
    assert first.title == "Move 1: 300 mm, full tray"
    figures = {row.name: (row.nominal, row.worst) for row in first.figures}
    assert figures["Load settled, after the commanded end"] == ("12.3 ms", "31.2 ms")
    assert figures["Overshoot of the load"] == ("3.2 µm", "14.7 µm")
    # 5.8 A and 7.2 A of the q axis over √2
    assert figures["Peak current, rms"] == ("4.1 A", "5.09 A")
    assert first.worst_corner.startswith("at load mass +5 %, friction -40 %")
    assert first.sentence == "keeps what it owes at 2 of 2 computed corners"


def test_a_load_that_never_settles_is_told_so() -> None:
    bad = replace(STUDY, tuned=None, settled=settled(STUDY.axis, NEVER))
    figures = {row.name: row.worst for row in move_rows(bad)[0].figures}
    assert figures["Load settled, after the commanded end"] == "never"
    assert "misses what it owes at 1 of 2 computed corners" in headline(bad)
    assert bad.verdict == "fail"


def test_margins_stand_beside_what_is_asked() -> None:
    rows = {row.name: row for row in margin_rows(STUDY)}
    assert rows["Gain margin upwards"].found == "9.3 dB"
    assert rows["Gain margin downwards"].found == "> 60 dB"
    assert rows["Phase margin"].asked == "≥ 30 °"
    assert rows["Peak of the sensitivity"].textbook == "1.9"
    assert all(row.holds for row in rows.values())


def test_comparison_and_path() -> None:
    rows = {row.name: (row.here, row.textbook) for row in comparison_rows(STUDY)}
    # 2 · (0.61 + 0.0312) s
    assert rows["Time to window from the first sample, all moves, each at its worst corner"] == ("1.28 s", "never")
    assert rows["Corners at which a move misses what it owes"] == ("0 of 2", "1 of 2")
    assert path_rows(STUDY)[0] == ("order 3 with a real pole", "never", "40 corners miss")


def test_demand_is_printed_in_rms_amperes() -> None:
    assert STUDY.sizing is not None
    rows = dict(demand_rows(STUDY))
    assert rows["peak speed"] == "1800 rpm"
    assert float(rows["peak current (rms)"].split()[0]) == pytest.approx(
        STUDY.sizing.demand.peak_current / math.sqrt(2.0), rel=5e-3
    )


def test_passing_is_never_called_a_guarantee() -> None:
    told = " ".join(limit_sentences(STUDY))
    assert "2 corners" in told
    assert "no guarantee" in told
    assert "Not evaluated, for want of data: Winding temperature" in told


def test_without_settings_the_headline_says_what_to_do() -> None:
    from axis.study import check

    assert "settlepoint tune" in headline(check(opened(document(loops=None))))
