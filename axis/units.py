"""Text to SI floats and back, and the one declaration of a physical field. The only home of pint.

A typed quantity is NUMBER UNIT. The number is read by one regular expression and float(); only the unit goes to pint,
after limits on its length, characters, brackets and exponents, and what pint says of it is kept as a factor and an
offset. The registry holds the units of `unit_definitions.txt` and nothing else.
"""

from __future__ import annotations

import dataclasses
import difflib
import math
import re
from dataclasses import dataclass
from functools import lru_cache
from pathlib import Path
from typing import Any

from axis.errors import InputError, Problem


@dataclass(frozen=True)
class Quantity:
    """What a dataclass field means: read by the file walker, catalogues, screens, sheets and the glossary.

    `unit` is the SI unit the float is kept in; `rotary` replaces it where the axis turns ("" when it is the same);
    `shown` is the unit people read it in (`shown_rotary` where the axis turns). Bounds are in SI. A field kept in K and
    shown in degC is a temperature on a scale, every other one in K is a rise.
    """

    unit: str
    words: str
    rotary: str = ""
    shown: str = ""
    shown_rotary: str = ""
    above: float | None = None
    at_least: float | None = None
    below: float | None = None
    at_most: float | None = None
    example: str = ""
    symbol: str = ""
    side: str = ""  # "motor" or "load" where confusion would hurt
    alternatives: tuple[tuple[str, float], ...] = ()  # other units a data sheet may use: (unit, SI value of one)


@dataclass(frozen=True)
class Plain:
    """A field that carries no unit: a count, a ratio, a name or one of a few words."""

    words: str
    kind: str  # "count", "ratio", "text", "choice", "flag", "names"
    choices: tuple[str, ...] = ()
    above: float | None = None
    at_least: float | None = None
    below: float | None = None
    at_most: float | None = None
    example: str = ""
    symbol: str = ""


def quantity(unit: str, words: str, *, default: Any = dataclasses.MISSING, **more: Any) -> Any:
    """Declare a physical field once: SI unit, words, bounds (see `Quantity`)."""
    return dataclasses.field(default=default, metadata={"declaration": Quantity(unit, words, **more)})


def plain(kind: str, words: str, *, default: Any = dataclasses.MISSING, **more: Any) -> Any:
    """Declare a field without a unit once: kind, words, bounds or choices (see `Plain`)."""
    return dataclasses.field(default=default, metadata={"declaration": Plain(words, kind, **more)})


def table(key: str, *, default: Any = dataclasses.MISSING) -> Any:
    """Declare a field that is a table, or a list of tables, under the name `key` in the axis file."""
    return dataclasses.field(default=default, metadata={"key": key})


def declarations(cls: Any) -> dict[str, Quantity | Plain]:
    """Field name → declaration, for the fields of a dataclass that carry a value."""
    return {f.name: f.metadata["declaration"] for f in dataclasses.fields(cls) if "declaration" in f.metadata}


# ---- text → SI -------------------------------------------------------------------------------------------------------

LONGEST_TEXT = 80
LARGEST = 1e30  # [SI] beyond it products of two values leave the range of floats
_LONGEST_UNIT = 40
_LARGEST_EXPONENT = 6
_MOST_BRACKETS = 4

