"""Rescaling the base units rescales the answer of every closed formula.

Twenty seeded draws a function: random arguments, random factors for kg, m, s, A and K. It finds hidden constants,
absolute tolerances, lost powers and units that the docstring tells wrong; it cannot find a lost pure number.
"""

import dataclasses
import math
import types
import typing
import zlib
from collections import abc

import numpy as np
import pytest

from axis.errors import SettlepointError
from axis.motion.pieces import Profile
from tests.guards.formulas import (
    BASE,
    dimension,
    field_units,
    float_parameters,
    full_name,
    hints,
    holds_float,
    is_plain,
    parameter_units,
    public_functions,
    result_units,
)

DRAWS = 20
ROOMS = ("mechanics", "motion", "machine", "sizing", "loops")
PIECE_UNITS = ("s", "m or rad", "m/s or rad/s", "m/s² or rad/s²", "m/s³ or rad/s³")
EXEMPT = {"loops.response.step_response"}  # each of its coefficients carries another power of the second
SEQUENCES = (tuple, list, abc.Sequence, abc.Iterable)


# ---- which functions ------------------------------------------------------------------------------------------------


def drawable(kind):
    """Whether an argument of this type can be drawn at random."""
    origin, parts = typing.get_origin(kind), typing.get_args(kind)
    if origin is typing.Literal or kind in (float, int, bool):
        return True
    if dataclasses.is_dataclass(kind):
        kinds = typing.get_type_hints(kind)
        floats = {name for name, one in kinds.items() if holds_float(one)}
        return all(map(drawable, kinds.values())) and floats <= set(field_units(kind))
    if origin in (typing.Union, types.UnionType):
        return any(drawable(part) for part in parts)
    return origin in SEQUENCES and all(part is Ellipsis or drawable(part) for part in parts)


def readable(function):
    """Whether the result can be taken apart into numbers with units."""
    result = hints(function)["return"]
    if dataclasses.is_dataclass(result):
        return result is Profile or bool(field_units(result))
    parts = typing.get_args(result) if typing.get_origin(result) in (tuple, list) else (result,)
    return all(part is float or part is Ellipsis for part in parts)


def closed_formulas():
    for function in public_functions():
        kinds = {name: kind for name, kind in hints(function).items() if name != "return"}
        told = set(float_parameters(function)) <= set(parameter_units(function))
        room = full_name(function).split(".")[0]
        known = room in ROOMS and is_plain(function) and full_name(function) not in EXEMPT
        if known and kinds and told and all(map(drawable, kinds.values())) and readable(function):
            yield function


FORMULAS = list(closed_formulas())


# ---- arguments at random, and the same in other units ---------------------------------------------------------------


def one(unit, reading):
    """The unit of a text such as `N or N·m` under the first or the second reading."""
    choices = unit.split(" or ")
    return choices[min(reading, len(choices) - 1)]


def scale(unit, factors):
    """What a number in this unit is multiplied by when the base units change."""
    return math.prod(factors[base] ** power for base, power in dimension(unit).items())


def draw_argument(draw, kind):
    """A random argument; floats over two decades, so that every branch is met."""
    origin, parts = typing.get_origin(kind), typing.get_args(kind)
    if origin is typing.Literal:
        return str(draw.choice(parts))
    if dataclasses.is_dataclass(kind):
        return kind(**{name: draw_argument(draw, one) for name, one in typing.get_type_hints(kind).items()})
    if origin in (typing.Union, types.UnionType):
        return draw_argument(draw, next(part for part in parts if drawable(part)))
    if origin in SEQUENCES:
        kinds = parts if Ellipsis not in parts and origin is tuple else (parts[0],) * 3
        return tuple(draw_argument(draw, part) for part in kinds)
    if kind is bool:
        return bool(draw.integers(2))
    return int(draw.integers(2, 6)) if kind is int else float(10.0 ** draw.uniform(-1.0, 1.0))


