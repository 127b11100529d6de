"""Bad input through the command: exit 2, a sentence with path, value, rule and example, nothing written."""

import shutil

import pytest

from axis.cli import run
from tests.cli.command import DEMO, RAM, changed, settlepoint

TEXT = RAM.read_text(encoding="utf-8")
MASS = 'mass = "27.2155422 kg"'

# What is changed, and the parts of the one line that must be told: path, value, rule, example.
WRONG = {
    "dimension": ((MASS, 'mass = "27 m"'), ["load.mass", '"27 m"', "wanted mass", '"38 kg"']),
    "unknown key": (
        (MASS, f'{MASS}\nfricton = "1 N"'),
        ["load.fricton", '"1 N"', 'did you mean "friction"', "friction"],
    ),
    "decimal comma": ((MASS, 'mass = "1,5 kg"'), ["load.mass", '"1,5 kg"', "decimal comma", '"1.5 kg"']),
    "not a number": ((MASS, 'mass = "nan kg"'), ["load.mass", '"nan kg"', "plain number", '"38 kg"']),
    "infinite": ((MASS, 'mass = "1e999 kg"'), ["load.mass", '"1e999 kg"', "not a finite number", '"38 kg"']),
    "beyond reason": ((MASS, 'mass = "1e300 kg"'), ["load.mass", '"1e300 kg"', "larger than anything", '"38 kg"']),
    "negative": ((MASS, 'mass = "-27 kg"'), ["load.mass", '"-27 kg"', "must be above 0 kg", '"38 kg"']),
    "zero lead": (
        ('lead = "0.0254 m"', 'lead = "0 mm"'),
        ["transmission[2].lead", '"0 mm"', "must be above 0 mm", '"20 mm"'],
    ),
    "arithmetic": (
        (MASS, 'mass = "10**10**10 kg"'),
        ["load.mass", '"10**10**10 kg"', "nothing is calculated", '"38 kg"'],
    ),
    "open cycle": (
        ('distance = "-0.2032 m"', 'distance = "-0.1 m"'),
        ["move", "the cycle of 2 moves", "does not close", 'distance = "-103.2 mm"'],
    ),
    "constants": (
        ('torque_constant_basis = "rms"', 'torque_constant_basis = "peak"'),
        [
            "motor.torque_constant",
            '"0.7231',
            "contradicts the voltage constant, 43.5 V/krpm (line-line rms)",
            'torque_constant_basis = "rms" with voltage_constant_basis = "line-line rms"',
        ],
    ),
    "too many filters": (
        ("filters = [", "filters = [" + '{ kind = "lowpass", frequency = "1 kHz" }, ' * 4),
        ["loops.filters", "5 filters", "more than", "for example"],
    ),
    "notch too high": (
        ('kind = "lowpass", frequency = "5000', 'kind = "notch", depth = 0.1, width = "60 Hz", frequency = "50000'),
        ["loops.filters[1].frequency", "half the sampling rate of the velocity loop, 4000 Hz", '"210 Hz"'],
    ),
    "endless move": (
        ('speed = "0.635 m/s"', 'speed = "0.6 um/s"'),
        ["move[1]", "takes 3.39e+05 s", "at most 600 s", "for example"],
    ),
    "endless dwell": (('dwell = "0.25 s"', 'dwell = "1e7 s"'), ["move[1].dwell", '"1e7 s"', "at most", '"0.25 s"']),
    "catalogue": (('use = "DD-08"', 'use = "DD-O8"'), ["drive.use", '"DD-O8"', "did you mean", 'use = "DD-08"']),
}


def refused(capsys, path, *more):
    """Runs `size`; the lines that are told on standard error."""
    before = sorted(path.parent.iterdir()) if path.parent.is_dir() else []
    code = run(["size", str(path), *more])
    out, err = capsys.readouterr()
    assert (code, out) == (2, "")
    assert "Traceback" not in err
    assert sorted(path.parent.iterdir()) == before
    return err.splitlines()


