"""Quantities as people type them: what is read, what is refused and in which words."""

from __future__ import annotations

import math
import random
import re
import subprocess
import sys

import pytest

from axis.errors import InputError
from axis.units import Quantity, convert, digits_of, exact, parse, pretty, show

MASS = Quantity("kg", "Moving mass", above=0, example='"38 kg"')
LENGTH = Quantity("m", "Distance", rotary="rad", shown="mm", shown_rotary="deg", example='"300 mm"')
SPEED = Quantity("rad/s", "Speed", shown="rpm", example='"3000 rpm"')
CORNER = Quantity("rad/s", "Corner frequency", shown="Hz", example='"210 Hz"')
GAIN = Quantity("1/s", "Position gain", example='"85 1/s"', alternatives=(("m/min/mm", 1000.0 / 60.0),))
TORQUE = Quantity("N*m", "Torque", example='"2.4 N*m"')
TORQUE_CONSTANT = Quantity("N*m/A", "Torque constant", example='"0.72 N*m/A"')
VOLTAGE_CONSTANT = Quantity("V*s/rad", "Voltage constant", shown="V/krpm", example='"43.5 V/krpm"')
STIFFNESS = Quantity("N*m/rad", "Stiffness", shown="N*m/arcmin", example='"9 N*m/arcmin"')
INERTIA = Quantity("kg*m^2", "Inertia", shown="kg*cm^2", example='"1.5 kg*cm^2"')
AMBIENT = Quantity("K", "Ambient temperature", shown="degC", example='"30 degC"')
RISE = Quantity("K", "Temperature rise", example='"20 K"')
THERMAL = Quantity("K/W", "Thermal resistance", example='"0.35 K/W"')
MARGIN = Quantity("dB", "Gain margin", example='"6 dB"')
VELOCITY_GAIN = Quantity("N*m*s/rad", "Velocity gain", example='"1.9 N*m*s/rad"')

# Expected values by hand from the definitions: 1 in = 25.4 mm, 1 lb = 0.45359237 kg and 1 lbf = 1 lb · 9.80665 m/s²
# (international yard and pound agreement; exact), 1 rpm = 2π/60 rad/s, 1 arcmin = π/10800 rad.
POUND, G = 0.45359237, 9.80665
READ = [
    (MASS, "38 kg", 38.0),
    (MASS, "38kg", 38.0),
    (MASS, " +3.8e1\u00a0kg ", 38.0),
    (MASS, "10 lb", 10 * POUND),
    (MASS, "16 oz", POUND),
    (LENGTH, "300 mm", 0.3),
    (LENGTH, "−300 mm", -0.3),
    (LENGTH, "25 µm", 25e-6),
    (LENGTH, "11 in", 0.2794),
    (LENGTH, "1 ft", 0.3048),
    (SPEED, "3000 rpm", 100 * math.pi),
    (SPEED, "3000 1/min", 100 * math.pi),
    (SPEED, "50 rev/s", 100 * math.pi),
    (SPEED, "3 krpm", 100 * math.pi),
    (SPEED, "360 deg/s", 2 * math.pi),
    (CORNER, "210 Hz", 420 * math.pi),
    (CORNER, "0.21 kHz", 420 * math.pi),
    (CORNER, "1319.4689145077132 rad/s", 420 * math.pi),
    (GAIN, "85 1/s", 85.0),
    (GAIN, "85/s", 85.0),
    (GAIN, "3 m/min/mm", 50.0),
    (TORQUE, "1 lbf*ft", POUND * G * 0.3048),
    (TORQUE, "16 ozf*in", POUND * G * 0.0254),
    (TORQUE, "2.4 Nm", 2.4),
    (TORQUE, "240 mNm", 0.24),
    (TORQUE_CONSTANT, "0.72 N·m/A", 0.72),
    (TORQUE_CONSTANT, "0.72 V*s/rad", 0.72),
    (TORQUE_CONSTANT, "0.72 V/(rad/s)", 0.72),
    (VOLTAGE_CONSTANT, "43.5 V/krpm", 43.5 * 60 / (2000 * math.pi)),
    (VOLTAGE_CONSTANT, "0.4 N*m/A", 0.4),
    (STIFFNESS, "9 N*m/arcmin", 9 * 10800 / math.pi),
    (INERTIA, "1.5 kg*cm^2", 1.5e-4),
    (INERTIA, "1.5 kg cm²", 1.5e-4),
    (INERTIA, "1 lb*in^2", POUND * 0.0254**2),
    (INERTIA, "1 lbf*in*s^2", POUND * G * 0.0254),
    (AMBIENT, "30 degC", 303.15),
    (AMBIENT, "30 °C", 303.15),
    (AMBIENT, "86 degF", 303.15),
    (RISE, "20 K", 20.0),
    (THERMAL, "0.35 degC/W", 0.35),
    (MARGIN, "6 dB", 6.0),
    (VELOCITY_GAIN, "2 N*m*s", 2.0),
    (VELOCITY_GAIN, "1 N*m/rpm", 30 / math.pi),
]

