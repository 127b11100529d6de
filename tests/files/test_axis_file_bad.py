"""What bad input gets: each error with path, value, rule and example, all of a file's at once, never a traceback."""

from __future__ import annotations

import os
import signal
from collections.abc import Iterator
from pathlib import Path

import pytest

from axis.errors import InputError
from axis.files.axis_file import read, read_text
from axis.files.template import template

TEMPLATE = template()
WATCHDOG = 30  # [s]; the answer itself takes a fraction of a second


@pytest.fixture(autouse=True)
def _watchdog() -> Iterator[None]:
    def ring(*_: object) -> None:
        raise TimeoutError("no answer")

    before = signal.signal(signal.SIGALRM, ring)
    signal.alarm(WATCHDOG)
    yield
    signal.alarm(0)
    signal.signal(signal.SIGALRM, before)


def _changed(*changes: tuple[str, str]) -> str:
    text = TEMPLATE
    for old, new in changes:
        assert text.count(old) >= 1, old
        text = text.replace(old, new, 1)
    return text


def _told(text: str) -> list[str]:
    with pytest.raises(InputError) as raised:
        read_text(text)
    return [str(problem) for problem in raised.value.problems]


ONE = [
    (
        'mass = "38 kg"',
        'mass = "38 m"',
        'load.mass: "38 m" has the dimension length; wanted mass, for example "38 kg"',
    ),
    (
        'mass = "38 kg"',
        'mass = "1,5 kg"',
        'load.mass: "1,5 kg" has a decimal comma; write a point, for example "1.5 kg"',
    ),
    (
        'mass = "38 kg"',
        'mass = "nan kg"',
        'load.mass: "nan kg" does not start with a plain number, for example "38 kg"',
    ),
    (
        'mass = "38 kg"',
        'mass = "inf kg"',
        'load.mass: "inf kg" does not start with a plain number, for example "38 kg"',
    ),
    (
        'mass = "38 kg"',
        'mass = "1e999 kg"',
        'load.mass: "1e999 kg" is not a finite number, for example "38 kg"',
    ),
    ('mass = "38 kg"', 'mass = "-38 kg"', 'load.mass: "-38 kg" must be above 0 kg, for example "38 kg"'),
    (
        'mass = "38 kg"',
        'mass = "10**10**10 kg"',
        'load.mass: "10**10**10 kg" is not one plain number and a unit; nothing is calculated here, '
        'for example "38 kg"',
    ),
    (
        'mass = "38 kg"',
        "mass = 38",
        'load.mass: 38 stands where a text with a unit is wanted, for example "38 kg"',
    ),
    (
        'mass = "38 kg"',
        "mass = { value = 38 }",
        'load.mass: a table stands where a text with a unit is wanted, for example "38 kg"',
    ),
    ('mass = "38 kg"', "", 'load.mass: is missing, for example mass = "38 kg"'),
    (
        'mass = "38 kg"',
        'mass = "38 kg"\ninertia = "1 kg*m^2"',
        'load.inertia: "1 kg*m^2" belongs to an axis of the other travel; this one is linear and takes mass, '
        'for example mass = "38 kg"',
    ),
    (
        'lead = "20 mm"',
        'lead = "0 mm"',
        'transmission[1].lead: "0 mm" must be above 0 mm, for example "20 mm"',
    ),
    (
        'lead = "20 mm"',
        'laed = "20 mm"',
        'transmission[1].laed: "20 mm" stands under an unknown key; did you mean "lead"? For example lead = "20 mm"',
    ),
    (
        'kind = "ball_screw"',
        'kind = "ballscrew"',
        'transmission[1].kind: "ballscrew" is not one of gearbox, ball_screw; did you mean "ball_screw"? '
        'For example kind = "ball_screw"',
    ),
    (
        'kind = "ball_screw"\nlead = "20 mm"\ndiameter = "25 mm"\nlength = "1.1 m"\nefficiency = 0.92\n'
        'efficiency_back = 0.90\nstiffness = "60 N/um" ',
        'kind = "gearbox"\nratio = 3 ',
        "transmission: has no stage that turns rotation into travel, and the axis is linear, for example "
        'a last stage with kind = "ball_screw"',
    ),
    (
        "efficiency = 0.92",
        'efficiency = "92 %"',
        'transmission[1].efficiency: "92 %" stands where a plain number without quotes or unit is wanted, '
        "for example 0.92",
    ),
    (
        "efficiency = 0.92",
        "efficiency = 92",
        "transmission[1].efficiency: 92 must be at most 1, for example 0.92",
    ),
    (
        "efficiency = 0.92",
        "efficiency = nan",
        "transmission[1].efficiency: nan is not a finite number of sensible size, for example 0.92",
    ),
    (
        "pole_pairs = 4",
        "pole_pairs = 4.5",
        "motor.pole_pairs: 4.5 stands where a whole number without quotes is wanted, for example 4",
    ),
    (
        "pole_pairs = 4",
        "pole_pairs = true",
        "motor.pole_pairs: true stands where a whole number without quotes is wanted, for example 4",
    ),
    (
        'torque_constant_basis = "rms" ',
        'torque_constant_basis = "rsm" ',
        'motor.torque_constant_basis: "rsm" is not one of rms, peak; did you mean "rms"? For example "rms"',
    ),
    (
        'torque_constant_basis = "rms" ',
        "",
        "motor.torque_constant_basis: is missing: torque_constant means nothing without it, and it is not guessed, "
        'for example torque_constant_basis = "rms"',
    ),
    (
        'winding_basis = "line-line"',
        "",
        "motor.winding_basis: is missing: resistance and inductance mean nothing without it, and it is not guessed, "
        'for example winding_basis = "line-line"',
    ),
    (
        'rated_torque = "2.4 N*m"',
        'rated_torque = "24 N*m"',
        'motor.rated_torque: "24 N*m" is above peak_torque, 8.4 N·m, for example rated_torque = "8.4 N·m" or less',
    ),
    (
        'velocity_period = "125 us"',
        'velocity_period = "120 us"',
        'drive.velocity_period: "120 us" is no whole multiple of current_period, 62.5 µs, '
        'for example velocity_period = "125 µs"',
    ),
    (
        "supply_phases = 3",
        'supply_phases = 3\ncomputation_delay = "70 us"',
        'drive.computation_delay: "70 us" is longer than one current period, 62.5 µs, '
        'for example computation_delay = "62.5 µs" or less',
    ),
    (
        "supply_phases = 3",
        'dc_link_nominal = "560 V"\ndc_link_max = "500 V"',
        'drive.dc_link_nominal: "560 V" is above dc_link_max, 500 V, for example dc_link_nominal = "500 V" or less',
    ),
    (
        'breakaway = "31 N"',
        'breakaway = "20 N"',
        'load.friction.breakaway: "20 N" must be at least the Coulomb friction, 22 N, for example '
        'breakaway = "22 N" or more',
    ),
    (
        'distance = "-300 mm"',
        'distance = "-200 mm"',
        "move: the cycle of 2 moves does not close: after move[2] the axis stands 100 mm from its start, "
        'for example one more move with distance = "-100 mm", or [axis] indexes = true',
    ),
    (
        'distance = "-300 mm"',
        'distance = "-300 mm"\nto = "0 mm"',
        'move[2].to: "0 mm" stands beside distance; a move has one of the two',
    ),
    (
        'distance = "-300 mm"',
        "",
        'move[2].distance: is missing, and so is to, for example distance = "300 mm", or to = "300 mm"',
    ),
    (
        'distance = "-300 mm"\nspeed = "0.6 m/s"',
        'distance = "-300 mm"',
        'move[2].speed: is missing, for example speed = "0.6 m/s", or a duration in place of the limits',
    ),
    (
        'distance = "-300 mm"',
        'distance = "-300 mm"\nduration = "0.4 s"',
        'move[2].duration: "0.4 s" stands beside speed; a move has its limits or its duration',
    ),
    (
        'payload = "full tray"',
        'payload = "full try"',
        'move[1].payload: "full try" names no payload of this file; did you mean "full tray"? For example '
        'payload = "full tray", and a [[payload]] of that name',
    ),
    (
        "[tolerance] ",
        "[tolerances] ",
        'tolerances: a table stands under an unknown key; did you mean "tolerance"? For example a table [tolerance]',
    ),
    (
        "[tolerance] ",
        "[[tolerance]] ",
        "tolerance: a list stands where a table is wanted, for example [tolerance]",
    ),
    ("load_mass = 0.05", "load_mass = 1.5", "tolerance.load_mass: 1.5 must be below 1"),
    ("format = 1", "format = 2", "format: 2 is not a format this version reads, for example format = 1"),
    ("format = 1", "", "format: is missing, for example format = 1"),
    (
        'mass = "38 kg"',
        "mass = 38 kg",
        'axis file line 15: "mass = 38 kg                         # everything that moves on the empty axis" is not '
        'TOML: Expected newline or end of document after a statement, for example mass = "38 kg", a quantity in quotes',
    ),
]


