"""Ctrl-C: exit 130, a sentence, the old files whole, no half file beside them."""

import os
import signal
import subprocess
import sys

import pytest

from axis.cli import run
from tests.cli.command import ENVIRONMENT, RAM, WATCHDOG, changed

TEXT = changed(RAM.read_text(encoding="utf-8"), ("load_mass = 0.05\nfriction = 0.3\n", ""))


@pytest.fixture
def ram(tmp_path):
    path = tmp_path / "axis.toml"
    path.write_text(TEXT, encoding="utf-8")
    return path


@pytest.mark.parametrize(
    "call", ["os.fsync", "os.replace", "tempfile.mkstemp"], ids=["while writing", "before replacing", "before writing"]
)
@pytest.mark.parametrize("command", ["tune", "sheet", "demo"])
def test_interrupted_while_writing(ram, tmp_path, monkeypatch, capsys, call, command):
    sheet = tmp_path / "sheet.json"
    sheet.write_text("the sheet of yesterday", encoding="utf-8")
    (tmp_path / "carriage.toml").write_text("the demo of yesterday", encoding="utf-8")
    before = {path.name: path.read_bytes() for path in tmp_path.iterdir()}

    def interrupted(*arguments, **named):
        raise KeyboardInterrupt

    monkeypatch.setattr(call, interrupted)
    arguments = {
        "tune": ["tune", str(ram), "--runs", "100", "--write"],
        "sheet": ["sheet", str(ram), "-o", str(sheet)],
        "demo": ["demo", str(tmp_path)],
    }[command]
    assert run(arguments) == 130
    assert capsys.readouterr().err.strip() == "interrupted; nothing half-written is left"
    assert {path.name: path.read_bytes() for path in tmp_path.iterdir()} == before


@pytest.mark.skipif(sys.platform == "win32", reason="no pseudo terminal here")
def test_ctrl_c_in_the_middle_of_a_search(ram):
    """A real signal to a real process at its terminal, once its progress line shows that the search is under way."""
    import pty

    terminal, end = pty.openpty()
    command = [sys.executable, "-m", "axis", "tune", str(ram), "--write", "--runs", "100000000"]
    process = subprocess.Popen(command, env=ENVIRONMENT, stdout=subprocess.PIPE, stderr=end)
    os.close(end)
    shown = b""
    try:
        while b"best so far" not in shown:
            shown += os.read(terminal, 4096)
        process.send_signal(signal.SIGINT)
        out, _ = process.communicate(timeout=WATCHDOG)
        try:
            while more := os.read(terminal, 4096):
                shown += more
        except OSError:  # how a terminal says that its other end is closed
            pass
    finally:
        process.kill()
        os.close(terminal)
    assert process.returncode == 130
    assert out == b""
    assert shown.rstrip().endswith(b"interrupted; nothing half-written is left")
    assert b"Traceback" not in shown
    assert [path.name for path in ram.parent.iterdir()] == ["axis.toml"]
    assert ram.read_text(encoding="utf-8") == TEXT