_NUMBER = re.compile(r"[+-]?(?:[0-9]{1,40}(?:\.[0-9]{0,40})?|\.[0-9]{1,40})(?:[eE][+-]?[0-9]{1,4}(?![0-9A-Za-z]))?")
_TOKEN = re.compile(r"\s*([A-Za-z_][A-Za-z_0-9]*|[0-9]+|\*\*|[*/^()-])")
_SIGNS = str.maketrans(
    {"·": "*", "⋅": "*", "×": "*", "²": "^2", "³": "^3", "µ": "u", "μ": "u", "Ω": "ohm", "\u2126": "ohm", "−": "-"}
    | {"°": "deg", "\u00a0": " ", "\u202f": " ", "%": "percent"}
)
# Units that mean the same for every field kept in the unit at the left: (unit, SI value of one).
_COMMON: dict[str, tuple[tuple[str, float], ...]] = {
    "rad/s": (("1/min", 2.0 * math.pi / 60.0),),  # as motor plates write it; 1/s would be ambiguous and is refused
    "N*m/A": (("V*s/rad", 1.0),),
    "V*s/rad": (("N*m/A", 1.0),),
    "N*m*s/rad": (("N*m*s", 1.0),),
}
_DIMENSIONS = {  # pint's base units, in the order in which a dimension is written
    "kilogram": "mass",
    "meter": "length",
    "second": "time",
    "ampere": "current",
    "kelvin": "temperature",
    "radian": "angle",
    "cycle": "cycles",
    "count": "counts",
    "decibel": "level",
}


@dataclass(frozen=True)
class _Reading:
    """How a unit turns into SI: x·multiply/divide + offset. Dividing by 1000 is exact where times 0.001 is not."""

    dimension: tuple[tuple[str, int], ...]
    multiply: float
    divide: float
    offset: float

    def to_si(self, value: float) -> float:
        return value * self.multiply / self.divide + self.offset

    def from_si(self, value: float) -> float:
        return (value - self.offset) * self.divide / self.multiply


class _Refused(ValueError):
    """The rule that a text breaks, and what would be right where the text itself tells it."""

    def __init__(self, rule: str, example: str = "") -> None:
        super().__init__(rule)
        self.example = example


def parse(text: str, declaration: Quantity, rotary: bool = False, path: str = "") -> float:
    """The SI value of a typed quantity; InputError with path, value, rule and example where it cannot be one."""
    try:
        value = _read(text, declaration, rotary)
        _check_bounds(value, declaration, rotary)
    except _Refused as refused:
        problem = Problem(path, str(refused), quoted(text), refused.example or example(declaration, rotary))
        raise InputError([problem]) from None
    return value


def _read(text: str, declaration: Quantity, rotary: bool) -> float:
    if len(text) > LONGEST_TEXT:
        raise _Refused(f"is longer than {LONGEST_TEXT} characters; a quantity is a number and a unit")
    clean = text.translate(_SIGNS).strip()
    number = _NUMBER.match(clean)
    if number is None:
        raise _Refused("does not start with a plain number")
    unit = clean[number.end() :].strip()
    _refuse_odd_number(number.group(), clean[number.end() :], unit)
    value = float(number.group())
    si_unit = unit_of(declaration, rotary)
    if not unit:
        raise _Refused(f"has no unit; wanted {_dimension_text(_reading(si_unit).dimension)}")
    reading = _reading_for(unit, si_unit, _alternatives(declaration, si_unit))
    if reading.offset and not _on_scale(declaration):
        raise _Refused("is a temperature on a scale; a rise is wanted, in K")
    result = reading.to_si(value)
    if not math.isfinite(result):
        raise _Refused("is not a finite number")
    if abs(result) > LARGEST:
        raise _Refused("is larger than anything an axis has")
    return result


def _refuse_odd_number(number: str, rest: str, unit: str) -> None:
    """What would silently become another number: decimal commas, gaps between digits, arithmetic."""
    comma = re.match(r",\s*([0-9]{1,20})\s*(.{0,20})", rest)
    if comma:
        raise _Refused("has a decimal comma; write a point", f'"{number}.{comma.group(1)} {comma.group(2)}"')
    gap = re.match(r"\s+[0-9]", rest) and not re.match(r"1\s*/", unit)
    if gap or re.match(r"[0-9.]", rest):
        raise _Refused("has more than one number; write the number in one piece, without gaps")
    if unit[:1] in ("*", "^", "+", "-"):
        raise _Refused("is not one plain number and a unit; nothing is calculated here")