@pytest.mark.parametrize("name", WRONG)
def test_one_wrong_value(tmp_path, capsys, name):
    change, parts = WRONG[name]
    path = tmp_path / "axis.toml"
    path.write_text(changed(TEXT, change), encoding="utf-8")
    lines = refused(capsys, path, "--json")
    told = [line for line in lines if line.startswith(f"{parts[0]}: ")]
    assert len(told) == 1, lines
    for part in parts:
        assert part in told[0]


def test_all_errors_of_a_file_at_once_in_the_order_of_the_file(tmp_path, capsys):
    path = tmp_path / "axis.toml"
    names = ["endless dwell", "constants", "zero lead", "dimension", "catalogue"]
    path.write_text(changed(TEXT, *(WRONG[name][0] for name in names)), encoding="utf-8")
    assert [line.partition(": ")[0] for line in refused(capsys, path)] == [
        "load.mass",
        "transmission[2].lead",
        "motor.torque_constant",
        "drive.use",
        "move[1].dwell",
    ]


@pytest.mark.parametrize(
    ("data", "words"),
    [
        (bytes(50_000_000), "is larger than 256 kB; not an axis file"),
        (b'name = "caf\xe9"', "byte 12 is 0xe9 is not UTF-8 text, for example a file saved as UTF-8"),
        (b".".join([b"a"] * 20_000) + b" = 1", "line 1 is longer than 1000 characters"),
        (b"format = 1\n[axis\n", "is not TOML"),
    ],
    ids=["zeros", "encoding", "dotted key", "brackets"],
)
def test_files_that_hurt(tmp_path, capsys, data, words):
    path = tmp_path / "axis.toml"
    path.write_bytes(data)
    (line,) = refused(capsys, path)
    assert words in line


def test_a_folder_and_nothing_at_all(tmp_path, capsys):
    (line,) = refused(capsys, tmp_path)
    assert line.endswith("is a folder, not an axis file")
    (line,) = refused(capsys, tmp_path / "absent.toml")
    assert line.endswith("is not there")


def test_catalogue_folder_that_is_none(tmp_path, capsys):
    path = shutil.copy(DEMO, tmp_path / "axis.toml")
    lines = refused(capsys, path, "--catalogue", str(tmp_path / "absent"))
    assert all("is no folder" in line for line in lines)


@pytest.mark.parametrize("command", [["tune", "--write"], ["check"], ["sheet", "-o", "sheet.pdf"]])
def test_every_command_that_reads_refuses_alike(tmp_path, command):
    path = tmp_path / "axis.toml"
    text = changed(TEXT, WRONG["negative"][0])
    path.write_text(text, encoding="utf-8")
    told = settlepoint(command[0], path, *command[1:], folder=tmp_path)
    assert (told.returncode, told.stdout) == (2, "")
    assert told.stderr == 'load.mass: "-27 kg" must be above 0 kg, for example "38 kg"\n'
    assert path.read_text(encoding="utf-8") == text
    assert list(tmp_path.iterdir()) == [path]


def test_names_that_would_hurt_elsewhere(tmp_path, capsys):
    """Markup of terminal, progress bar and sheet stays text; what cannot be printed is refused."""
    path = tmp_path / "axis.toml"
    name = r"[red]#eval(\"1\") $x^2$ </script> {0} %s ☃"
    path.write_text(changed(TEXT, ("Ram (invented)", name)), encoding="utf-8")
    assert run(["size", str(path)]) == 1
    assert capsys.readouterr().out.startswith(name.replace("\\", "") + ": not evaluated\n")
    for hidden in ("\\u001b[2J", "\\u202e", "\\u0000", "\\n"):
        path.write_text(changed(TEXT, ("Ram (invented)", f"a{hidden}b")), encoding="utf-8")
        (line,) = refused(capsys, path)
        assert "must be one line of 1 to 120 characters" in line
        assert line.isprintable()
