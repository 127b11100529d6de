"""Python examples of the documentation run, and their numbers hold; links lead somewhere; references are used."""

import ast
import doctest
import re
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
PAGES = sorted((ROOT / "docs").glob("*.md"))
WITH_EXAMPLES = [page for page in PAGES if ">>>" in page.read_text(encoding="utf-8")]
REFERENCES = (ROOT / "docs" / "references.md").read_text(encoding="utf-8")
KEYS = set(re.findall(r"^- \*\*([\w-]+)\*\*", REFERENCES, re.MULTILINE))

NUMBER = re.compile(r"(?<![\w.])-?\d+(?:\.\d*)?(?:e[-+]?\d+)?(?![\w.])")


def unit_of_last_digit(text):
    """One in the last written place of a number; a whole number is exact."""
    mantissa, _, exponent = text.partition("e")
    _, point, decimals = mantissa.partition(".")
    return 10.0 ** (int(exponent or 0) - len(decimals)) if point else 0.0


class NumbersCompared(doctest.OutputChecker):
    """Everything between the numbers is equal; each number agrees to the last digit that the page prints."""

    def check_output(self, want, got, optionflags):
        if NUMBER.split(want.strip()) != NUMBER.split(got.strip()):
            return super().check_output(want, got, optionflags)
        pairs = zip(NUMBER.findall(want), NUMBER.findall(got), strict=True)
        return all(abs(float(a) - float(b)) <= unit_of_last_digit(a) for a, b in pairs)


def failures(text, name):
    """What the examples of a text print against their word."""
    test = doctest.DocTestParser().get_doctest(text, {}, name, name, 0)
    told = []
    doctest.DocTestRunner(checker=NumbersCompared()).run(test, out=told.append)
    return "".join(told)


def blocks(text, language):
    """The fenced blocks of one language."""
    return re.findall(rf"^```{language}\n(.*?)^```", text, re.MULTILINE | re.DOTALL)


@pytest.mark.parametrize("page", WITH_EXAMPLES, ids=lambda page: page.name)
def test_examples(page, tmp_path, monkeypatch):
    """Run where the page's axis file stands under the name that its first line gives it."""
    text = page.read_text(encoding="utf-8")
    for block in blocks(text, "toml"):
        named = re.match(r"# (\w+\.toml)", block)
        if named:
            (tmp_path / named[1]).write_text(block, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    assert not failures(text, page.name)


def test_the_examples_bite():
    assert not failures(">>> 1.23456, 'a'\n(1.235, 'a')\n", "right")
    assert failures(">>> 1.23456, 'a'\n(1.238, 'a')\n", "number")
    assert failures(">>> 1.23456, 'a'\n(1.235, 'b')\n", "word")
    assert failures(">>> 7\n8\n", "count")


def test_there_are_examples():
    assert {page.name for page in WITH_EXAMPLES} >= {"model.md", "tutorial.md"}


def anchor(heading):
    """How a heading is named in a link."""
    return re.sub(r"[^\w\- ]", "", heading.lower()).replace(" ", "-")


@pytest.mark.parametrize("page", [*PAGES, ROOT / "README.md", ROOT / "DEVELOPERS.md"], ids=lambda page: page.name)
def test_links_lead_somewhere(page):
    text = page.read_text(encoding="utf-8")
    for target in re.findall(r"\]\(([^)\s]+)\)", text):
        if target.startswith(("http:", "https:")):
            continue
        file, _, place = target.partition("#")
        there = page.parent / file if file else page
        assert there.exists(), f"{target} of {page.name}"
        if place:
            headings = re.findall(r"^#+ (.+)$", there.read_text(encoding="utf-8"), re.MULTILINE)
            assert place in map(anchor, headings), f"{target} of {page.name}"


def test_named_sources_exist():
    """Every path of this project that a page names in code marks."""
    for page in PAGES:
        for path in re.findall(r"`((?:axis|tests|docs|catalog_demo)/[\w/.]*)`", page.read_text(encoding="utf-8")):
            assert (ROOT / path).exists(), f"{path} in {page.name}"


def test_named_modules_exist():
    """The table of modules on the page of the house."""
    page = (ROOT / "docs" / "architecture.md").read_text(encoding="utf-8")
    table = re.findall(r"^\| `(\w+)/` \| ([^|]*) \|$", page, re.MULTILINE)
    assert len(table) > 10
    for room, cell in table:
        for name in re.findall(r"`(\w+(?:\.py|/))`", cell):
            assert (ROOT / "axis" / room / name).exists(), f"{room}/{name}"


def docstrings():
    """All docstrings of the library."""
    for path in sorted((ROOT / "axis").rglob("*.py")):
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.Module | ast.ClassDef | ast.FunctionDef):
                yield path, ast.get_docstring(node) or ""


def keys_in(text):
    """The references that a text names in square brackets."""
    return set(re.findall(r"\[([a-z][\w-]*)\](?!\()", text)) & (KEYS | {"?"})


def test_sources_of_docstrings_are_references():
    for path, text in docstrings():
        for line in re.findall(r"Source: (.*)", text):
            for key in re.findall(r"\[([\w-]+)\]", line):
                assert key in KEYS, f"[{key}] of {path.name} is not in docs/references.md"


def test_every_reference_is_used():
    used = set().union(*(keys_in(text) for _, text in docstrings()))
    used |= keys_in((ROOT / "docs" / "model.md").read_text(encoding="utf-8"))
    assert used >= KEYS


def test_model_names_only_references():
    """What stands alone in square brackets and is no unit is a key."""
    text = (ROOT / "docs" / "model.md").read_text(encoding="utf-8")
    for key in re.findall(r"\[([a-z]{4,}\d{0,4})\](?!\()", text):
        assert key in KEYS, key
