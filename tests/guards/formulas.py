"""The public functions of the formula rooms, and what their docstrings say of units and sources."""

import importlib
import inspect
import pkgutil
import re
import typing
from collections import abc

ROOMS = (
    "mechanics",
    "motion",
    "machine",
    "completion",
    "complete",
    "sizing",
    "loops",
    "simulation",
    "settling",
    "tuning",
)

SUPERSCRIPTS = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-")


def modules():
    """Every module of the rooms of floors 2 to 6."""
    for room in ROOMS:
        module = importlib.import_module(f"axis.{room}")
        yield module
        for found in pkgutil.iter_modules(getattr(module, "__path__", []), f"axis.{room}."):
            yield importlib.import_module(found.name)


def public_functions():
    """Module-level functions without underscore, each where it is written; compiled ones as their source."""
    for module in modules():
        for name, thing in vars(module).items():
            function = getattr(thing, "py_func", thing)
            if inspect.isfunction(function) and function.__module__ == module.__name__ and not name.startswith("_"):
                yield function


def is_plain(function):
    """Whether a function is plain Python where it stands; parts of the kernel must not be called from Python."""
    return vars(importlib.import_module(function.__module__))[function.__name__] is function


def hints(function):
    """Annotations of a function as types."""
    return typing.get_type_hints(function, vars(importlib.import_module(function.__module__)))


def holds_float(annotation):
    """Whether an annotation is a float, or a tuple, a sequence or a choice of them; tables by name are no formula's."""
    if typing.get_origin(annotation) in (dict, abc.Mapping, abc.Callable):
        return False
    return annotation is float or any(holds_float(part) for part in typing.get_args(annotation))


def float_parameters(function):
    """Names of the parameters that hold floats."""
    return [name for name, kind in hints(function).items() if name != "return" and holds_float(kind)]


def parameter_units(function):
    """Parameter name to the text in the brackets that follow it, wherever in the docstring."""
    found = re.findall(r"\b(\w+)`? \[([^\]]+)\]", function.__doc__ or "")
    return {name: unit for name, unit in reversed(found) if name in inspect.signature(function).parameters}


def result_units(function):
    """The bracketed units of the line that begins with Returns."""
    line = re.search(r"^\s*Returns (.*)$", function.__doc__ or "", re.MULTILINE)
    return re.findall(r"\[([^\]]+)\]", line[1]) if line else []


def field_units(cls):
    """Field name to the bracketed unit of its comment, `[N] or [N·m]` as one; for the float fields of a dataclass."""
    source, units = inspect.getsource(cls), {}
    for name, kind in typing.get_type_hints(cls).items():
        comment = re.search(rf"^\s+{name}: .*?# \[(.+?)\](?: or \[(.+?)\])?", source, re.MULTILINE)
        if holds_float(kind) and comment:
            units[name] = " or ".join(filter(None, comment.groups()))
    return units


def source_keys(function):
    """Keys after `Source:`."""
    return re.findall(r"\[([\w-]+)\]", "".join(re.findall(r"Source:(.*)", function.__doc__ or "")))


def full_name(function):
    return f"{function.__module__.removeprefix('axis.')}.{function.__name__}"


BASE = ("kg", "m", "s", "A", "K")
DERIVED = {
    "N": {"kg": 1, "m": 1, "s": -2},
    "J": {"kg": 1, "m": 2, "s": -2},
    "W": {"kg": 1, "m": 2, "s": -3},
    "V": {"kg": 1, "m": 2, "s": -3, "A": -1},
    "ohm": {"kg": 1, "m": 2, "s": -3, "A": -2},
    "H": {"kg": 1, "m": 2, "s": -2, "A": -2},
    "F": {"kg": -1, "m": -2, "s": 4, "A": 2},
    "Wb": {"kg": 1, "m": 2, "s": -2, "A": -1},
    "Hz": {"s": -1},
}
PURE = ("1", "rad", "deg", "dB", "%")


def dimension(unit):
    """`N·m/rad` to its powers of kg, m, s, A, K; a slash divides by the one unit that follows it."""
    powers = dict.fromkeys(BASE, 0.0)
    for sign, name, power in re.findall(r"([·*/]?)\s*([A-Za-z%Ω]+|1)\^?(-?[\d.]*)", unit.translate(SUPERSCRIPTS)):
        factor = (-1.0 if sign == "/" else 1.0) * float(power or 1.0)
        if name in PURE:
            continue
        parts = {name: 1} if name in BASE else DERIVED[name]
        for base, own in parts.items():
            powers[base] += factor * own
    return powers
