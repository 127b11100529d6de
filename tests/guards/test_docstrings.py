"""Every public function of floors 2 to 6 that takes floats says their units, its result's unit and its source."""

import re
from pathlib import Path

import pytest

from tests.guards.formulas import (
    dimension,
    float_parameters,
    full_name,
    hints,
    holds_float,
    parameter_units,
    public_functions,
    result_units,
    source_keys,
)

REFERENCES = (Path(__file__).parents[2] / "docs" / "references.md").read_text(encoding="utf-8")
KEYS = set(re.findall(r"^- \*\*([\w-]+)\*\*", REFERENCES, re.MULTILINE))
FUNCTIONS = [function for function in public_functions() if float_parameters(function)]


@pytest.mark.parametrize("function", FUNCTIONS, ids=full_name)
def test_units_and_source_are_told(function):
    stated = parameter_units(function)
    missing = [name for name in float_parameters(function) if name not in stated]
    assert not missing, f"no [unit] for {missing}"
    if holds_float(hints(function)["return"]):
        assert result_units(function), "no [unit] after Returns"
    for unit in (*stated.values(), *result_units(function)):
        for one in re.split(" or |; ", unit):
            dimension(one)
    keys = source_keys(function)
    assert keys, "no Source: [key]"
    assert set(keys) <= KEYS, f"{set(keys) - KEYS} is not in docs/references.md"


def test_there_are_functions_to_look_at():
    assert len(FUNCTIONS) > 60


def test_units_are_read():
    assert dimension("N·m·s/rad") == {"kg": 1, "m": 2, "s": -1, "A": 0, "K": 0}
    assert dimension("1/s⁴") == {"kg": 0, "m": 0, "s": -4, "A": 0, "K": 0}
    assert dimension("kg·m²") == {"kg": 1, "m": 2, "s": 0, "A": 0, "K": 0}
    assert dimension("N·m/W^0.5") == {"kg": 0.5, "m": 1, "s": -0.5, "A": 0, "K": 0}
    assert dimension("V/A")["A"] == -2
    with pytest.raises(KeyError):
        dimension("rpm")
