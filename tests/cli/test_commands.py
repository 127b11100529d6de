"""Every command: what it prints, what it writes, with which code it ends."""

import json
import math
import shutil
import socket
from dataclasses import fields

import pytest

import axis.study
from axis.cli import run
from axis.files.catalogue import shipped_folder
from tests.cli.command import DEMO, RAM, changed, settlepoint

TEXT = RAM.read_text(encoding="utf-8")
SIGNAL_TOO_EARLY = ('time = "0.012 s"', 'time = "0.025 s"')  # with it both moves of the ram pass
NO_TOLERANCE = ("load_mass = 0.05\nfriction = 0.3\n", "")
ALL = {"format", "version", "axis", "inputs", "seed", "assumptions", "verdict", "checks", "cautions"}
CHECK = {"id", "name", "demand", "limit", "unit", "margin", "verdict", "source", "remedy"}


@pytest.fixture
def ram(tmp_path):
    """A file of the ram with some passages replaced."""

    def write(*changes):
        path = tmp_path / "axis.toml"
        path.write_text(changed(TEXT, *changes), encoding="utf-8")
        return path

    return write


def result(capsys, code, *arguments):
    """The one JSON object on standard output of a command that ends with `code`; nothing on standard error."""
    assert run([*map(str, arguments), "--json"]) == code
    out, err = capsys.readouterr()
    assert err == ""
    found = json.loads(out, parse_constant=lambda name: pytest.fail(f"{name} in JSON"))
    assert found.keys() >= ALL
    assert found["format"] == 1
    assert found["verdict"] in ("pass", "fail", "not evaluated")
    assert (found["verdict"] == "pass") == (code == 0)
    for one in found["checks"]:
        assert one.keys() >= CHECK
        assert one["verdict"] in ("pass", "fail", "not evaluated", "not applicable")
        assert one["verdict"] != "fail" or one["remedy"], f"{one['id']} fails without a remedy"
        assert one["verdict"] == "pass" or one["reason"], f"{one['id']} gives no reason"
    assert len({one["id"] for one in found["checks"]}) == len(found["checks"])
    assert all(one.keys() >= {"text", "governs"} for one in found["cautions"])
    return found


def test_size(capsys):
    found = result(capsys, 0, "size", DEMO)
    assert found["inputs"].keys() == {"axis_file", "motors.csv", "drives.csv"}
    assert found["seed"] is None
    assert {
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
        "winding_temperature_degC",
    } <= found["demand"].keys()
    # 0.8 m/s on a lead of 20 mm
    assert found["demand"]["peak_speed_rad_per_s"] == pytest.approx(2.0 * math.pi * 0.8 / 0.02, rel=1e-9)


def test_what_is_missing_is_not_a_pass(capsys):
    found = result(capsys, 1, "size", RAM)
    assert found["verdict"] == "not evaluated"
    (heat,) = (one for one in found["checks"] if one["id"] == "motor_winding_temperature")
    assert heat["verdict"] == "not evaluated"
    assert "motor.winding_housing" in heat["reason"]


def test_check(capsys, ram):
    found = result(capsys, 0, "check", ram(SIGNAL_TOO_EARLY))
    assert found["corners"] == 11  # nominal, five load masses times two frictions
    assert found["loops"]["velocity"]["ti_s"] == 0.025
    assert [move["number"] for move in found["moves"]] == [1, 2]
    figures = {
        "time_to_window_s",
        "in_position_signal_s",
        "overshoot_m",
        "peak_following_error_m",
        "peak_torque_Nm",
        "peak_current_Arms",
        "current_saturated_s",
        "voltage_saturated_s",
    }
    for move in found["moves"]:
        assert figures <= move["nominal"].keys()
        assert figures | {"corner"} <= move["worst"].keys()
        assert move["commanded_end_s"] > 0.0
        assert move["worst"]["corner"].keys() <= {"load_mass", "friction"}


def test_check_that_fails(capsys):
    found = result(capsys, 1, "check", RAM)
    failing = [one["id"] for one in found["checks"] if one["verdict"] == "fail"]
    assert failing == ["signal[1]"]


def test_never_is_null_and_not_a_number(capsys, ram):
    found = result(capsys, 1, "check", ram(NO_TOLERANCE, ('position = "25.4e-6 m"', 'position = "1e-9 m"')))
    assert found["moves"][0]["nominal"]["time_to_window_s"] is None
    assert found["moves"][0]["nominal"]["in_position_signal_s"] is None


def test_check_without_settings_says_what_to_do(capsys):
    found = result(capsys, 1, "check", DEMO)
    assert found["verdict"] == "not evaluated"
    assert "settlepoint tune --write" in found["unevaluated"]
    assert run(["check", str(DEMO)]) == 1
    out, err = capsys.readouterr()
    assert (out.count("\n"), err) == (1, "")
    assert "not evaluated: the file has no [loops]. Next: settlepoint tune --write" in out


