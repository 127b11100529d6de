"""Checks: each limit at its own boundary, what is missing told by name, the worst corner, remedies that work."""

import json
import math
import subprocess
import sys
from dataclasses import fields, replace
from pathlib import Path

import numpy as np
import pytest

from axis.complete import complete
from axis.description.drive import Drive
from axis.description.load import Friction, Load
from axis.description.moves import Move
from axis.files.axis_file import read
from axis.sizing.checks import rules
from axis.sizing.demand import Load as Course
from axis.sizing.demand import demand, link_storage, returned
from axis.sizing.drive_checks import bucket_level
from axis.sizing.finding import corners
from axis.sizing.size import size
from axis.sizing.trace import trace
from tests.sizing.axes import CARRIAGE, GEARBOX, MOTOR, SCREW, THERE, TOLERANCE, checks_of, completed, random_axis

DEMO = Path(__file__).parents[2] / "catalog_demo"
EXACT = replace(CARRIAGE, tolerance=type(TOLERANCE)())  # without tolerances
HANGING = replace(CARRIAGE, head=replace(CARRIAGE.head, incline=math.pi / 2.0), tolerance=type(TOLERANCE)())
GEARED = replace(EXACT, transmission=(GEARBOX, replace(SCREW, lead=0.05)))


def verdicts(axis):
    return {name: check.verdict for name, check in checks_of(size(completed(axis))).items()}


def check(axis, name):
    return checks_of(size(completed(axis)))[name]


def with_motor(axis, **changes):
    return replace(axis, motor=replace(axis.motor, **changes))


def with_drive(axis, **changes):
    return replace(axis, drive=replace(axis.drive, **changes))


def with_stage(axis, **changes):
    return replace(axis, transmission=(replace(axis.transmission[0], **changes), *axis.transmission[1:]))


# Each limit: the check, how it is stated, and its value in the units of the check from the value as stated.
LIMITS = [
    ("motor_peak_torque", EXACT, lambda v: with_motor(EXACT, peak_torque=v)),
    ("motor_peak_current", EXACT, lambda v: with_motor(EXACT, peak_current=v)),
    ("motor_standstill_torque", HANGING, lambda v: with_motor(HANGING, stall_torque=v)),
    ("motor_speed", EXACT, lambda v: with_motor(EXACT, max_speed=v)),
    ("motor_winding_temperature", EXACT, lambda v: with_motor(EXACT, max_winding_temperature=v + 273.15)),
    ("drive_continuous_current", EXACT, lambda v: with_drive(EXACT, continuous_current=v)),
    ("drive_peak_current", EXACT, lambda v: with_drive(EXACT, peak_current=v)),
    ("drive_standstill_current", HANGING, lambda v: with_drive(HANGING, standstill_current=v)),
    ("stage_speed[1]", EXACT, lambda v: with_stage(EXACT, max_input_speed=v)),
    ("screw_force[1]", EXACT, lambda v: with_stage(EXACT, max_force=v)),
    ("gearbox_peak_torque[1]", GEARED, lambda v: with_stage(GEARED, peak_torque=v)),
    ("gearbox_nominal_torque[1]", GEARED, lambda v: with_stage(GEARED, nominal_torque=v)),
]


@pytest.mark.parametrize(("name", "axis", "limited"), LIMITS, ids=[name for name, _, _ in LIMITS])
def test_limit_a_little_above_passes_and_a_little_below_fails(name, axis, limited):
    asked = check(axis, name).demand
    assert asked > 0.0
    above, below = check(limited(asked * (1.0 + 1e-6)), name), check(limited(asked * (1.0 - 1e-6)), name)
    assert (above.verdict, below.verdict) == ("pass", "fail")
    assert below.demand == pytest.approx(asked, rel=1e-9)
    assert below.limit == pytest.approx(asked * (1.0 - 1e-6), rel=1e-9)
    assert 0.0 < above.margin < 1e-5
    assert any(character.isdigit() for character in below.remedy)


