"""The committed glossary says what the declarations say."""

import dataclasses
import inspect
from importlib import import_module
from pkgutil import iter_modules

import axis.description
from axis.units import declarations
from tests.docs.glossary import PAGE, page, tables


def test_page_is_what_the_declarations_say():
    assert PAGE.read_text(encoding="utf-8") == page(), "run python -m tests.docs.glossary"


def test_every_declared_class_has_its_table():
    shown = {cls for _, cls in tables()}
    for module in iter_modules(axis.description.__path__, "axis.description."):
        for cls in vars(import_module(module.name)).values():
            if inspect.isclass(cls) and dataclasses.is_dataclass(cls) and declarations(cls):
                assert cls in shown, cls
