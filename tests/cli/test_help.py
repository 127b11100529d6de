"""Help: an example for every command, and nothing slow is imported for it."""

import subprocess
import sys

import pytest

from axis.cli import commands
from tests.cli.command import ENVIRONMENT, ROOT, settlepoint

SLOW = ("numpy", "scipy", "control", "pint", "streamlit", "plotly", "matplotlib", "numba", "typst", "tomlkit", "rich")
LOADED = """
import sys
from axis.cli import run
code = run({arguments!r})
print("loaded:", *sorted({{name.partition(".")[0] for name in sys.modules}}))
sys.exit(code)
"""


def loaded(*arguments: str) -> set[str]:
    """The packages that one command leaves in `sys.modules`."""
    script = LOADED.format(arguments=list(arguments))
    done = subprocess.run(
        [sys.executable, "-c", script], cwd=ROOT, env=ENVIRONMENT, capture_output=True, text=True, check=True
    )
    return set(done.stdout.rpartition("loaded: ")[2].split())


def test_help_and_version_import_nothing_slow():
    for arguments in (["--help"], ["--version"], ["tune", "--help"]):
        assert not loaded(*arguments) & set(SLOW), arguments


def test_the_look_at_imports_can_fail():
    assert {"numpy", "pint"} <= loaded("size", str(ROOT / "catalog_demo" / "carriage.toml"))


@pytest.mark.parametrize("name", sorted(commands.commands))
def test_every_command_has_help_with_an_example(name):
    shown = settlepoint(name, "--help")
    assert (shown.returncode, shown.stderr) == (0, "")
    assert f"Example: settlepoint {name}" in shown.stdout


def test_commands_are_those_of_this_version():
    """The issue that brings a command brings its name; nothing stands there empty."""
    assert sorted(commands.commands) == ["app", "check", "demo", "new", "sheet", "size", "tune"]


def test_unknown_command_names_the_nearest():
    told = settlepoint("chek", "x.toml")
    assert (told.returncode, told.stdout) == (2, "")
    assert "No such command 'chek'. Did you mean 'check'?" in told.stderr


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["size"], "Missing argument 'FILE'"),
        (["tune", "a.toml", "--runs", "5"], "5 is not in the range x>=100"),
        (["sheet", "a.toml"], "Missing option '-o'"),
        (["sheet", "a.toml", "-o", "a.docx"], "'a.docx' must end in .pdf or .json"),
        (["app", "--port", "80"], "80 is not in the range"),
    ],
)
def test_wrong_options_are_sentences(arguments, words):
    told = settlepoint(*arguments)
    assert (told.returncode, told.stdout) == (2, "")
    assert words in told.stderr
    assert "Traceback" not in told.stderr