def _check_bounds(value: float, declaration: Quantity, rotary: bool) -> None:
    broken = broken_bound(value, declaration)
    if broken:
        words, bound = broken
        raise _Refused(f"must be {words} {show(bound, declaration, rotary, digits=6)}")


def broken_bound(value: float, declaration: Quantity | Plain) -> tuple[str, float] | None:
    """The first bound of the declaration that the value breaks: its word and the bound, in SI."""
    d = declaration
    for word, bound, kept in (
        ("above", d.above, d.above is None or value > d.above),
        ("at least", d.at_least, d.at_least is None or value >= d.at_least),
        ("below", d.below, d.below is None or value < d.below),
        ("at most", d.at_most, d.at_most is None or value <= d.at_most),
    ):
        if bound is not None and not kept:
            return word, bound
    return None


def unit_of(declaration: Quantity, rotary: bool = False) -> str:
    """The SI unit the value is kept in."""
    return declaration.rotary if rotary and declaration.rotary else declaration.unit


def shown_unit(declaration: Quantity, rotary: bool = False) -> str:
    """The unit people read the value in, as it is typed."""
    if rotary and declaration.rotary:
        return declaration.shown_rotary or declaration.rotary
    return declaration.shown or declaration.unit


def example(declaration: Quantity, rotary: bool = False) -> str:
    """A right text for the field, in quotes; the declared one belongs to linear travel where the units differ."""
    if rotary and declaration.rotary:
        number = _NUMBER.match(declaration.example.strip('["'))
        text = f'"{number.group() if number else 1} {shown_unit(declaration, rotary)}"'
        return f"[{text}]" if declaration.example.startswith("[") else text
    return declaration.example or f'"1 {shown_unit(declaration, rotary)}"'


def quoted(text: str) -> str:
    """A typed text as a message repeats it: printable, in quotes, cut where it is long."""
    clean = "".join(c if c.isprintable() else "�" for c in text[:LONGEST_TEXT])
    return f'"{clean}…"' if len(text) > LONGEST_TEXT else f'"{clean}"'


# ---- SI → text -------------------------------------------------------------------------------------------------------


def show(value: float, declaration: Quantity, rotary: bool = False, digits: int = 3) -> str:
    """The value in its shown unit with so many significant digits, for people: "0.72 N·m/A"."""
    return f"{digits_of(in_shown(value, declaration, rotary), digits)} {pretty(shown_unit(declaration, rotary))}"


def in_shown(value: float, declaration: Quantity, rotary: bool = False) -> float:
    """The number that stands before the shown unit."""
    si_unit = unit_of(declaration, rotary)
    unit = shown_unit(declaration, rotary)
    return _reading_for(unit, si_unit, _alternatives(declaration, si_unit)).from_si(value)


def exact(value: float, declaration: Quantity, rotary: bool = False) -> str:
    """A text that `parse` reads back to the same float, bit for bit; in the shown unit where that can be had."""
    shown = repr(in_shown(value, declaration, rotary))
    short = digits_of(in_shown(value, declaration, rotary), 12)
    for number in (short, shown):
        text = f"{number} {shown_unit(declaration, rotary)}"
        if _read(text, declaration, rotary) == value:
            return text
    return f"{value!r} {unit_of(declaration, rotary)}"


def digits_of(value: float, digits: int) -> str:
    """A number with so many significant digits, without trailing zeros; an exponent only where it must be."""
    if value == 0.0 or not math.isfinite(value):
        return f"{value:g}"
    if not 1e-4 <= abs(value) < 1e7:
        return f"{value:.{digits}g}"
    places = digits - 1 - math.floor(math.log10(abs(value)))
    text = f"{round(value, places):.{max(places, 0)}f}"
    return text.rstrip("0").rstrip(".") if "." in text else text


def pretty(unit: str) -> str:
    """A typed unit as it is printed: "kg*cm^2" becomes "kg·cm²"."""
    text = unit.replace("^2", "²").replace("^3", "³").replace("*", "·").replace("ohm", "Ω")
    text = re.sub(r"\bu(?=[A-Za-z])", "µ", text)
    return re.sub(r"\bdeg(?=C|F|\b)", "°", text)


