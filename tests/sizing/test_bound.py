"""The bound of a move against closed forms, against scipy and against moves that a set-point can make."""

import math
from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest
from scipy.integrate import quad, solve_ivp
from scipy.optimize import brentq

from axis.completion import at_corner, move_profile
from axis.description.load import Friction, Load
from axis.description.wishes import Tolerance
from axis.sizing.bound import bounds, move_bound
from tests.sizing.axes import CARRIAGE, completed, random_axis

WINDOW = 25e-6
SMOOTH = Load(mass=38.0, friction=Friction(coulomb=0.0))


def bounds_at(axis, corner):
    """Every move at the same corner."""
    return bounds(axis, [corner] * len(axis.moves))


def free(**changes):
    """A screw axis without any loss, on a bus that never limits."""
    screw = replace(
        CARRIAGE.transmission[0], efficiency=1.0, efficiency_back=1.0, drag=0.0, max_input_speed=None, inertia=0.0
    )
    drive = replace(CARRIAGE.drive, dc_link_nominal=1e7, dc_link_min=None, supply_voltage=None)
    motor = replace(CARRIAGE.motor, max_speed=None)
    return completed(
        replace(CARRIAGE, load=SMOOTH, payloads=(), transmission=(screw,), drive=drive, motor=motor, **changes)
    )


def bare(move):
    return replace(move, payload=None)


def test_constant_acceleration_by_hand():
    """Triangle of speed under one acceleration a up and down: t = t_far − t(2w before the far edge)."""
    axis = free(moves=(bare(replace(CARRIAGE.moves[0], speed=100.0, acceleration=8.0)),))
    distance = 0.25
    whole = 2.0 * math.sqrt((distance + WINDOW) / 8.0)
    expected = whole - math.sqrt(2.0 * 2.0 * WINDOW / 8.0)
    assert move_bound(axis, axis.moves[0]) == pytest.approx(expected, rel=1e-9)


def test_cruise_by_hand():
    """Trapezoid: distance over speed plus half of each ramp, less the last 2w at rest."""
    axis = free(moves=(bare(replace(CARRIAGE.moves[0], speed=0.5, acceleration=8.0, deceleration=5.0)),))
    ramps = 0.5 * 0.5 / 8.0 + 0.5 * 0.5 / 5.0
    expected = (0.25 + WINDOW) / 0.5 + ramps - math.sqrt(2.0 * 2.0 * WINDOW / 5.0)
    assert move_bound(axis, axis.moves[0]) == pytest.approx(expected, rel=1e-9)


def test_constant_torque_by_hand():
    """Without the user's limits: the peak torque over the whole inertia is the acceleration."""
    axis = free(moves=(bare(CARRIAGE.moves[0]),))
    inertia = axis.plant().total_inertia
    rate = axis.motor.peak_torque / inertia / axis.ratio
    expected = 2.0 * math.sqrt((0.25 + WINDOW) / rate) - math.sqrt(4.0 * WINDOW / rate)
    assert move_bound(axis, axis.moves[0], own_limits=False) == pytest.approx(expected, rel=1e-8)


def test_move_shorter_than_its_window_takes_no_time():
    axis = free(moves=(bare(replace(CARRIAGE.moves[0], distance=20e-6)),))
    assert move_bound(axis, axis.moves[0]) == 0.0


def test_near_edge_reached_while_speeding_up():
    """A step of twice the window: the near edge lies a window away, the far edge three."""
    axis = free(moves=(bare(replace(CARRIAGE.moves[0], distance=2.0 * WINDOW, speed=10.0, acceleration=8.0)),))
    assert move_bound(axis, axis.moves[0]) == pytest.approx(math.sqrt(2.0 * WINDOW / 8.0), rel=1e-7)


def rates_by_scipy(axis, move):
    """Acceleration and deceleration along the move by brentq over a torque written afresh, for a single screw stage."""
    (stage,) = axis.stages
    mass, turn = axis.load_inertial + move.payload, math.copysign(1.0, move.distance)
    motor, voltage = axis.motor, axis.drive.bus_nominal / math.sqrt(3.0) * axis.drive.modulation_limit
    lead_ratio = abs(axis.ratio)

    def torque(v, a):
        dry = axis.coulomb + (axis.breakaway - axis.coulomb) * math.exp(-((v / axis.stribeck_speed) ** 2))
        force = mass * a + dry + axis.viscous * v + turn * (mass * axis.gravity + move.force)
        at_screw = force / lead_ratio
        at_screw = at_screw / stage.efficiency if force > 0.0 else at_screw * stage.efficiency_back
        return at_screw + stage.drag + (stage.inertia + motor.inertia) * a * lead_ratio

    def current(v, sign):
        w = v * lead_ratio
        most = min(motor.peak_current, axis.drive.peak_current)

        def left(i):
            along = sign * motor.resistance * i + motor.voltage_constant * w
            return math.hypot(along, motor.pole_pairs * w * motor.inductance * i) - voltage

        return most if left(most) <= 0.0 else brentq(left, 1e-12, most, xtol=1e-14)

    def up(v):
        limit = min(motor.torque_constant * current(v, 1.0), motor.peak_torque)
        return brentq(lambda a: torque(v, a) - limit, -1e4, 1e4, xtol=1e-11)

    def down(v):
        limit = min(motor.torque_constant * current(v, -1.0), motor.peak_torque)
        return -brentq(lambda a: torque(v, a) + limit, -1e4, 1e4, xtol=1e-11)

    return up, down