@pytest.mark.parametrize(("old", "new", "message"), ONE)
def test_one_error_is_told_whole(old: str, new: str, message: str) -> None:
    assert _told(_changed((old, new))) == [message]


def test_all_errors_of_a_file_at_once_in_its_order() -> None:
    told = _told(
        _changed(
            ('mass = "38 kg"', 'mass = "38 m"'),
            ('name = "full tray"\nmass', 'name = "full tray"\nmas'),
            ('lead = "20 mm"', 'lead = "-20 mm"'),
            ('torque_constant = "0.72 N*m/A"', 'torque_constnat = "0.72 N*m/A"'),
            ('velocity_period = "125 us"', 'velocity_period = "120 us"'),
            ('position = "25 um" ', ""),
            ('distance = "-300 mm"', 'distance = "-250 mm"'),
            ('acceleration = "6 m/s^2"               #', 'acceleration = "6 m/s" #'),
        )
    )
    assert [line.partition(": ")[0] for line in told] == [
        "load.mass",
        "payload[1].mas",
        "transmission[1].lead",
        "motor.torque_constnat",
        "drive.velocity_period",
        "window.position",
        "move",
        "move[1].acceleration",
    ]


def test_notch_and_jerk_list_of_the_loops() -> None:
    loops = """
[loops]
current = { kp = "22 V/A", ti = "4.7 ms" }
velocity = { kp = "1.9 N*m*s/rad", ti = "6 ms" }
position = { kv = "85 1/s" }
filters = [{ kind = "notch", frequency = "210 Hz" }, { kind = "lowpass", frequency = "900 Hz", depth = 0.5 }]
move_jerk = ["300 m/s^3", "nan m/s^3", "300 m/s^3"]
"""
    assert _told(TEMPLATE + loops) == [
        'loops.filters[1].width: is missing: a notch needs it, for example width = "60 Hz"',
        "loops.filters[1].depth: is missing: a notch needs it, for example depth = 0.1",
        "loops.filters[2].depth: 0.5 belongs to a notch, and this is a low-pass, for example left out",
        "loops.move_jerk: a list of 3 must hold one jerk for each of the 2 moves, "
        "for example one entry per [[move]], in order",
        'loops.move_jerk[2]: "nan m/s^3" does not start with a plain number, for example "300 m/s^3"',
    ]


