"""Changes that must not change the answer: a mirrored axis, a stage that does nothing, a file of no tolerance."""

from dataclasses import asdict, replace

import pytest

import axis
from axis.complete import complete
from axis.description.corners import corners
from axis.description.transmission import Gearbox
from axis.description.wishes import Tolerance
from axis.study import Study
from tests.cli.command import DATA

RAM = axis.load(DATA / "ram_si.toml")
COUNT = 2.0 * 3.141592653589793 / 2**20  # [rad] one count of the encoder


def with_axis(**changed) -> Study:
    stated = replace(RAM.document.axis, **changed)
    return replace(RAM, document=replace(RAM.document, axis=stated), axis=complete(stated))


def mirrored(hand: bool) -> Study:
    """Travel, incline and forces the other way round, and with `hand` the thread too."""
    stated = RAM.document.axis
    gearbox, screw = stated.transmission
    return with_axis(
        head=replace(stated.head, incline=-stated.head.incline),
        transmission=(gearbox, replace(screw, left_hand=hand)),
        moves=tuple(replace(move, distance=-move.distance, force=-move.force) for move in stated.moves),
    )


def outcomes(study: Study):
    """Figures of every move, nominal and at its worst corner, without the one that carries a sign."""
    for move in axis.check(study).settled.moves:
        for outcome in (move.nominal, move.worst):
            figures = asdict(outcome)
            yield figures.pop("rest_error"), figures


def test_mirrored_with_its_thread_the_shaft_does_the_same():
    study = mirrored(hand=True)
    assert study.axis.ratio == -RAM.axis.ratio
    for (rest, figures), (other_rest, other) in zip(outcomes(RAM), outcomes(study), strict=True):
        assert other == pytest.approx(figures, rel=1e-9)
        assert other_rest == pytest.approx(-rest, rel=1e-6)
    assert axis.size(study).sizing == axis.size(RAM).sizing


def test_mirrored_without_its_thread_the_shaft_turns_the_other_way():
    """The encoder rounds to one side, so that the two differ by a count."""
    study = mirrored(hand=False)
    length = COUNT / abs(RAM.axis.ratio)
    sample = RAM.axis.drive.rates.position_period
    for (rest, figures), (other_rest, other) in zip(outcomes(RAM), outcomes(study), strict=True):
        for name in ("overshoot", "undershoot", "following_error"):
            assert other[name] == pytest.approx(figures[name], abs=3.0 * length), name
        assert other_rest == pytest.approx(-rest, abs=3.0 * length)
        for name in ("time_to_window", "signal", "commanded_end"):
            assert other[name] == pytest.approx(figures[name], abs=sample), name
        assert other["peak_torque"] == pytest.approx(figures["peak_torque"], rel=1e-3)
    assert [check.verdict for check in axis.check(study).settled.all_checks] == [
        check.verdict for check in axis.check(RAM).settled.all_checks
    ]


def test_a_gearbox_that_does_nothing_changes_nothing():
    nothing = Gearbox(ratio=1.0, inertia=0.0, efficiency=1.0, efficiency_back=1.0, drag=0.0)
    study = with_axis(transmission=(nothing, *RAM.document.axis.transmission))
    assert axis.check(study).settled == axis.check(RAM).settled
    sized, before = axis.size(study).sizing, axis.size(RAM).sizing
    for name, value in asdict(before.demand).items():
        assert value is None or getattr(sized.demand, name) == pytest.approx(value, rel=1e-12), name


def test_without_tolerance_the_nominal_axis_is_all():
    settled = axis.check(with_axis(tolerance=Tolerance())).settled
    assert settled.corners == 1
    assert all(move.worst == move.nominal and not move.worst_corner for move in settled.moves)


def test_corners_of_five_tolerances():
    """Load mass and stiffness take five points each, the three others their ends: 5·5·2·2·2 = 200."""
    tolerance = Tolerance(load_mass=0.05, friction=0.4, torque_constant=0.05, stiffness=0.2, supply_voltage=0.1)
    found = corners(tolerance)
    assert len(found) == 200
    assert len({tuple(corner.items()) for corner in found}) == 200
    for name, points in (
        ("load_mass", [-0.05, -0.025, 0.0, 0.025, 0.05]),
        ("stiffness", [-0.2, -0.1, 0.0, 0.1, 0.2]),
        ("friction", [-0.4, 0.4]),
        ("torque_constant", [-0.05, 0.05]),
        ("supply_voltage", [-0.1, 0.1]),
    ):
        assert sorted({corner[name] for corner in found}) == pytest.approx(points), name