@pytest.mark.parametrize(
    ("name", "axis"),
    [
        ("motor.rated_torque", with_motor(EXACT, rated_torque=None)),
        ("motor.stall_torque", with_motor(HANGING, stall_torque=None)),
        ("motor.max_speed", with_motor(EXACT, max_speed=None)),
        ("motor.winding_housing", with_motor(EXACT, winding_housing=None)),
        ("motor.max_winding_temperature", with_motor(EXACT, max_winding_temperature=None)),
        ("transmission[1].max_input_speed", with_stage(EXACT, max_input_speed=None)),
        ("transmission[1].max_force", with_stage(EXACT, max_force=None)),
        ("transmission[1].peak_torque", with_stage(GEARED, peak_torque=None)),
        ("transmission[1].nominal_torque", with_stage(GEARED, nominal_torque=None)),
        ("drive.braking_resistor_power", with_drive(EXACT, braking_resistor_power=None, dc_link_capacitance=1e-6)),
        ("drive.dc_link_capacitance", with_drive(EXACT, braking_resistor_resistance=None, dc_link_capacitance=None)),
    ],
    ids=lambda value: value if isinstance(value, str) else "",
)
def test_what_is_missing_is_named_and_never_a_pass(name, axis):
    sizing = size(completed(axis))
    unknown = [one for one in sizing.checks if one.verdict == "not evaluated"]
    assert any(name in one.reason for one in unknown)
    assert sizing.verdict == "not evaluated"
    assert all(one.limit is None and not one.remedy for one in unknown)


def test_axis_that_is_right_passes_whole():
    sizing = size(completed())
    assert sizing.verdict == "pass"
    assert {one.verdict for one in sizing.checks} == {"pass", "not applicable"}
    assert len({one.id for one in sizing.checks}) == len(sizing.checks)


def test_envelope_on_the_lowest_bus_decides():
    """The limit at the top of the ramp is K_T times the root of the voltage circle, solved here by bisection."""
    fast = replace(EXACT, moves=tuple(replace(move, speed=1.2, acceleration=20.0) for move in EXACT.moves))
    weak = with_drive(fast, dc_link_min=255.0)
    found = check(weak, "motor_peak_torque")
    motor = completed(weak).motor
    speed = float(found.reason.split("at ")[1].split(" rpm")[0]) * 2.0 * math.pi / 60.0
    voltage, low, high = 255.0 / math.sqrt(3.0) * 0.9, 0.0, 1000.0
    for _ in range(100):
        current = 0.5 * (low + high)
        needed = math.hypot(
            motor.resistance * current + motor.voltage_constant * speed,
            motor.pole_pairs * speed * motor.inductance * current,
        )
        low, high = (current, high) if needed < voltage else (low, current)
    assert found.limit < 0.99 * motor.peak_torque
    assert found.limit == pytest.approx(motor.torque_constant * low, rel=2e-3)  # the speed is told with four digits
    assert check(with_drive(fast, dc_link_min=480.0), "motor_peak_torque").margin > found.margin


def test_worst_margin_along_the_cycle_by_a_fine_grid():
    fast = replace(EXACT, moves=tuple(replace(move, speed=1.2, acceleration=20.0) for move in EXACT.moves))
    axis = completed(with_drive(fast, dc_link_min=255.0))
    motor, course = axis.motor, trace(axis)
    voltage, worst = 255.0 / math.sqrt(3.0) * 0.9, 1.0
    for n in range(len(course.duration)):
        for time in np.linspace(0.0, course.duration[n], 2001):
            speed, torque = (float(np.polyval(p[n][::-1], time)) for p in (course.speed, course.torque))
            emf, drop = motor.voltage_constant * abs(speed), motor.resistance * math.copysign(1.0, speed * torque)
            across = motor.pole_pairs * speed * motor.inductance
            square = drop**2 + across**2
            root = (-drop * emf + math.sqrt((drop * emf) ** 2 + square * (voltage**2 - emf**2))) / square
            limit = min(motor.torque_constant * min(motor.peak_current, root), motor.peak_torque)
            worst = min(worst, 1.0 - abs(torque) / limit)
    assert checks_of(size(axis))["motor_peak_torque"].margin == pytest.approx(worst, abs=1e-5)
    assert checks_of(size(axis))["motor_peak_torque"].margin <= worst + 1e-12


