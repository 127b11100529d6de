"""Rules between values on axes that are built in code, without a file."""

from __future__ import annotations

from dataclasses import replace

import pytest

from axis.description.axis import Axis
from axis.description.motor import Motor
from axis.description.moves import Move
from axis.description.validation import motor_problems, problems
from axis.files.axis_file import read_text
from axis.files.template import template


@pytest.fixture(scope="module")
def axis() -> Axis:
    return read_text(template()).axis


def _told(axis: Axis) -> list[str]:
    return [str(problem) for problem in problems(axis)]


def _move(distance: float | None = None, to: float | None = None) -> Move:
    return Move(distance=distance, to=to, duration=0.5)


def test_a_sound_axis_breaks_no_rule(axis: Axis) -> None:
    assert _told(axis) == []


@pytest.mark.parametrize(
    "moves",
    [
        [_move(0.1), _move(-0.1)],
        [_move(0.1), _move(0.2), _move(-0.3)],  # 0.1 + 0.2 − 0.3 is 5.6e-17 in floats, not zero
        [_move(to=0.3), _move(to=0.1), _move(to=0.0)],
        [_move(0.3), _move(to=0.0)],
        [_move(to=0.1016), _move(-4 * 0.0254)],
    ],
)
def test_closed_cycles(axis: Axis, moves: list[Move]) -> None:
    assert _told(replace(axis, moves=tuple(moves))) == []


@pytest.mark.parametrize("moves", [[_move(0.3)], [_move(0.3), _move(-0.299_999_9)], [_move(to=0.3), _move(to=1e-6)]])
def test_open_cycles_are_told_unless_the_axis_indexes(axis: Axis, moves: list[Move]) -> None:
    is_open = replace(axis, moves=tuple(moves))
    (told,) = _told(is_open)
    assert told.startswith(f"move: the cycle of {len(moves)} move")
    assert "does not close" in told
    assert _told(replace(is_open, head=replace(axis.head, indexes=True))) == []


def test_a_move_of_no_length(axis: Axis) -> None:
    assert _told(replace(axis, moves=(_move(0.0),))) == [
        "move[1].distance: 0 mm moves nowhere; lengthen the dwell of the move before it instead"
    ]
    assert "move[2].to" in _told(replace(axis, moves=(_move(0.3), _move(to=0.3), _move(to=0.0))))[0]


def test_no_move_at_all(axis: Axis) -> None:
    assert _told(replace(axis, moves=())) == [
        'move: is missing: an axis has at least one move, for example [[move]] distance = "300 mm"'
    ]


def test_jerk_belongs_to_its_law(axis: Axis) -> None:
    move = Move(distance=0.3, law="constant_acceleration", speed=0.6, acceleration=6.0, jerk=300.0)
    (told,) = _told(replace(axis, moves=(move, _move(-0.3))))
    assert told == (
        'move[1].jerk: 300 m/s³ has no meaning for the law constant_acceleration, for example law = "jerk_limited"'
    )


def test_currents_without_any_basis() -> None:
    motor = Motor(voltage_constant=0.4, voltage_constant_basis="phase peak", peak_current=13.0)
    assert [problem.path for problem in motor_problems(motor)] == ["motor.current_basis"]
    assert motor_problems(replace(motor, current_basis="peak")) == []
    with_constant = replace(motor, torque_constant=0.72, torque_constant_basis="rms")
    assert motor_problems(with_constant) == []  # the basis of the torque constant is taken, and told


def test_periods_as_whole_multiples(axis: Axis) -> None:
    def told(current: float, velocity: float, position: float) -> list[str]:
        drive = replace(
            axis.drive, current_period=current, velocity_period=velocity, position_period=position, use=None
        )
        return [problem.path for problem in problems(replace(axis, drive=drive))]

    assert told(62.5e-6, 125e-6, 250e-6) == []
    assert told(1 / 16000, 1 / 8000, 1 / 4000) == []
    assert told(62.5e-6, 187.5e-6, 187.5e-6) == []
    assert told(62.5e-6, 62.5e-6 / 2, 250e-6) == ["drive.velocity_period"]
    assert told(62.5e-6, 125e-6, 300e-6) == ["drive.position_period"]


def test_payload_names_are_unique(axis: Axis) -> None:
    twice = replace(axis, payloads=axis.payloads * 2)
    assert _told(twice) == ['payload[2].name: "full tray" stands twice; each payload has a name of its own']
