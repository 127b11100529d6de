"""Writing: the same floats come back, comments and order stay, an interruption leaves the old file whole."""

from __future__ import annotations

import os
import random
import re
import signal
import subprocess
import sys
import time
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest

from axis.description.settings import CurrentLoop, Feedforward, Loops, PositionLoop, TorqueFilter, VelocityLoop
from axis.errors import CannotWrite, InputError
from axis.files.axis_file import read, read_text
from axis.files.template import template
from axis.files.write import replace_file, save, save_loops, with_loops

ROTARY = """\
format = 1
[axis]
name = "Table"
travel = "rotary"
[load]
inertia = "0.12 kg*m^2"
[[transmission]]
kind = "gearbox"
ratio = -10
[motor]
use = "DM-071-30"
[drive]
use = "DD-08"
[window]
position = "1 arcmin"
[[move]]
distance = "90 deg"
speed = "360 deg/s"
acceleration = "4000 deg/s^2"
[[move]]
to = "0 deg"
duration = "0.4 s"
"""


def _loops(rng: random.Random, moves: int = 2) -> Loops:
    def some(low: float, high: float) -> float:
        return float(10 ** rng.uniform(low, high))

    notch = TorqueFilter("notch", some(2, 4), some(1, 3), rng.uniform(0.01, 1.0))
    return Loops(
        CurrentLoop(some(-1, 3), some(-4, -1)),
        VelocityLoop(some(-3, 2), some(-4, -1), rng.random(), some(-5, -3)),
        PositionLoop(some(0, 3)),
        Feedforward(rng.random(), rng.random()),
        rng.choice([(), (notch,), (TorqueFilter("lowpass", some(2, 4)), notch)]),
        rng.choice([None, tuple(some(1, 5) for _ in range(moves))]),
    )


@pytest.mark.parametrize("text", [template(), ROTARY], ids=["linear", "rotary"])
def test_loops_read_back_bit_for_bit(text: str) -> None:
    rng = random.Random(3)
    document = read_text(text)
    for _ in range(40):  # each time over the settings of the time before
        loops = _loops(rng)
        document = document.with_text(with_loops(document.text, loops, document.axis.rotary))
        assert document.axis.loops == loops
    assert document.text.startswith(text)
    assert document.text.count("[loops]") == 1


def test_loops_are_written_as_people_read_them() -> None:
    loops = Loops(
        CurrentLoop(22.0, 0.0047),
        VelocityLoop(1.9, 0.006, 0.4, 0.0002),
        PositionLoop(85.0),
        Feedforward(1.0, 0.95),
        (),
        (300.0, 250.0),
    )
    assert with_loops("", loops, rotary=False) == (
        "[loops]\n"
        'current = {kp = "22 V/A", ti = "4.7 ms"}\n'
        'velocity = {kp = "1.9 N*m*s/rad", ti = "6 ms", setpoint_weight = 0.4, filter = "0.2 ms"}\n'
        'position = {kv = "85 1/s"}\n'
        "feedforward = {velocity = 1.0, torque = 0.95}\n"
        "filters = []\n"
        'move_jerk = ["300 m/s^3", "250 m/s^3"]\n'
    )


def test_comments_and_order_around_the_loops_stay() -> None:
    settings = """
[loops]                       # from the first commissioning
# the gain of the machine beside it was 90
position = { kv = "80 1/s" }  # careful
velocity = { kp = "1.9 N*m*s/rad", ti = "6 ms" }
[loops.current]               # as a table of its own
ti = "5 ms"                   # slow
kp = "20 V/A"
"""
    text = template().replace("[tolerance]", settings.lstrip() + "\n[tolerance]", 1)
    before = read_text(text)
    assert before.axis.loops is not None
    loops = replace(before.axis.loops, position=PositionLoop(85.0), current=CurrentLoop(22.0, 0.005))
    written = with_loops(text, loops, rotary=False)
    assert read_text(written).axis.loops == loops
    expected = text
    for old, new in (
        ('kv = "80 1/s"', 'kv = "85 1/s"'),
        ('"20 V/A"', '"22 V/A"'),
        ('ti = "6 ms" }', 'ti = "6 ms", setpoint_weight = 1.0, filter = "0 ms"}'),
        ("[loops.current]", "feedforward = {velocity = 1.0, torque = 0.0}\nfilters = []\n\n[loops.current]"),
    ):
        expected = expected.replace(old, new)
    assert written == expected
    assert read_text(with_loops(written, replace(loops, move_jerk=None), rotary=False)).axis.loops == loops


def test_save_refuses_a_file_that_changed(tmp_path: Path) -> None:
    path = tmp_path / "axis.toml"
    path.write_text(template(), encoding="utf-8")
    document, loops = read(path), _loops(random.Random(1))
    path.write_text(template() + "# someone else was here\n", encoding="utf-8")
    with pytest.raises(CannotWrite, match="has changed since it was read"):
        save_loops(path, document, loops)
    assert path.read_text(encoding="utf-8").endswith("# someone else was here\n")
    saved = save_loops(path, document, loops, force=True)
    assert read(path).axis.loops == loops
    save_loops(path, saved, loops)  # the digest went along


