"""Catalogue tables: spreadsheet habits are read, hostile cells are told by line and column, nothing is guessed."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import pytest

from axis.description.transmission import Gearbox
from axis.errors import InputError
from axis.files.axis_file import read_text
from axis.files.catalogue import KINDS, find, parts, read_table, shipped_folder, tables
from axis.files.template import template

TEMPLATE = template()
HEAD = "name,ratio,inertia [kg*cm^2],efficiency,peak_torque [N*m],max_input_speed [rpm]\n"


def _gearboxes(folder: Path, data: str | bytes) -> tuple[dict[str, Gearbox], list[str]]:
    path = folder / "gearboxes.csv"
    path.write_bytes(data if isinstance(data, bytes) else data.encode())
    good, bad = parts(read_table(path, "gearbox"))
    return {part.name: part.stated for part in good}, [str(problem) for problem in bad]


def _with_motor(lines: str) -> str:
    """The template with its [motor] table replaced."""
    before, _, rest = TEMPLATE.partition("[motor]")
    return f"{before}[motor]\n{lines}\n\n[drive]{rest.partition('[drive]')[2]}"


def test_reads_a_plain_table(tmp_path: Path) -> None:
    good, bad = _gearboxes(tmp_path, "# invented\n\n" + HEAD + "G1,3,0.3,0.96,70,6000\n# note\nG2,-5,,,,\n")
    assert bad == []
    assert good["G1"].ratio == 3.0
    assert good["G1"].inertia == pytest.approx(0.3e-4, rel=1e-15)
    assert good["G1"].max_input_speed == pytest.approx(200 * math.pi, rel=1e-15)
    assert (good["G2"].ratio, good["G2"].inertia) == (-5.0, None)


def test_reads_what_a_spreadsheet_writes(tmp_path: Path) -> None:
    text = "\ufeff" + HEAD.replace(",", ";").strip() + ';;\r\nG1;3;"0,3";0,96;70;6000;;\r\n;;;;;;;\r\n'
    good, bad = _gearboxes(tmp_path, text)
    assert bad == []
    assert (good["G1"].efficiency, good["G1"].ratio) == (0.96, 3.0)
    assert good["G1"].inertia == pytest.approx(0.3e-4, rel=1e-15)


def test_units_of_the_header_are_converted(tmp_path: Path) -> None:
    good, _ = _gearboxes(tmp_path, "name,ratio,inertia [lb*in^2],peak_torque [lbf*in]\nG1,3,0.1,620\n")
    # 1 lb = 0.45359237 kg, 1 in = 25.4 mm, g = 9.80665 m/s² (international yard and pound agreement)
    assert good["G1"].inertia == pytest.approx(0.1 * 0.45359237 * 0.0254**2, rel=1e-12)
    assert good["G1"].peak_torque == pytest.approx(620 * 0.45359237 * 9.80665 * 0.0254, rel=1e-12)


def test_bad_rows_are_told_and_left_out(tmp_path: Path) -> None:
    rows = [
        "G1,3,0.3,0.96,70,6000",
        "G2,3,nan,0.96,70,6000",
        "G3,3,0.3,96,70,6000",
        "G4,3,-0.3,0.96,70 N*m,6000",
        "G5,3,0.3",
        "G6,,0.3,0.96,70,6000",
        ",3,0.3,0.96,70,6000",
        'G8,3,"0,3",0.96,70,6000',
        "G9,3,0.3,0.96,70,=6000*2",
        "G10,1e400,0.3,0.96,70,6000",
        "G11,3,0.3,0.96,70,6000",
    ]
    good, bad = _gearboxes(tmp_path, HEAD + "\n".join(rows))
    assert list(good) == ["G1", "G11"]
    assert bad == [
        'gearboxes.csv line 3, column inertia [kg*cm^2]: "nan" is not one plain number',
        "gearboxes.csv line 4, column efficiency: 96.0 must be at most 1, for example 0.96",
        'gearboxes.csv line 5, column peak_torque [N*m]: "70 N*m" is not one plain number',
        'gearboxes.csv line 5, column inertia [kg*cm^2]: "-0.3 kg*cm^2" must be at least 0 kg·cm², '
        'for example "0.3 kg*cm^2"',
        "gearboxes.csv line 6: has 3 cells where the header has 6",
        "gearboxes.csv line 7, column ratio: is missing, for example ratio = 3, or use = a row of a catalogue",
        "gearboxes.csv line 8, column name: is missing",
        'gearboxes.csv line 9, column inertia [kg*cm^2]: "0,3" is not one plain number',
        'gearboxes.csv line 10, column max_input_speed [rpm]: "=6000*2" is not one plain number',
        "gearboxes.csv line 11, column ratio: inf is not a finite number of sensible size, for example 3",
    ]


def test_points_and_commas_are_not_mixed(tmp_path: Path) -> None:
    good, bad = _gearboxes(tmp_path, HEAD.replace(",", ";") + "G1;3;0,3;0,96;70;6.000\nG2;3;0,3;0,96;70;6000\n")
    assert list(good) == ["G2"]
    assert bad == [
        'gearboxes.csv line 2, column max_input_speed [rpm]: "6.000" has a decimal point in a table of decimal commas'
    ]


@pytest.mark.parametrize(
    ("head", "message"),
    [
        ("name,ratio,inertia", '3: "inertia" has no unit in its header, for example "inertia [kg*cm^2]"'),
        (
            "name,ratio,inertia [kg]",
            '3: "inertia [kg]" has the dimension mass; wanted mass·length², for example "inertia [kg*cm^2]"',
        ),
        (
            "name,ratio,inertia [kgcm2]",
            '3: "inertia [kgcm2]" has the unknown unit "kgcm2", for example "inertia [kg*cm^2]"',
        ),
        ("name,ratio,intertia [kg*m^2]", '3: "intertia [kg*m^2]" is no known column; did you mean "inertia"? '),
        ("name,ratio [m],inertia [kg*m^2]", '2: "ratio [m]" takes no unit, for example ratio'),
        ("name,ratio,ratio", '3: "ratio" stands twice'),
    ],
)
def test_a_wrong_header_spoils_the_table(tmp_path: Path, head: str, message: str) -> None:
    good, bad = _gearboxes(tmp_path, f"{head}\nG1,3,0.1\n")
    assert not good
    assert any(line.startswith(f"gearboxes.csv line 1, column {message}") for line in bad), bad


def test_a_column_for_people_is_passed_over(tmp_path: Path) -> None:
    good, bad = _gearboxes(tmp_path, "name,# price,ratio\nG1,lots,3\n")
    assert (list(good), bad) == (["G1"], [])


def test_tables_that_hurt(tmp_path: Path) -> None:
    assert _gearboxes(tmp_path, "name,ratio\nG1,3\nG1,4\n") == (
        {},
        ['gearboxes.csv lines 2 and 3: "G1" have the same name'],
    )
    assert "has no column of names" in str(_gearboxes(tmp_path, "")[1])
    for data, message in (
        (b"name,ratio\nG\xe91,3\n", "is not UTF-8 text"),
        (b"name,ratio\n" + b"x" * 6000, "is longer than 5000 characters"),
        (b'name,ratio\nG1,"3\n', "is not CSV"),
        (b"name,ratio\n" + b"G,3\n" * 20_001, "has more than 20000 rows"),
        (b"\n" * 4_000_001, "is larger than 4000 kB"),
    ):
        with pytest.raises(InputError, match=message):
            _gearboxes(tmp_path, data)


# ---- `use` -----------------------------------------------------------------------------------------------------------


def test_use_takes_the_row_and_remembers_it() -> None:
    document = read_text(_with_motor('use = "DM-071-30"'))
    assert document.axis.motor.torque_constant == 0.72
    assert document.from_catalogue["motor.torque_constant"] == "motors.csv: DM-071-30"
    assert "motor.torque_constant" not in document.typed
    assert list(document.catalogue_digests) == ["motors.csv"]
    assert len(document.catalogue_digests["motors.csv"]) == 64


def test_keys_beside_use_override_the_row() -> None:
    document = read_text(_with_motor('use = "DM-071-30"\ninertia = "2 kg*cm^2"'))
    assert document.axis.motor.inertia == pytest.approx(2e-4, rel=1e-15)
    assert document.typed["motor.inertia"] == "2 kg*cm^2"
    assert "motor.inertia" not in document.from_catalogue
    assert document.axis.motor.pole_pairs == 4


def test_an_overriding_constant_brings_its_own_basis() -> None:
    with pytest.raises(InputError, match=r"motor\.torque_constant_basis: is missing: torque_constant means nothing"):
        read_text(_with_motor('use = "DM-071-30"\ntorque_constant = "0.7 N*m/A"'))
    document = read_text(_with_motor('use = "DM-071-30"\nresistance = "1.3 ohm"\nwinding_basis = "phase"'))
    assert document.axis.motor.inductance is None  # the row's stands in the other basis


def test_lookup_order(tmp_path: Path) -> None:
    beside, folder = tmp_path / "beside", tmp_path / "folder"
    for place, ratio in ((beside, 7), (folder, 8)):
        place.mkdir()
        (place / "gearboxes.csv").write_text(f"name,ratio\nDG-064-05,{ratio}\nown,{ratio}\n", encoding="utf-8")

    def ratio_of(first: Path | None, second: Path | None) -> float:
        _, part = find("gearbox", "DG-064-05", tables("gearbox", first, second))
        assert isinstance(part.stated, Gearbox)
        assert part.stated.ratio is not None
        return part.stated.ratio

    assert [ratio_of(beside, folder), ratio_of(None, folder), ratio_of(None, None)] == [7.0, 8.0, 5.0]


def test_unknown_name_and_unreadable_row(tmp_path: Path) -> None:
    with pytest.raises(InputError) as raised:
        read_text(_with_motor('use = "DM-071-3"'))
    assert str(raised.value) == (
        'motor.use: "DM-071-3" names no row of a motor catalogue; did you mean "DM-071-30"? '
        'For example use = "DM-071-30"'
    )
    (tmp_path / "motors.csv").write_text("name,pole_pairs\nown,x\n", encoding="utf-8")
    with pytest.raises(InputError, match=r'motors\.csv line 2, column pole_pairs: "x" is not one plain number'):
        read_text(_with_motor('use = "own"'), tmp_path)
    with pytest.raises(InputError, match="is no folder"):
        read_text(_with_motor('use = "own"'), None, tmp_path / "none")


# ---- the shipped tables ----------------------------------------------------------------------------------------------


@pytest.mark.parametrize(("kind", "least"), [("motor", 14), ("drive", 6), ("gearbox", 6)])
def test_shipped_tables_read_whole_and_say_what_they_are(kind: str, least: int) -> None:
    path = shipped_folder() / KINDS[kind].file
    good, bad = parts(read_table(path, kind))
    assert (bad, len(good) >= least) == ([], True)
    assert "invented" in path.read_text(encoding="utf-8").splitlines()[0]


def test_shipped_motors_agree_with_themselves() -> None:
    for part in parts(read_table(shipped_folder() / "motors.csv", "motor"))[0]:
        m: Any = part.stated
        # Sinusoidal motor, torque constant per rms ampere: K_T = √3 · (line-line rms voltage constant).
        assert m.torque_constant == pytest.approx(math.sqrt(3.0) * m.voltage_constant, rel=0.01), part.name
        assert m.stall_torque == pytest.approx(m.torque_constant * m.stall_current, rel=0.01), part.name
        assert m.rated_torque < m.stall_torque, part.name
        # A saturated peak: no more torque than the constant gives, not less than 80 % of it.
        assert 0.8 < m.peak_torque / (m.torque_constant * m.peak_current) <= 1.0, part.name
        # Stall losses in the hot copper (0.393 %/K) heat it from 40 °C to about its limit: 1.5·R_line-line·I².
        hot = 1.0 + 0.00393 * (m.max_winding_temperature - 293.15)
        rise = 1.5 * m.resistance * hot * m.stall_current**2 * (m.winding_housing + m.housing_ambient)
        assert 90.0 < rise <= 100.5, (part.name, rise)
        assert 80.0 < m.rated_torque * m.rated_speed < 5500.0, part.name


def test_shipped_drives_and_gearboxes_are_plausible() -> None:
    for part in parts(read_table(shipped_folder() / "drives.csv", "drive"))[0]:
        d: Any = part.stated
        # The rectified supply without load: √2 · line-line rms.
        assert d.dc_link_nominal == pytest.approx(math.sqrt(2.0) * d.supply_voltage, rel=0.02), part.name
        assert d.dc_link_nominal * 1.1 < d.chopper_on_voltage < d.dc_link_max, part.name
    for part in parts(read_table(shipped_folder() / "gearboxes.csv", "gearbox"))[0]:
        g: Any = part.stated
        assert g.efficiency_back < g.efficiency, part.name
        assert 1.5 < g.peak_torque / g.nominal_torque < 2.0, part.name