def test_rotary_axis_takes_inertia_and_no_screw() -> None:
    told = _told(_changed(('travel = "linear" ', 'travel = "rotary" ')))
    assert told[0] == (
        'load.mass: "38 kg" belongs to an axis of the other travel; this one is rotary and takes inertia, '
        'for example inertia = "0.12 kg*m^2"'
    )
    assert 'load.friction.coulomb: "22 N" has the dimension mass·length/time²; wanted mass·length²/time², ' in told[1]
    assert any(line.startswith('transmission[1].kind: "ball_screw" gives linear travel') for line in told)


def test_gearbox_after_the_screw() -> None:
    told = _told(_changed(("[motor]", '[[transmission]]\nkind = "gearbox"\nratio = 0\n\n[motor]')))
    assert told == [
        'transmission[1].kind: "ball_screw" must be the last stage: what follows it would have to turn',
        "transmission[2].ratio: 0 must not be zero, for example ratio = 3",
    ]


# ---- files that hurt -------------------------------------------------------------------------------------------------


def _file(folder: Path, data: bytes) -> str:
    path = folder / "axis.toml"
    path.write_bytes(data)
    with pytest.raises(InputError) as raised:
        read(path)
    return str(raised.value).replace(str(folder), "FOLDER")


def test_fifty_megabytes_of_zeros(tmp_path: Path) -> None:
    path = tmp_path / "axis.toml"
    with path.open("wb") as file:
        file.truncate(50_000_000)
    with pytest.raises(InputError, match=r"axis\.toml: is larger than 256 kB; not an axis file"):
        read(path)