def test_settings_that_would_not_read_back_are_not_written(tmp_path: Path) -> None:
    path = tmp_path / "axis.toml"
    path.write_text(template(), encoding="utf-8")
    loops = replace(_loops(random.Random(1)), position=PositionLoop(-1.0))
    with pytest.raises(CannotWrite, match=r'loops\.position\.kv: "-1 1/s" must be above 0 1/s'):
        save_loops(path, read(path), loops)
    assert path.read_text(encoding="utf-8") == template()


def test_a_failing_write_leaves_the_old_file(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "axis.toml"
    path.write_bytes(b"old")
    for fault in (OSError(28, "No space left on device"), KeyboardInterrupt()):

        def fail(*_: Any, fault: BaseException = fault) -> None:
            raise fault

        with monkeypatch.context() as patch:
            patch.setattr(os, "fsync", fail)
            with pytest.raises((CannotWrite, KeyboardInterrupt)):
                replace_file(path, b"new")
        assert path.read_bytes() == b"old"
        assert os.listdir(tmp_path) == ["axis.toml"]
    with pytest.raises(CannotWrite, match="is a folder"):
        replace_file(tmp_path, b"new")
    with pytest.raises(CannotWrite, match="cannot be written"):
        replace_file(tmp_path / "none" / "axis.toml", b"new")


@pytest.mark.skipif(os.name == "nt", reason="signals")
def test_a_killed_writer_leaves_a_whole_file(tmp_path: Path) -> None:
    path = tmp_path / "axis.toml"
    code = (
        "import sys; from pathlib import Path; from axis.files.write import replace_file\n"
        "n = 0\n"
        "while True:\n"
        "    n += 1; replace_file(Path(sys.argv[1]), (b'%d' % (n % 10)) * 200_000)\n"
    )
    for stop in (signal.SIGINT, signal.SIGKILL):
        writer = subprocess.Popen([sys.executable, "-c", code, str(path)], stderr=subprocess.DEVNULL)
        deadline = time.monotonic() + 30.0
        while not path.exists() and time.monotonic() < deadline:
            time.sleep(0.01)
        time.sleep(0.05)
        writer.send_signal(stop)
        writer.wait(30)
        data = path.read_bytes()
        assert (len(data), len(set(data))) == (200_000, 1)
        path.unlink()


# ---- one value typed anew --------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("path", "typed", "line"),
    [
        ("load.mass", "84 lb", 'mass = "84 lb"                         # everything that moves on the empty axis'),
        ("load.friction.viscous", "0 N*s/m", 'viscous = "0 N*s/m"'),
        ("move[2].speed", "20 in/s", 'speed = "20 in/s"'),
        ("motor.pole_pairs", "5", "pole_pairs = 5"),
        ("tolerance.friction", "0.3", "friction = 0.3"),
        ("axis.indexes", "true", "indexes = true"),
        ("axis.name", 'X "slow"', r'name = "X \"slow\""'),
        ("transmission[1].kind", "ball_screw", 'kind = "ball_screw"'),
        ("tuning.may_change", '["jerk"]', 'may_change = ["jerk"]'),
    ],
)
def test_with_value_changes_one_line(path: str, typed: str, line: str) -> None:
    before = read_text(template())
    after = before.with_value(path, typed)
    assert line in after.text
    assert after.digest == before.digest
    rest = set(after.text.splitlines()) - set(before.text.splitlines())
    assert len(rest) <= 2  # a new table brings its header
    if path != "tuning.may_change":
        assert after.typed[path] == typed


def test_with_value_takes_keys_out_and_tells_what_is_wrong() -> None:
    document = read_text(template())
    assert document.with_value("motor.encoder_counts", "").axis.motor.encoder_counts is None
    for path, typed, message in (
        ("load.mass", "1,5 kg", 'load.mass: "1,5 kg" has a decimal comma; write a point, for example "1.5 kg"'),
        ("motor.pole_pairs", "four", 'motor.pole_pairs: "four" stands where a whole number without quotes is wanted'),
        ("move[3].speed", "1 m/s", "move[3].speed: is no place in this file"),
        ("load.colour", "red", "load.colour: is no key of an axis file"),
        ("load", "red", "load: is a table, not a value"),
        ("../x", "red", '"../x" is no path of an axis file, for example move[1].distance'),
    ):
        with pytest.raises(InputError, match=re.escape(message)):
            document.with_value(path, typed)


def test_save_writes_what_was_typed(tmp_path: Path) -> None:
    path = tmp_path / "axis.toml"
    path.write_text("\ufeff" + template().replace("\n", "\r\n"), encoding="utf-8", newline="")
    document = read(path).with_value("load.mass", "40 kg")
    save(path, document)
    assert read(path).axis.load.mass == 40.0