DIMENSION = "has the dimension {}; wanted {}"
REFUSED = [
    (MASS, "1,5 kg", "has a decimal comma; write a point", '"1.5 kg"'),
    (MASS, "nan kg", "does not start with a plain number", '"38 kg"'),
    (MASS, "inf kg", "does not start with a plain number", '"38 kg"'),
    (MASS, "", "does not start with a plain number", '"38 kg"'),
    (MASS, "1e400 kg", "is not a finite number", '"38 kg"'),
    (MASS, "-3 kg", "must be above 0 kg", '"38 kg"'),
    (MASS, "0 kg", "must be above 0 kg", '"38 kg"'),
    (MASS, "38", "has no unit; wanted mass", '"38 kg"'),
    (MASS, "38 m", DIMENSION.format("length", "mass"), '"38 kg"'),
    (MASS, "38 Kg", 'has the unknown unit "Kg"; did you mean "kg"?', '"38 kg"'),
    (MASS, "1 000 kg", "has more than one number; write the number in one piece, without gaps", '"38 kg"'),
    (MASS, "1.2.3 kg", "has more than one number; write the number in one piece, without gaps", '"38 kg"'),
    (MASS, "10**10**10 kg", "is not one plain number and a unit; nothing is calculated here", '"38 kg"'),
    (MASS, "1 kg^9", "has an exponent that is too large in its unit (above 6)", '"38 kg"'),
    (MASS, "1 kg^2^2", "has an exponent that is too large in its unit (above 6)", '"38 kg"'),
    (MASS, "1 kg*2", "has a second number in its unit", '"38 kg"'),
    (MASS, "1 kg; 2", 'has ";" in its unit', '"38 kg"'),
    (MASS, "1 " + "(" * 5 + "kg" + ")" * 5, "has more than 4 brackets in its unit", '"38 kg"'),
    (MASS, "1 " + "k" * 50, "has a unit longer than 40 characters", '"38 kg"'),
    (MASS, "9" * 200 + " kg", "is longer than 80 characters; a quantity is a number and a unit", '"38 kg"'),
    (MASS, "1.5e kg", 'has the unknown unit "e"', '"38 kg"'),
    (LENGTH, "5 mil", 'has the unknown unit "mil"; did you mean "min"?', '"300 mm"'),
    (INERTIA, "1 kg*m2", 'has the unknown unit "m2"; did you mean "m^2"?', '"1.5 kg*cm^2"'),
    (TORQUE, "1 Nms", 'has the unknown unit "Nms"; did you mean "Nm*s"?', '"2.4 N*m"'),
    (TORQUE, "9 N*m/rad", DIMENSION.format("mass·length²/(time²·angle)", "mass·length²/time²"), '"2.4 N*m"'),
    (SPEED, "50 Hz", DIMENSION.format("cycles/time", "angle/time"), '"3000 rpm"'),
    (SPEED, "50 1/s", DIMENSION.format("1/time", "angle/time"), '"3000 rpm"'),
    (CORNER, "50 1/s", DIMENSION.format("1/time", "angle/time"), '"210 Hz"'),
    (GAIN, "50 Hz", DIMENSION.format("cycles/time", "1/time"), '"85 1/s"'),
    (
        TORQUE_CONSTANT,
        "0.72 N*m*A",
        DIMENSION.format("mass·length²·current/time²", "mass·length²/(time²·current)"),
        '"0.72 N*m/A"',
    ),
    (
        TORQUE_CONSTANT,
        "0.72 N*m/Arms",
        'has the unknown unit "Arms"; rms or peak is said by the key of the basis, not the unit',
        '"0.72 N*m/A"',
    ),
    (RISE, "20 degC", "is a temperature on a scale; a rise is wanted, in K", '"20 K"'),
    (MARGIN, "6", "has no unit; wanted level", '"6 dB"'),
]


@pytest.mark.parametrize(("declaration", "text", "expected"), READ)
def test_reads_what_people_type(declaration: Quantity, text: str, expected: float) -> None:
    assert parse(text, declaration) == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize(("declaration", "text", "rule", "example"), REFUSED)
def test_refuses_in_plain_words(declaration: Quantity, text: str, rule: str, example: str) -> None:
    with pytest.raises(InputError) as raised:
        parse(text, declaration, path="load.mass")
    (problem,) = raised.value.problems
    assert (problem.path, problem.rule, problem.example) == ("load.mass", rule, example)
    assert problem.value.startswith(f'"{text[:60]}')