def test_zeros_that_fit(tmp_path: Path) -> None:
    assert "is longer than 1000 characters" in _file(tmp_path, bytes(200_000))


def test_not_utf8(tmp_path: Path) -> None:
    message = "axis.toml: byte 12 is 0xe9 is not UTF-8 text, for example a file saved as UTF-8"
    assert _file(tmp_path, b'[axis]\nname\xe9 = "x"') == message


def test_dotted_key_20000_long(tmp_path: Path) -> None:
    message = "axis.toml: line 1 is longer than 1000 characters, for example one key to a line"
    assert _file(tmp_path, b".".join([b"a"] * 20_000) + b" = 1") == message


def test_dotted_key_on_many_lines(tmp_path: Path) -> None:
    line = b".".join([b"a"] * 400) + b" = 1\n"
    assert "axis.toml line 1: has a key of more than 8 parts" in _file(tmp_path, line * 300)


def test_brackets_without_end(tmp_path: Path) -> None:
    assert "is not TOML" in _file(tmp_path, b"a = " + b"[\n" * 100_000)


def test_integer_without_end(tmp_path: Path) -> None:
    assert "is not TOML" in _file(tmp_path, b"a = " + b"9" * 990 + b"\n" + b"b = 0x" + b"f" * 990 + b"z")
    assert "a: 99999" in _file(tmp_path, b"a = " + b"9" * 990)


def test_folder_and_absent_file(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="is a folder, not an axis file"):
        read(tmp_path)
    with pytest.raises(InputError, match="is not there"):
        read(tmp_path / "none.toml")
    with pytest.raises(InputError, match="cannot be read"):
        read("a\0b")


@pytest.mark.skipif(not hasattr(os, "mkfifo"), reason="no pipes here")
def test_pipe_does_not_hang(tmp_path: Path) -> None:
    os.mkfifo(tmp_path / "axis.toml")
    with pytest.raises(InputError, match="is no regular file, so not an axis file"):
        read(tmp_path / "axis.toml")


def test_empty_file_names_every_table() -> None:
    told = _told("")
    assert [line.partition(":")[0] for line in told] == ["format", "axis", "load", "motor", "drive", "window", "move"]


def test_strange_values_never_raise_anything_else() -> None:
    strange = ["1979-05-27", "[]", "{}", "''", "inf", "-0", "[[]]", "{a = 1}", '"\\u0000"', "true", "1e308", "[1, 'a']"]
    told: list[str] = []
    lines = [line for line in TEMPLATE.splitlines() if " = " in line and not line.startswith("#")]
    for n, line in enumerate(lines):
        for value in strange[n % 3 :: 3]:
            text = TEMPLATE.replace(line, f"{line.partition(' = ')[0]} = {value}", 1)
            try:
                read_text(text)
            except InputError as error:
                told += [str(problem) for problem in error.problems]
    assert len(told) > 100
    assert max(len(message) for message in told) < 500
