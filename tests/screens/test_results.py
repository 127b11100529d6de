"""Sizing, settling and sheet on the screen: the same digits as the study and the command line."""

import contextlib
import re
import threading
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
import streamlit as st

from axis.cautions import FIRST_ENABLE, SUSPENDED
from axis.cli import run
from axis.errors import Stopped
from axis.files.axis_file import read_text
from axis.screens import jobs
from axis.sheet.rows import check_rows, demand_rows, headline, move_rows
from axis.sheet.settings import setting_rows
from axis.study import Study, opened, size
from tests.screens.window import WITH_LOOPS, Window
from tests.sheet.sample import LOOPS, TEXT, study, trace, tuned

ONE_CORNER = re.sub(r"\[tolerance\].*", "", TEXT, flags=re.DOTALL)
WAIT = 300.0  # [s] a watchdog; the simulation may have to be compiled first


@pytest.fixture
def no_simulation(monkeypatch: pytest.MonkeyPatch) -> None:
    """The sample's own records in the place of simulated ones."""
    monkeypatch.setattr("axis.screens.tails.tail_trace", lambda *_: trace())


def settled_window() -> Window:
    """The sample axis under its settings, with the sample's results."""
    window = Window.on(WITH_LOOPS)
    window.results.tuned = window.results.settled = study()
    return window.run()


def downloads(monkeypatch: pytest.MonkeyPatch) -> dict[str, Any]:
    """What the page offers to take along: file name → bytes, or what makes them."""
    offered: dict[str, Any] = {}
    real = st.download_button

    def recorded(label: str, data: Any, file_name: str, **more: Any) -> bool:
        offered[file_name] = data
        return bool(real(label, data=data, file_name=file_name, **more))

    monkeypatch.setattr(st, "download_button", recorded)
    return offered


def test_the_checks_are_those_of_the_study() -> None:
    window = Window.on(TEXT).page("sizing")
    sized = size(opened(read_text(TEXT)))
    assert sized.sizing is not None
    rows = check_rows(sized.sizing.checks, False)
    assert len(rows) > 5
    for row in rows:
        assert f"{row.name} {row.demand} {row.limit}" in window.words
        assert row.reason in window.words
        assert row.source in window.words
    shown = [window.words.index(f"{row.name} {row.demand} {row.limit}") for row in rows]
    assert shown == sorted(shown), "the tightest first, as the rows are"
    for name, value in demand_rows(sized):
        assert f"{name} {value}".replace(" ", "") in window.words.replace(" ", "")


def test_a_failing_check_gives_its_cure_and_stands_in_the_navigation() -> None:
    text = TEXT.replace('"6 m/s^2"', '"60 m/s^2"')  # 43 kg: 2.6 kN on 20 mm a turn, 8.2 N·m without the rotor
    window = Window.on(text).page("sizing")
    sized = size(opened(read_text(text)))
    assert sized.sizing is not None
    failing = [check for check in sized.sizing.checks if check.verdict == "fail"]
    assert failing
    assert all(check.remedy and check.remedy in window.words for check in failing)
    assert "sp-bar over" in window.html
    assert "checks fail" in window.words


def test_checks_of_an_axis_that_is_wrong_by_now_are_grey_and_say_so() -> None:
    window = Window.on(TEXT).page("sizing")
    assert "sp-stale" not in window.html
    window.page("describe").type("load.mass", "1,5 kg").page("sizing")
    assert "sp-stale" in window.html
    assert "before your last change" in window.words
    assert "has a decimal comma" in window.words


@pytest.mark.parametrize("name", ["sizing", "settling", "take_along"])
def test_steps_without_an_axis_say_what_they_lack(name: str) -> None:
    assert "No axis is open" in Window().page(name).words


@pytest.mark.parametrize("name", ["sizing", "settling", "take_along"])
def test_steps_of_an_axis_that_is_wrong_say_what_they_lack(name: str) -> None:
    window = Window.on(TEXT.replace("83.8 lb", "1,5 kg")).page(name)
    assert "not evaluated" in window.words
    assert "has a decimal comma" in window.words


def test_settling_without_settings_says_what_is_missing() -> None:
    window = Window.on(TEXT).page("settling")
    assert "not evaluated" in window.words
    assert "no [loops]" in window.words
    assert window.results.checking is None


def test_moves_settings_and_cautions_are_those_of_the_study(no_simulation: None) -> None:
    window = settled_window().page("settling")
    sample = study()
    close = window.words.replace(" ", "")
    assert headline(replace(sample, sizing=size(sample).sizing)) in window.words
    for move in move_rows(sample):
        assert move.title in window.words
        assert move.worst_corner in window.words
        for row in move.figures:
            assert f"{row.name}{row.nominal}{row.worst}".replace(" ", "") in close
    rows = setting_rows(sample)
    assert len(rows) > 10
    for setting in rows:
        assert f"{setting.text}".replace(" ", "") in close
        assert setting.origin in window.words
    assert FIRST_ENABLE.text in window.words
    assert SUSPENDED.text not in window.words
    assert len(window.at.get("plotly_chart")) == 2


def test_a_number_and_its_unit_never_run_together(no_simulation: None) -> None:
    window = settled_window().page("settling")
    assert re.search(r"Position-loop gain, Kv 85 1/s", window.words), "85 1/s must not be read as 851/s"
    assert '<td class="w">85</td><td class="f"></td><td class="u">1/s</td>' in window.html


def test_a_suspended_load_is_warned_of_where_the_drive_is_enabled(no_simulation: None) -> None:
    window = Window.on(WITH_LOOPS.replace('travel = "linear"', 'travel = "linear"\nincline = "90 deg"'))
    axis = read_text(window.draft.text).axis
    window.results.settled = replace(study(), document=replace(study().document, axis=axis))
    assert SUSPENDED.text in window.run().page("settling").words