def test_tune_then_check(capsys, ram):
    """`tune --write` and `check` on the same file speak of the same settings, to the last digit."""
    path = ram(NO_TOLERANCE)
    before = path.read_text(encoding="utf-8")
    tuned = result(capsys, 0, "tune", path, "--runs", "100")
    assert path.read_text(encoding="utf-8") == before  # nothing is written unless it is asked
    assert tuned["seed"] == 1
    assert tuned["loops"].keys() >= {"current", "velocity", "position", "feedforward", "filters", "move_jerk"}
    for key in ("gain_margin_up_dB", "gain_margin_down_dB", "phase_margin_deg", "peak_sensitivity", "worst_corner"):
        assert key in tuned["margins"]
    assert tuned.keys() >= {"textbook", "bound", "machine_bound", "path"}
    assert run(["tune", str(path), "--runs", "100", "--json", "--write"]) == 0
    out, err = capsys.readouterr()
    assert json.loads(out)["loops"] == tuned["loops"]
    assert err == f"wrote [loops] into {path}\n"
    assert path.read_text(encoding="utf-8").startswith(before.partition("[loops]")[0])
    checked = result(capsys, 0, "check", path)
    assert checked["loops"] == tuned["loops"]
    assert checked["checks"] == tuned["checks"]
    assert sum(move["worst"]["time_to_window_s"] for move in checked["moves"]) == tuned["time_to_window_s"]


def test_new(capsys, tmp_path):
    path = tmp_path / "mine.toml"
    assert run(["new", str(path)]) == 0
    assert capsys.readouterr().out == f"wrote {path}; next: settlepoint size {path}\n"
    found = result(capsys, 1, "size", path)
    assert not [one for one in found["checks"] if one["verdict"] == "fail"]
    path.write_text("mine", encoding="utf-8")
    assert run(["new", str(path)]) == 3
    out, err = capsys.readouterr()
    assert (out, path.read_text(encoding="utf-8")) == ("", "mine")
    assert "exists and is left as it is" in err


def test_sheet(capsys, ram, tmp_path):
    path = ram(NO_TOLERANCE)
    for ending, begins in ((".pdf", b"%PDF-"), (".json", b"{")):
        sheet = tmp_path / f"sheet{ending}"
        assert run(["sheet", str(path), "-o", str(sheet)]) == 1
        assert capsys.readouterr().out == f"wrote {sheet}; verdict: fail\n"
        assert sheet.read_bytes().startswith(begins)
    found = json.loads((tmp_path / "sheet.json").read_text(encoding="utf-8"))
    assert found.keys() >= ALL | {"demand", "loops", "moves", "corners"}


def test_sheet_does_not_take_the_place_of_its_axis_file(capsys, tmp_path):
    path = tmp_path / "axis.json"
    path.write_text(TEXT, encoding="utf-8")
    assert run(["sheet", str(path), "-o", str(path)]) == 2
    assert "is the axis file itself" in capsys.readouterr().err
    assert path.read_text(encoding="utf-8") == TEXT


@pytest.fixture
def small_demo(tmp_path, monkeypatch):
    """The demo with an axis that is tuned in a moment, so that the command and not the search is tested."""
    shipped = tmp_path / "shipped"
    shutil.copytree(shipped_folder(), shipped)
    loops = TEXT[TEXT.index("[loops]") :]
    jerk = 'jerk = "203.2 m/s^3"\n'
    (shipped / DEMO.name).write_text(changed(TEXT, NO_TOLERANCE, (loops, ""), (jerk, "")), encoding="utf-8")
    monkeypatch.setattr("axis.files.catalogue.shipped_folder", lambda: shipped)
    return shipped / DEMO.name


def test_demo_writes_its_files_and_replaces_only_them(capsys, small_demo, tmp_path):
    folder = tmp_path / "here" / "settlepoint-demo"
    arguments = ["demo", str(folder), "--runs", "100"]
    assert run(arguments) == 1  # thermal data are missing: sized, tuned, and not evaluated as a whole
    out, err = capsys.readouterr()
    assert err == ""
    assert [line.removeprefix("wrote ") for line in out.splitlines()[-3:]] == [
        str(folder / name) for name in ("carriage.toml", "settings-sheet.pdf", "settings-sheet.json")
    ]
    first = {path.name: path.read_bytes() for path in folder.iterdir()}
    assert sorted(first) == ["carriage.toml", "settings-sheet.json", "settings-sheet.pdf"]
    assert b"[loops]" in first["carriage.toml"]
    sized = result(capsys, 1, "size", folder / "carriage.toml")
    assert json.loads(first["settings-sheet.json"])["demand"] == sized["demand"]  # with the jerk that was chosen
    (folder / "notes.txt").write_text("mine", encoding="utf-8")
    (folder / "carriage.toml").write_text("spoilt", encoding="utf-8")
    assert run(arguments) == 1
    capsys.readouterr()
    again = {path.name: path.read_bytes() for path in folder.iterdir()}
    assert again == first | {"notes.txt": b"mine"}


