"""The frame: verdicts in the navigation, settings of the server, starting, and pages that raise."""

import signal
import socket
import subprocess
import sys
import tomllib

import pytest

from axis.errors import CannotWrite
from axis.screens import launch, pages
from axis.screens.launch import HOST, OPTIONS, START, command, free_port
from tests.screens.window import ROOT, WITH_LOOPS, Window
from tests.sheet.sample import TEXT, study


def titles(window: Window) -> list[str]:
    """The steps as the navigation names them, in its order."""
    recorded: list[dict[str, str]] = []
    real = pages.titles

    def recording() -> dict[str, str]:
        recorded.append(real())
        return recorded[-1]

    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(pages, "titles", recording)
        window.run()
    return list(recorded[-1].values())


def test_the_verdict_of_every_step_stands_beside_its_name() -> None:
    assert titles(Window()) == [
        "Axis   □ none open",
        "Sizing   □ not evaluated",
        "Settling and settings   □ not evaluated",
        "Sheet   □ not evaluated",
    ]
    window = Window.on(WITH_LOOPS)
    window.results.settled = study()
    axis, sizing, settling, sheet = titles(window)
    assert axis == "Axis   ● understood"
    assert sizing.startswith("Sizing   ")
    assert settling == "Settling and settings   ● passes"
    assert sheet.startswith("Sheet   ")
    assert titles(window.type("load.mass", "1,5 kg"))[0] == "Axis   ▲ 1 to mend"


def test_a_page_that_raises_loses_nothing(monkeypatch: pytest.MonkeyPatch) -> None:
    def raising(*_: object) -> str:
        raise RuntimeError("a fault in a page")

    window = Window.on(TEXT)
    with monkeypatch.context() as patch:
        patch.setattr("axis.screens.chain._stage", raising)
        window.at.text_input(key="field load.mass").set_value("40 kg")
        assert "Everything you typed is kept. internal error" in window.run().words
    assert Window(window.key).field("load.mass") == "40 kg"


def test_a_fault_in_the_computation_leaves_the_page_that_mends_it(monkeypatch: pytest.MonkeyPatch) -> None:
    def raising(*_: object) -> object:
        raise ZeroDivisionError("a fault in a formula")

    monkeypatch.setattr("axis.screens.desk.size", raising)
    window = Window.on(TEXT.replace("83.8 lb", "12.345 kg"))
    assert "internal error" in window.words
    assert window.field("load.mass") == "12.345 kg"


def test_both_copies_of_the_servers_settings_are_the_same() -> None:
    top = (ROOT / ".streamlit" / "config.toml").read_bytes()
    assert (START.parent / ".streamlit" / "config.toml").read_bytes() == top


def test_the_settings_of_the_file_and_of_the_command_agree() -> None:
    config = tomllib.loads((ROOT / ".streamlit" / "config.toml").read_text())
    for name, value in OPTIONS.items():
        section, _, key = name.partition(".")
        assert str(config[section][key]).lower() == value.lower(), name


def test_the_server_listens_on_this_machine_only() -> None:
    given = command(8599)
    assert given[:4] == [sys.executable, "-m", "streamlit", "run"]
    assert HOST == "127.0.0.1"
    assert f"--server.address={HOST}" in given
    assert "--browser.gatherUsageStats=false" in given
    assert START.is_file()


def test_both_start_files_do_the_same() -> None:
    def statements(path: str) -> str:
        return (ROOT / path).read_text().partition('"""\n\n')[2]

    assert statements("app.py") == statements("axis/screens/start.py")


def test_a_port_in_use_is_told() -> None:
    with socket.socket() as taken:
        taken.bind((HOST, 0))
        taken.listen()
        with pytest.raises(CannotWrite, match="in use"):
            free_port(taken.getsockname()[1])


def test_the_server_ends_with_the_command_that_started_it() -> None:
    port = free_port(None)
    call = [sys.executable, "-m", "axis", "app", "--no-browser", "--port", str(port)]
    started = subprocess.Popen(call, cwd=ROOT, stdout=subprocess.PIPE, stderr=subprocess.DEVNULL, text=True)
    assert started.stdout is not None
    with started.stdout as out:
        assert f"http://{HOST}:{port}, on this machine only" in out.readline()
    started.terminate()
    assert started.wait(60.0) == 128 + signal.SIGTERM
    with pytest.raises(OSError, match="refused"), socket.create_connection((HOST, port), timeout=5.0):
        pass


def test_a_server_that_ends_at_once_is_no_server(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(launch, "command", lambda port: [sys.executable, "-c", "raise SystemExit(3)"])
    assert launch.launch(None, open_browser=True) == 3