def test_tolerances_only_make_it_worse_and_the_corner_is_named():
    sure, unsure = checks_of(size(completed(EXACT))), checks_of(size(completed(CARRIAGE)))
    for name, one in sure.items():
        if one.margin is not None:
            assert unsure[name].margin <= one.margin + 1e-12, name
    assert "load mass +5 %, friction +40 %, torque constant -5 %" in unsure["drive_peak_current"].reason
    assert "nominal" in sure["drive_peak_current"].reason


def test_every_corner_by_brute_force():
    """The worst of the peak currents over a fine grid of the tolerances lies at the end that the check found."""
    found = checks_of(size(completed(CARRIAGE)))["drive_peak_current"].demand
    peaks = []
    for mass in np.linspace(-0.05, 0.05, 5):
        for friction in np.linspace(-0.4, 0.4, 5):
            load = Load(
                mass=38.0 * (1 + mass), friction=Friction(coulomb=22.0 * (1 + friction), viscous=45.0 * (1 + friction))
            )
            payload = replace(CARRIAGE.payloads[0], mass=9.0 * (1 + mass))
            axis = completed(replace(EXACT, load=load, payloads=(payload,)))
            peaks.append(demand(Course(axis)).peak_torque / (0.72 * 0.95))
    assert found == pytest.approx(max(peaks), rel=1e-9)


def test_bucket_by_small_steps():
    """The current-time bucket against a plain sum over short steps."""
    small = with_drive(EXACT, continuous_current=1.2, peak_current=8.0, peak_time=0.05)
    axis = completed(replace(small, moves=tuple(replace(move, dwell=0.8) for move in small.moves)))
    course = trace(axis)
    level = highest = 0.0
    step = 1e-4
    for _ in range(3):
        highest = 0.0
        for n in range(len(course.duration)):
            parts = max(int(course.duration[n] / step), 1)
            h = course.duration[n] / parts
            for k in range(parts):
                torque = float(np.polyval(course.torque[n][::-1], (k + 0.5) * h))
                current = torque / axis.motor.torque_constant
                level = max(0.0, level + (current**2 - axis.drive.continuous_current**2) * h)
                highest = max(highest, level)
    found, growth = bucket_level(axis, course)
    assert growth == 0.0
    assert found > 0.0
    assert found == pytest.approx(highest, rel=1e-5)


def test_bucket_that_grows_with_every_cycle_fails():
    """As soon as the mean square exceeds the continuous current the bucket overflows some day, however large."""
    rms = checks_of(size(completed(EXACT)))["drive_continuous_current"].demand
    small = with_drive(EXACT, continuous_current=0.999 * rms, peak_time=1e6)
    assert check(small, "drive_peak_time").verdict == "fail"
    assert check(with_drive(EXACT, continuous_current=1.001 * rms, peak_time=1e6), "drive_peak_time").verdict == "pass"


def test_link_and_resistor_by_small_steps():
    """Energy at the link, what it stores and what the resistor takes, stepped through the cycle in microseconds."""
    fast = with_drive(EXACT, dc_link_capacitance=60e-6)
    axis = completed(replace(fast, load=replace(fast.load, mass=120.0)))
    course, storage = trace(axis), link_storage(axis)
    assert storage == pytest.approx(0.5 * 60e-6 * (760.0**2 - 560.0**2), rel=1e-12)
    per_torque = 1.5 * axis.motor.resistance / axis.motor.torque_constant**2
    level = resistor = energy = 0.0
    for _ in range(3):
        resistor = energy = 0.0
        for n in range(len(course.duration)):
            parts = max(int(course.duration[n] / 2e-5), 1)
            times = (np.arange(parts) + 0.5) * course.duration[n] / parts
            speed, torque = np.polyval(course.speed[n][::-1], times), np.polyval(course.torque[n][::-1], times)
            for part in ((torque * speed + per_torque * torque**2) * course.duration[n] / parts).tolist():
                energy += max(-part, 0.0)
                level -= part
                resistor += max(level - storage, 0.0)
                level = min(max(level, 0.0), storage)
    found = returned(axis, course)
    assert resistor > 0.0
    assert found.energy == pytest.approx(energy, rel=1e-5)
    assert found.resistor_energy == pytest.approx(resistor, rel=1e-4)
    assert demand(Course(axis)).brake_resistor_mean_power == pytest.approx(
        found.resistor_energy / course.cycle_time, rel=1e-12
    )