def test_what_cannot_be_written_is_a_sentence_and_code_3(capsys, ram, tmp_path):
    path = ram(NO_TOLERANCE)
    file = tmp_path / "file"
    file.write_text("mine", encoding="utf-8")
    folder = tmp_path / "folder.pdf"
    folder.mkdir()
    protected = tmp_path / "protected.toml"
    protected.write_text(path.read_text(encoding="utf-8"), encoding="utf-8")
    protected.chmod(0o444)
    for arguments in (
        ["tune", str(protected), "--write"],
        ["new", str(tmp_path / "absent" / "new.toml")],
        ["sheet", str(path), "-o", str(tmp_path / "absent" / "sheet.pdf")],
        ["sheet", str(path), "-o", str(folder)],
        ["sheet", str(path), "-o", str(file / "sheet.pdf")],
        ["demo", str(file)],
        ["demo", str(file / "demo")],
    ):
        assert run(arguments) == 3, arguments
        out, err = capsys.readouterr()
        assert (out, err.count("\n")) == ("", 1)
        assert "cannot" in err or "is a folder" in err
        assert "internal" not in err
    assert file.read_text(encoding="utf-8") == "mine"
    assert sorted(one.name for one in tmp_path.iterdir()) == ["axis.toml", "file", "folder.pdf", "protected.toml"]
    assert protected.read_bytes() == path.read_bytes()


def test_a_file_edited_meanwhile_is_not_overwritten(capsys, ram, monkeypatch):
    path = ram(NO_TOLERANCE)
    computed = axis.study.tune

    def edited_meanwhile(*arguments):
        found = computed(*arguments)
        path.write_text("edited meanwhile", encoding="utf-8")
        return found

    monkeypatch.setattr("axis.study.tune", edited_meanwhile)
    assert run(["tune", str(path), "--runs", "100", "--write"]) == 3
    out, err = capsys.readouterr()
    assert "Proportional gain of the velocity loop" in out  # the settings are not lost
    assert "has changed since it was read; nothing was written" in err
    assert path.read_text(encoding="utf-8") == "edited meanwhile"


def test_an_error_of_the_tool_itself_is_a_sentence(capsys, monkeypatch):
    def broken(*arguments):
        raise ZeroDivisionError("float division by zero")

    monkeypatch.setattr("axis.study.load", broken)
    assert run(["size", str(DEMO), "--json"]) == 3
    out, err = capsys.readouterr()
    assert (out, err.count("\n")) == ("", 1)
    assert err.startswith("internal error, please report it with the axis file: ZeroDivisionError")


def test_output_for_few_characters(capsys):
    """A console or pipe that knows no ● still gets the figures, and JSON stays exact."""
    told = settlepoint("size", DEMO, PYTHONIOENCODING="cp1252")
    assert (told.returncode, told.stderr) == (0, "")
    assert "Motor speed: 2400 rpm of 5000 rpm" in told.stdout
    found = settlepoint("size", DEMO, "--json", PYTHONIOENCODING="ascii")
    assert run(["size", str(DEMO), "--json"]) == 0
    assert json.loads(found.stdout)["assumptions"] == json.loads(capsys.readouterr().out)["assumptions"]


def test_every_reason_of_the_screen_text_is_in_json_too(capsys, ram):
    """Text and JSON come from one study: same verdicts, same order of magnitude of words."""
    path = ram(NO_TOLERANCE)
    found = result(capsys, 1, "check", path)
    assert run(["check", str(path)]) == 1
    text = capsys.readouterr().out
    for one in found["checks"]:
        if one["verdict"] == "fail":
            assert one["reason"] in text
            assert f"remedy: {one['remedy']}" in text


def test_study_carries_every_part_it_prints():
    """A part added to the study must be thought of in the exit code as well."""
    parts = {field.name for field in fields(axis.study.Study)}
    assert parts == {"document", "axis", "sizing", "tuned", "settled", "unevaluated"}


def test_margins_that_nothing_can_hold(capsys, ram):
    """Not an error of the input: told as not evaluated, in JSON too, and nothing is written."""
    wish = ("[loops]", '[tuning]\ngain_margin_up = "60 dB"\ngain_margin_down = "60 dB"\n\n[loops]')
    path = ram(NO_TOLERANCE, wish)
    before = path.read_text(encoding="utf-8")
    found = result(capsys, 1, "tune", path, "--runs", "100", "--write")
    assert found["verdict"] == "not evaluated"
    assert found["unevaluated"].startswith("No settings are found: wish for smaller margins in [tuning]")
    assert not {"margins", "loops"} & found.keys()  # the file's own settings are no result of this search
    assert run(["tune", str(path), "--runs", "100"]) == 1
    assert "No settings are found" in capsys.readouterr().out
    assert path.read_text(encoding="utf-8") == before


def test_app_on_a_port_that_is_taken(capsys):
    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        port = taken.getsockname()[1]
        assert run(["app", "--no-browser", "--port", str(port)]) == 3
    out, err = capsys.readouterr()
    assert (out, err) == ("", f"port {port} is in use; name another with --port\n")