def convert(value: float, unit: str) -> float:
    """An SI float as the number before `unit`; frequencies are kept in rad/s, so that Hz divides by 2π."""
    try:
        reading = _reading(unit)
    except _Refused as refused:
        raise InputError([Problem("", str(refused), quoted(unit))]) from None
    cycles = dict(reading.dimension).get("cycles", 0)
    return reading.from_si(value) / (2.0 * math.pi) ** cycles


# ---- what pint knows of a unit ---------------------------------------------------------------------------------------


def _on_scale(declaration: Quantity) -> bool:
    return declaration.unit == "K" and declaration.shown == "degC"


def _alternatives(declaration: Quantity, si_unit: str) -> tuple[tuple[str, float], ...]:
    if declaration.shown == "Hz":
        return (("Hz", 2.0 * math.pi), *declaration.alternatives)
    return (*_COMMON.get(si_unit, ()), *declaration.alternatives)


@lru_cache(maxsize=4096)
def _reading_for(unit: str, si_unit: str, alternatives: tuple[tuple[str, float], ...]) -> _Reading:
    """How `unit` is read where `si_unit` is kept: by its dimension, or by that of an alternative."""
    reading, kept = _reading(unit), _reading(si_unit)
    if reading.dimension == kept.dimension:
        return reading
    for name, si_value in alternatives:
        other = _reading(name)
        same_unit = (reading.multiply, reading.divide) == (other.multiply, other.divide)
        # A bare 1/min says revolutions per minute by custom; no such custom reads 1/s.
        if reading.dimension == other.dimension and (same_unit or not name.startswith("1/")):
            factor = reading.multiply / reading.divide * other.divide / other.multiply * si_value
            return _Reading(reading.dimension, *_fraction(factor), 0.0)
    raise _Refused(f"has the dimension {_dimension_text(reading.dimension)}; wanted {_dimension_text(kept.dimension)}")


def _dimension_text(dimension: tuple[tuple[str, int], ...]) -> str:
    """mass·length²/time² and so on."""
    raised = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")

    def factors(sign: int) -> list[str]:
        return [
            name + (str(abs(power)).translate(raised) if abs(power) != 1 else "")
            for name, power in dimension
            if power * sign > 0
        ]

    over, under = "·".join(factors(1)) or "1", "·".join(factors(-1))
    if not under:
        return "none (a bare number)" if over == "1" else over
    return f"{over}/({under})" if len(factors(-1)) > 1 else f"{over}/{under}"


def _fraction(factor: float) -> tuple[float, float]:
    """(multiply, divide) of a factor, whole where it is whole but for rounding."""
    for value, inverted in ((factor, False), (1.0 / factor, True)):
        if 1.0 <= value < 1e15 and abs(value - round(value)) <= 1e-12 * value:
            return (1.0, float(round(value))) if inverted else (float(round(value)), 1.0)
    return factor, 1.0


@lru_cache(maxsize=4096)
def _reading(unit: str) -> _Reading:
    text = _checked(unit)
    registry = _registry()
    try:
        parsed = registry.parse_units(text)
        offset = float(registry.Quantity(0.0, parsed).to_base_units().magnitude)
        far = 1e9 if offset else 1.0  # far from the offset, so that their difference keeps its digits
        one = registry.Quantity(far, parsed).to_base_units()
        factor = (float(one.magnitude) - offset) / far
        powers = {_DIMENSIONS[name]: int(power) for name, power in one.unit_items()}
        divided = _fraction(factor)
    except Exception:  # pint answers text that is no unit with exceptions of many kinds
        raise _Refused(f"has no readable unit in {quoted(unit)}") from None
    return _Reading(tuple((name, powers[name]) for name in _DIMENSIONS.values() if powers.get(name)), *divided, offset)