def test_link_alone_has_to_store_the_braking():
    bare = with_drive(EXACT, braking_resistor_resistance=None, braking_resistor_power=None)
    found = check(bare, "dc_link_energy")
    assert found.limit == pytest.approx(0.5 * 470e-6 * (820.0**2 - 560.0**2), rel=1e-12)
    assert found.verdict == "pass"
    small = with_drive(bare, dc_link_capacitance=470e-6 * found.demand / found.limit * 0.999)
    assert check(small, "dc_link_energy").verdict == "fail"
    assert check(bare, "braking_resistor_power").verdict == "not applicable"


def test_winding_of_a_held_load_by_hand():
    """A load that is held for ever: the steady state of two bodies with copper that warms, solved by fixed point."""
    held = replace(HANGING, moves=(Move(distance=1e-6, speed=0.1, acceleration=1.0, jerk=1e4, dwell=4000.0),))
    held = replace(held, head=replace(held.head, indexes=True), load=Load(mass=60.0))
    axis = completed(held)
    torque = 60.0 * 9.80665 * 0.02 / (2.0 * math.pi)
    cold = 1.5 * 1.3 * (torque / axis.motor.torque_constant) ** 2
    winding = 400.0
    for _ in range(200):
        winding = 303.15 + cold * (1.0 + 0.00393 * (winding - 293.15)) * (0.37 + 0.76)
    assert demand(Course(axis)).winding_temperature == pytest.approx(winding, abs=2e-3)


def test_copper_that_runs_away_fails_without_a_number_that_is_none():
    axis = with_motor(HANGING, housing_ambient=300.0)
    found = check(axis, "motor_winding_temperature")
    assert found.verdict == "fail"
    sizing = size(completed(axis))
    json.dumps([vars(one) for one in sizing.checks] + [sizing.demand.as_json()], allow_nan=False)


def test_demo_axes():
    assert size(complete(read(DEMO / "carriage.toml").axis)).verdict == "pass"
    assert size(complete(read(DEMO / "overloaded.toml").axis)).verdict == "fail"


def holds(stated, name):
    """Whether a check holds at every corner, without looking for remedies."""
    axis = complete(stated)
    (rule,) = (rule for rule in rules(axis) if rule.id == name)
    return all(rule.measure(corner).holds for corner in corners(axis))


def applied(stated, text):
    """The stated axis after a remedy was typed as it is worded."""
    words = text.split()
    value = float(words[words.index("to") + 1])
    numbers = text.split("move")[1].lstrip("s ").split(" to ")[0]
    chosen = [int(number) - 1 for number in numbers.split(", ")]
    return with_value(stated, chosen, words, value), chosen, words, value


def with_value(stated, chosen, words, value):
    moves = list(stated.moves)
    for n in chosen:
        if "acceleration" in words:
            down = None if moves[n].deceleration is None else min(moves[n].deceleration, value)
            moves[n] = replace(moves[n], acceleration=min(moves[n].acceleration, value), deceleration=down)
        elif "speed" in words:
            moves[n] = replace(moves[n], speed=min(moves[n].speed, value))
        elif "dwell" in words:
            moves[n] = replace(moves[n], dwell=value)
        else:
            moves[n] = replace(moves[n], duration=max(moves[n].duration, value))
    return replace(stated, moves=tuple(moves))