def test_results_of_an_earlier_input_are_grey_and_say_so(no_simulation: None, monkeypatch: pytest.MonkeyPatch) -> None:
    def endless(study: Study, progress: Any) -> Study:
        while True:
            progress(0.25, "50 of 201 corners")

    monkeypatch.setattr(jobs, "check", endless)
    window = settled_window().page("settling")
    assert "sp-stale" not in window.html
    window.page("describe").type("load.mass", "90 lb").page("settling")
    assert "sp-stale" in window.html
    assert "computed before your last change" in window.words
    assert "search again for this one" in window.words
    assert window.results.checking is not None, "what is quick follows the edit by itself"
    window.press("stop check")
    assert window.results.checking.stopping
    for thread in threading.enumerate():
        if thread.name == "check":
            thread.join(WAIT)
    stopped = window.run().results.checking
    assert "The check gave no result: stopped" in window.words
    window.press("again check")
    assert window.results.checking is not stopped, "what was stopped can be started again"
    window.results.stop()
    window.page("describe").type("load.mass", "83.8 lb").page("settling")
    assert "sp-stale" not in window.html, "the input that was computed is back"


def test_the_tail_before_a_change_stays_in_the_picture(no_simulation: None) -> None:
    window = settled_window().page("settling")
    name = "worst corner before the last change"
    assert name not in window.at.get("plotly_chart")[0].proto.spec
    window.page("describe").type("load.mass", "90 lb")
    axis = read_text(window.draft.text).axis
    window.results.settle(replace(study(), document=replace(study().document, axis=axis)))
    window.page("settling")
    assert "sp-stale" not in window.html
    assert name in window.at.get("plotly_chart")[0].proto.spec


def test_a_search_shows_its_progress_is_stopped_and_gives_its_settings_to_the_axis(
    no_simulation: None, monkeypatch: pytest.MonkeyPatch
) -> None:
    told = threading.Event()

    def fake(study: Study, seed: int, runs: int, progress: Any) -> Study:
        assert (seed, runs) == (7, 5000)
        with contextlib.suppress(Stopped):
            while True:
                progress(0.4, "best so far 12.3 ms at the worst corner")
                told.set()
        found = tuned(study.axis)
        axis = replace(study.document.axis, loops=found.loops)
        return replace(study, document=replace(study.document, axis=axis), tuned=found, settled=found.result.settled)

    monkeypatch.setattr(jobs, "tune", fake)
    window = Window.on(TEXT).page("settling")
    window.at.text_input(key="seed").set_value("7")
    window.at.text_input(key="runs").set_value("5000")
    window.run()
    next(button for button in window.at.button if button.label == "Search settings").click()
    window.run()
    assert told.wait(WAIT)
    window.run()
    assert window.at.get("progress")[0].proto.text.endswith("best so far 12.3 ms at the worst corner")
    window.press("stop tuning")
    job = window.results.tuning
    assert job is not None
    for thread in threading.enumerate():
        if thread.name == "tuning":
            thread.join(WAIT)
    window.run()
    axis = read_text(window.draft.text).axis
    assert axis.loops == LOOPS, "an axis without settings takes those that were found"
    assert headline(study()) in window.words
    assert "The path of the search" in window.words
    window.page("describe").part("Settings").type("loops.velocity.kp", "2 N*m*s/rad").page("settling")
    assert "other settings than the search found" in window.words
    next(button for button in window.at.button if button.label.startswith("Replace")).click()
    window.run()
    assert read_text(window.draft.text).axis.loops == LOOPS


@pytest.mark.parametrize(
    ("key", "typed"), [("seed", "-1"), ("seed", "1.5"), ("runs", "12,000"), ("runs", "5"), ("runs", "²")]
)
def test_seed_and_budget_are_checked(key: str, typed: str) -> None:
    window = Window.on(TEXT).page("settling")
    window.at.text_input(key=key).set_value(typed)
    window.run()
    assert "write a whole number" in window.words
    assert next(button for button in window.at.button if button.label == "Search settings").disabled


def test_the_range_of_a_chart_is_typed_and_checked(no_simulation: None) -> None:
    window = settled_window().page("settling")
    window.at.text_input(key="to 1").set_value("20 ms")
    window.run()
    assert '"range":[' in window.at.get("plotly_chart")[0].proto.spec
    window.at.text_input(key="to 1").set_value("20 kg")
    window.run()
    assert "Time to: " in window.words
    window.at.text_input(key="to 1").set_value("-1 s")
    window.run()
    assert "must begin below its end" in window.words


def test_the_sheet_taken_along_is_the_command_lines_byte_for_byte(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    text = ONE_CORNER + WITH_LOOPS[WITH_LOOPS.index("[loops]") :]
    text = text.replace('"1.9 N*m*s/rad"', '"0.35 N*m*s/rad"').replace(
        '"85 1/s"', '"60 1/s"'
    )  # gains that come to rest
    window = Window.on(text).page("settling")
    for thread in threading.enumerate():
        if thread.name == "check":
            thread.join(WAIT)
    offered = downloads(monkeypatch)
    window.page("take_along")
    file = tmp_path / "sample.toml"
    file.write_bytes(offered["sample.toml"])
    assert file.read_text() == text
    for ending in (".json", ".pdf"):
        output = tmp_path / f"by-command{ending}"
        assert run(["sheet", str(file), "-o", str(output)]) in (0, 1)
        assert offered[f"sample-settings{ending}"]() == output.read_bytes()