def rescaled(value, unit, factors, reading):
    """An argument in other units.

    `[s; m/s²]` gives the units of the members of a tuple one by one. Of several stages in a row all but the last turn:
    they take the second reading of `[rad/m or 1]`.
    """
    if dataclasses.is_dataclass(value):
        units = field_units(type(value))
        parts = {name: getattr(value, name) for name in typing.get_type_hints(type(value))}
        return type(value)(**{n: rescaled(part, units.get(n, "1"), factors, reading) for n, part in parts.items()})
    if isinstance(value, tuple):
        units = unit.split("; ")
        if isinstance(value[0], tuple) or len(units) == 1:
            units = [unit] * len(value)
        last = len(value) - 1
        rows = dataclasses.is_dataclass(value[0])
        return tuple(
            rescaled(part, own, factors, 1 if rows and n < last else reading)
            for n, (part, own) in enumerate(zip(value, units, strict=True))
        )
    return value * scale(one(unit, reading), factors) if type(value) is float else value


# ---- the answers ----------------------------------------------------------------------------------------------------


def numbers(function, result, reading):
    """(number, unit) for everything in a result."""
    if isinstance(result, Profile):
        return [(float(n), one(u, reading)) for row in result.pieces for n, u in zip(row, PIECE_UNITS, strict=True)]
    if dataclasses.is_dataclass(result):
        fields = [(getattr(result, name), one(unit, reading)) for name, unit in field_units(type(result)).items()]
        return [(n, u) for value, u in fields for n in (value if isinstance(value, tuple) else (value,))]
    values = result if isinstance(result, tuple | list) else (result,)
    units = [one(unit, reading) for unit in result_units(function)]
    if len(units) < len(values):  # "[1], the last [rad/m or 1]", or one unit for all
        units = units[:1] * (len(values) - 1) + units[-1:]
    return list(zip(values, units[: len(values)], strict=True))


def answer(function, arguments, reading):
    try:
        return numbers(function, function(**arguments), reading)
    except (SettlepointError, ValueError, ZeroDivisionError, OverflowError):
        return None


@pytest.mark.parametrize("function", FORMULAS, ids=full_name)
def test_answer_rescales_with_the_units(function):
    draw = np.random.default_rng(zlib.crc32(full_name(function).encode()))
    kinds = {name: kind for name, kind in hints(function).items() if name != "return"}
    units = parameter_units(function)
    done = 0
    for attempt in range(50 * DRAWS):
        if done == DRAWS:
            break
        reading = attempt % 2
        factors = {base: float(10.0 ** draw.uniform(-2.0, 2.0)) for base in BASE}
        before = {name: draw_argument(draw, kind) for name, kind in kinds.items()}
        after = {name: rescaled(value, units.get(name, "1"), factors, reading) for name, value in before.items()}
        expected, got = answer(function, before, reading), answer(function, after, reading)
        if expected is None or got is None:
            assert expected is got, f"has an answer in one set of units alone: {before}"
            continue
        assert len(expected) == len(got)
        for (value, unit), (other, _) in zip(expected, got, strict=True):
            size = max(abs(number) for number, its in expected if its == unit)
            near = pytest.approx(value * scale(unit, factors), rel=1e-7, abs=1e-9 * size * scale(unit, factors))
            assert other == near, f"{before} in units {factors}"
        done += 1
    assert done == DRAWS, f"only {done} of {DRAWS} draws have an answer"


def test_there_are_formulas_to_look_at():
    assert len(FORMULAS) > 50


@pytest.mark.parametrize("wrong", [lambda t: 3.0 * t + 1e-3, lambda t: t * t, lambda t: max(t, 0.5)])
def test_the_guard_bites(wrong):
    """A hidden constant, a wrong power and an absolute floor are each found."""

    def formula(time: float) -> float:
        """Wrong.

        Parameters
            time [s]: any
        Returns [s]
        """
        return wrong(time)

    formula.__module__ = "axis.motion.pieces"
    with pytest.raises(AssertionError):
        test_answer_rescales_with_the_units(formula)