def before(stated, chosen, words):
    moves = [stated.moves[n] for n in chosen]
    if "acceleration" in words:
        return max(max(move.acceleration, move.deceleration or 0.0) for move in moves)
    if "speed" in words:
        return max(move.speed for move in moves)
    if "dwell" in words:
        return moves[0].dwell
    return min(move.duration for move in moves)


def test_remedies_of_the_failing_demo_axis():
    """Each named acceleration cures its own check; the lowest of them the whole axis."""
    stated = read(DEMO / "overloaded.toml").axis
    failing = [one for one in size(complete(stated)).checks if one.verdict == "fail"]
    assert "motor_peak_torque" in [one.id for one in failing]
    values = []
    for one in failing:
        cured, _, words, value = applied(stated, one.remedy)
        assert "acceleration" in words
        assert holds(cured, one.id)
        values.append(value)
    cured = with_value(stated, [0, 1], ["acceleration"], min(values))
    assert size(complete(cured)).verdict == "pass"
    assert size(complete(cured)).demand.peak_torque < 0.75 * 8.4


def failing_axis(seed):
    """A random axis whose moves ask too much in one way or another."""
    draw = np.random.default_rng(seed)
    stated = random_axis(seed)
    factor = float(draw.uniform(2.0, 4.0))
    there = replace(stated.moves[0], acceleration=stated.moves[0].acceleration * factor, jerk=None, dwell=0.05)
    back = replace(stated.moves[1], acceleration=9.0 * factor, deceleration=7.0 * factor, speed=0.8, dwell=0.02)
    if seed % 4 == 1:
        there = replace(there, speed=None, acceleration=None, duration=0.3 / factor)
    if seed % 4 == 2:
        back = replace(back, speed=0.8 * factor)
    small = replace(MOTOR, peak_torque=3.0, peak_current=4.6, stall_torque=1.0, rated_torque=0.85)
    return replace(stated, motor=small, tolerance=TOLERANCE, moves=(there, back))


@pytest.mark.parametrize("seed", range(20))
def test_remedies_of_random_failing_axes(seed):
    """The remedy makes its check pass; 98 % of the change still fails. Where no move helps, a part is named."""
    stated = failing_axis(seed)
    failing = [one for one in size(complete(stated)).checks if one.verdict == "fail"]
    assert failing
    for one in failing:
        assert any(character.isdigit() for character in one.remedy), one
        if " to " not in one.remedy:
            assert one.remedy.startswith("a ")
            continue
        cured, chosen, words, value = applied(stated, one.remedy)
        assert holds(cured, one.id), one
        start = before(stated, chosen, words)
        nearly = with_value(stated, chosen, words, start + 0.98 * (value - start))
        assert not holds(nearly, one.id), one


def test_part_is_named_where_no_move_helps():
    """A weight that the motor cannot hoist at any acceleration."""
    heavy = replace(HANGING, load=replace(HANGING.load, mass=4000.0))
    found = check(heavy, "motor_peak_torque")
    assert found.verdict == "fail"
    assert found.remedy.startswith("a motor and drive that give at least ")


def test_sizing_does_not_wait_for_a_compiler():
    script = (
        "import sys; from axis.complete import complete; from axis.files.axis_file import read; "
        "from axis.sizing.size import size; "
        f"size(complete(read({str(DEMO / 'carriage.toml')!r}).axis)); "
        "assert not {'numba', 'scipy.optimize', 'control', 'matplotlib'} & set(sys.modules)"
    )
    subprocess.run([sys.executable, "-c", script], check=True, cwd=DEMO.parent)


def test_drive_without_a_link_of_its_own_is_told():
    unknown = {
        field.name: None for field in fields(Drive) if field.name.startswith(("braking", "chopper", "dc_link_c"))
    }
    found = check(with_drive(EXACT, **unknown), "braking_resistor_power")
    assert found.verdict == "not evaluated"
    still = replace(EXACT, moves=(replace(THERE, acceleration=0.05, jerk=1.0, payload=None),))
    slow = replace(still, head=replace(still.head, indexes=True), motor=MOTOR)
    assert check(with_drive(slow, **unknown), "braking_resistor_power").verdict == "not applicable"