def _checked(unit: str) -> str:
    """The unit in pint's spelling, or the rule that it breaks before pint sees it."""
    if len(unit) > _LONGEST_UNIT:
        raise _Refused(f"has a unit longer than {_LONGEST_UNIT} characters")
    text = unit.strip()
    text = f"1{text}" if text.startswith("/") else text
    tokens, at = [], 0
    while at < len(text):
        found = _TOKEN.match(text, at)
        if found is None:
            raise _Refused(f"has {quoted(text[at:].strip()[:1])} in its unit")
        tokens.append(found.group(1))
        at = found.end()
    if tokens.count("(") > _MOST_BRACKETS:
        raise _Refused(f"has more than {_MOST_BRACKETS} brackets in its unit")
    for n, token in enumerate(tokens):
        before, after = tokens[max(n - 2, 0) : n], tokens[n + 1 : n + 2]
        if token.isdigit():
            raised = before[-1:] in (["^"], ["**"]) or before in (["^", "-"], ["**", "-"])
            if raised and (len(token) > 1 or int(token) > _LARGEST_EXPONENT or after in (["^"], ["**"])):
                raise _Refused(f"has an exponent that is too large in its unit (above {_LARGEST_EXPONENT})")
            if not raised and not (n == 0 and token == "1" and after == ["/"]):
                raise _Refused("has a second number in its unit")
        elif token[0].isalpha() or token[0] == "_":
            _refuse_unknown(token)
    return text


def _refuse_unknown(name: str) -> None:
    if _is_unit(name):
        return
    squared = re.fullmatch(r"([A-Za-z]+)([23])", name)
    run_together = re.fullmatch(r"(Nm|N|V|A|W|kg)(s|h|m|mm|cm)", name)
    words = _vocabulary()
    if re.fullmatch(r"[mk]?[AV](rms|pk|eff|p|peak)", name):
        raise _Refused(
            f"has the unknown unit {quoted(name)}; rms or peak is said by the key of the basis, not the unit"
        )
    if squared and _is_unit(squared.group(1)):
        near = f"{squared.group(1)}^{squared.group(2)}"
    elif run_together:
        near = "*".join(run_together.groups())
    else:
        by_case = [word for word in words if word.lower() == name.lower()]
        alike = difflib.get_close_matches(name, words, n=1) if len(name) > 1 else []
        near = next(iter(by_case + alike), "")
    raise _Refused(f"has the unknown unit {quoted(name)}" + (f'; did you mean "{near}"?' if near else ""))


@lru_cache(maxsize=4096)
def _is_unit(name: str) -> bool:
    """pint drops a final s as a plural, also of a symbol ("Nms" would be Nm): only words may carry one."""
    found = _registry().parse_unit_name(name)
    if not found or name.startswith("delta_"):
        return False
    prefix, word, _ = found[0]
    plural = name.endswith("s") and found[:1] == _registry().parse_unit_name(name[:-1])[:1]
    return not plural or name[:-1] == prefix + word


@lru_cache(maxsize=1)
def _definitions() -> list[str]:
    return (Path(__file__).parent / "unit_definitions.txt").read_text(encoding="utf-8").splitlines()


@lru_cache(maxsize=1)
def _vocabulary() -> list[str]:
    """Every symbol and word that may be meant by a mistyped one."""
    names = []
    for line in _definitions():
        head, *rest = (part.strip() for part in line.partition("#")[0].split("="))
        if rest and not head.endswith("-"):
            names += [head, *rest[1:]]
    prefixed = "mm,cm,um,km,ms,us,mA,kV,mV,mH,uH,mohm,kohm,uF,nF,kW,MPa,GPa,kN,mNm,kHz,krpm,mrad,urad,mg"
    return [*prefixed.split(","), *(name for name in names if name)]


@lru_cache(maxsize=1)
def _registry() -> Any:
    import pint

    registry: Any = pint.UnitRegistry(None)
    registry.load_definitions([line for line in _definitions() if line.strip() and not line.startswith("#")])
    return registry
