"""Every published or independently computed table beside this file, read by one loop.

A table is a CSV file under a header of `# key: value` lines: `function` (dotted, of the project or of `adapters`),
`source`, `provenance` (FOUND in a public text, MEMORY, COMPUTED and how) and `digits`, the bar: so many significant
digits of every expected value must agree. Columns are the function's arguments with their unit; those that begin with
"=" are expected results, named where the function returns several.
"""

import csv
import importlib
import math
import re
from pathlib import Path

import pytest

from axis.units import convert

FOLDER = Path(__file__).parent
TABLES = sorted(FOLDER.glob("*.csv"))
HEADER = ("function", "source", "provenance", "digits")


def read(path):
    """Header and rows of a table."""
    lines = path.read_text(encoding="utf-8").splitlines()
    header = dict(line[2:].split(": ", 1) for line in lines if line.startswith("# "))
    return header, list(csv.DictReader(line for line in lines if not line.startswith("#")))


def split_column(column):
    """`speed [rpm]` to name and unit."""
    name, unit = re.fullmatch(r"([^\[\]]*?)\s*(?:\[(.+)\])?", column).groups()
    return name.removeprefix("=").strip(), unit


def to_si(text, unit):
    """A cell as an SI float; words stay words."""
    try:
        value = float(text)
    except ValueError:
        return text
    if unit is None:
        return value
    zero = convert(0.0, unit)
    return (value - zero) / (convert(1.0, unit) - zero)


def digits_agreeing(got, expected):
    """How many significant digits two numbers share; beside an expected zero, decimals of the number itself."""
    error = abs(got - expected) / (abs(expected) or 1.0)
    return math.inf if error == 0.0 else -math.log10(error)


@pytest.mark.parametrize("path", TABLES, ids=lambda path: path.stem)
def test_table(path):
    header, rows = read(path)
    assert set(HEADER) <= set(header), f"{path.name}: the header lacks {set(HEADER) - set(header)}"
    module, name = header["function"].rsplit(".", 1)
    function = getattr(importlib.import_module(module), name)
    assert rows
    for number, row in enumerate(rows, start=1):
        cells = {column: to_si(text, split_column(column)[1]) for column, text in row.items()}
        got = function(**{split_column(c)[0]: value for c, value in cells.items() if not c.startswith("=")})
        for column, expected in cells.items():
            if column.startswith("="):
                result = split_column(column)[0]
                value = got[result] if result else got
                agreeing = digits_agreeing(value, expected)
                assert agreeing >= float(header["digits"]), (
                    f"{path.name}, row {number}, {column}: {value!r} instead of {expected!r}, {agreeing:.1f} digits"
                )


def test_a_wrong_digit_is_seen():
    """The loop itself: one unit in the last digit counted must miss the bar."""
    assert digits_agreeing(1.0001, 1.0) < 4.01
    assert digits_agreeing(1.0 + 1e-13, 1.0) > 12
    assert to_si("2000", "rpm") == pytest.approx(2000 * math.pi / 30, rel=1e-14)
    assert to_si("20", "degC") == pytest.approx(293.15, rel=1e-14)