def test_rotary_axis_reads_angles() -> None:
    assert parse("90 deg", LENGTH, rotary=True) == pytest.approx(math.pi / 2, rel=1e-15)
    with pytest.raises(InputError, match=r'"90 mm" has the dimension length; wanted angle, for example "300 deg"'):
        parse("90 mm", LENGTH, rotary=True)


def test_decimal_units_are_read_exactly() -> None:
    # Dividing by a whole power of ten is correctly rounded, so that the same number in mm and m is the same float.
    assert [parse(f"{n} mm", LENGTH) for n in range(1, 2000)] == [n / 1000 for n in range(1, 2000)]


def test_random_texts_never_raise_anything_else() -> None:
    rng = random.Random(20240717)
    units = re.findall(r"\S+", "kg m N*m / * ** ^ ( ) s deg rpm Hz in K A °C Ω µ % _ k -1 ^2 1/ Nm dB")
    pieces = [*units, *re.findall(r"\S", "15.,eE-+;2'\"٣\0"), "nan", "inf", "10", " ", "\n"]
    fields = [MASS, LENGTH, SPEED, AMBIENT, THERMAL, MARGIN]
    read = 0
    for n in range(60_000):
        if n % 3 == 0:
            text = "".join(rng.choices(pieces, k=rng.randint(1, 8)))
        elif n % 3 == 1:
            text = f"{rng.uniform(-9, 9):.3g} " + "".join(rng.choices(units, k=rng.randint(1, 3)))
        else:
            text = "5 " + "".join(chr(rng.randint(1, 0x250)) for _ in range(rng.randint(0, 6)))
        try:
            assert math.isfinite(parse(text, rng.choice(fields), rotary=rng.random() < 0.5))
            read += 1
        except InputError:
            pass
    assert read > 50  # the pieces do form quantities now and then


@pytest.mark.parametrize(
    ("value", "declaration", "digits", "text"),
    [
        (0.72, TORQUE_CONSTANT, 3, "0.72 N·m/A"),
        (0.41539, VOLTAGE_CONSTANT, 3, "43.5 V/krpm"),
        (1.5e-4, INERTIA, 3, "1.5 kg·cm²"),
        (25e-6, Quantity("m", "Window", shown="um"), 3, "25 µm"),
        (303.15, AMBIENT, 3, "30 °C"),
        (2.6, Quantity("ohm", "Resistance"), 3, "2.6 Ω"),
        (420 * math.pi, CORNER, 3, "210 Hz"),
        (1234.56, MASS, 3, "1230 kg"),
        (1234.56, MASS, 6, "1234.56 kg"),
        (-0.00012345, Quantity("N", "Force"), 3, "-0.000123 N"),
        (1.2345e-9, MASS, 3, "1.23e-09 kg"),
    ],
)
def test_shows_as_people_read(value: float, declaration: Quantity, digits: int, text: str) -> None:
    assert show(value, declaration, digits=digits) == text


def test_what_is_shown_can_be_typed() -> None:
    for declaration, text, expected in READ:
        again = parse(show(parse(text, declaration), declaration, digits=17), declaration)
        assert again == pytest.approx(expected, rel=1e-12)


def test_exact_text_gives_the_same_float() -> None:
    rng = random.Random(7)
    for declaration in (MASS, LENGTH, SPEED, CORNER, VOLTAGE_CONSTANT, STIFFNESS, INERTIA, GAIN):
        for rotary in (False, True):
            for _ in range(300):
                value = 10 ** rng.uniform(-9, 9)
                assert parse(exact(value, declaration, rotary), declaration, rotary) == value
    assert exact(0.006, Quantity("s", "Time", shown="ms")) == "6 ms"  # and short where it can be


def test_convert_from_si() -> None:
    assert convert(100 * math.pi, "rpm") == pytest.approx(3000, rel=1e-14)
    assert convert(420 * math.pi, "Hz") == pytest.approx(210, rel=1e-14)
    assert convert(303.15, "degC") == pytest.approx(30, rel=1e-14)
    with pytest.raises(InputError, match='unknown unit "furlong"'):
        convert(1.0, "furlong")


def test_digits_and_unit_print() -> None:
    assert [digits_of(v, 3) for v in (0.0, 999.9, 3000.0, 0.1 + 0.2)] == ["0", "1000", "3000", "0.3"]
    assert pretty("kg*m^2/deg") == "kg·m²/°"


def test_pint_is_loaded_only_when_a_unit_is_read() -> None:
    code = "import sys, axis.units, axis.description.axis, axis.files.axis_file; print('pint' in sys.modules)"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True, timeout=60)
    assert done.stdout.strip() == "False"