@pytest.mark.parametrize(("incline", "bus"), [(0.0, 560.0), (math.pi / 2.0, 560.0), (-0.6, 330.0)])
def test_machine_bound_against_scipy(incline, bus):
    """Time and distance over speed by adaptive quadrature, the switching speed by brentq."""
    drive = replace(CARRIAGE.drive, dc_link_nominal=bus, dc_link_min=None)
    stated = replace(CARRIAGE, head=replace(CARRIAGE.head, incline=incline), drive=drive)
    axis = completed(stated)
    for move in axis.moves:
        up, down = rates_by_scipy(axis, move)
        top = min(axis.motor.max_speed, axis.stages[0].max_input_speed) / abs(axis.ratio)
        breaks = [0.004, 0.01, 0.02, 0.1, 0.5]

        def over(function, high, breaks=breaks):
            points = [0.0, *(b for b in breaks if b < high), high]
            pairs = pairwise(points)
            return sum(quad(function, a, b, epsabs=0.0, epsrel=1e-9, limit=300)[0] for a, b in pairs)

        def distance(v, up=up, down=down, over=over):
            return over(lambda x: x / up(x), v) + over(lambda x: x / down(x), v)

        whole = abs(move.distance) + WINDOW
        if distance(top) > whole:
            top = brentq(lambda v, distance=distance, whole=whole: distance(v) - whole, 1e-3, top, xtol=1e-9)
        cruise = max(whole - distance(top), 0.0) / top
        entry = brentq(
            lambda v, over=over, down=down: over(lambda x: x / down(x), v) - 2.0 * WINDOW, 1e-6, top, xtol=1e-12
        )
        expected = over(lambda x, up=up: 1.0 / up(x), top) + cruise
        expected += over(lambda x, down=down: 1.0 / down(x), top) - over(lambda x, down=down: 1.0 / down(x), entry)
        assert move_bound(axis, move, own_limits=False) == pytest.approx(expected, rel=1e-6)


def test_bang_bang_in_time_ends_at_the_far_edge():
    """The same move integrated over time by an event-located solver, at rest at the far edge."""
    screw = replace(CARRIAGE.transmission[0], max_input_speed=None)
    axis = completed(replace(CARRIAGE, transmission=(screw,), motor=replace(CARRIAGE.motor, max_speed=None)))
    move = axis.moves[0]
    up, down = rates_by_scipy(axis, move)
    bound = move_bound(axis, move, own_limits=False)

    def arrive(switch):
        first = solve_ivp(lambda t, y: [y[1], up(y[1])], (0.0, switch), [0.0, 0.0], rtol=1e-9, atol=1e-12)

        def rest(t, y):
            return y[1] - 1e-9

        def near(t, y):
            return y[0] - (move.distance - WINDOW)

        rest.terminal = True
        second = solve_ivp(
            lambda t, y: [y[1], -down(max(y[1], 0.0))],
            (switch, switch + 1.0),
            first.y[:, -1],
            events=(rest, near),
            rtol=1e-9,
            atol=1e-12,
            max_step=1e-3,
        )
        return second.y[0, -1] - (move.distance + WINDOW), second.t_events[1]

    switch = brentq(lambda time: arrive(time)[0], 0.02, 0.15, xtol=1e-12)
    assert arrive(switch)[1][0] == pytest.approx(bound, rel=1e-5)


@pytest.mark.parametrize("seed", range(6))
def test_bounds_are_below_what_the_set_point_does(seed):
    """No move under the same limits is in its window earlier; the machine alone is no slower."""
    axis = completed(replace(random_axis(seed), tolerance=Tolerance()))
    own, machine = bounds_at(axis, {})
    assert machine <= own * (1.0 + 1e-9)
    commanded = 0.0
    for move in axis.moves:
        times = np.linspace(0.0, move_profile(move).duration, 200001)
        away = abs(move_profile(move).evaluate(times)[0] - move.distance) > WINDOW
        commanded += times[away].max()
    assert own <= commanded


def test_worse_corners_take_longer():
    axis = completed()
    corner = {"load_mass": 0.05, "friction": 0.4, "torque_constant": -0.05, "supply_voltage": -0.1}
    worse, better = bounds_at(axis, corner), bounds_at(axis, {name: -share for name, share in corner.items()})
    assert worse[1] > bounds_at(axis, {})[1] > better[1]
    assert worse[1] == pytest.approx(
        sum(move_bound(at_corner(axis, corner), move, own_limits=False) for move in at_corner(axis, corner).moves)
    )


def test_axis_that_cannot_be_hoisted_has_no_bound():
    heavy = replace(CARRIAGE, head=replace(CARRIAGE.head, incline=math.pi / 2.0), load=Load(mass=4000.0))
    assert math.isinf(bounds_at(completed(heavy), {})[1])
