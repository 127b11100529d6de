"""The printed sheet: two pages, everything on it, names only ever text, the same bytes again."""

from __future__ import annotations

import hashlib
import io
import subprocess
import sys
from dataclasses import replace
from functools import cache
from pathlib import Path

import pypdf
import pytest

from axis.errors import InputError
from axis.plots.tail import tail
from axis.sheet.pdf import pdf, typeset
from axis.sheet.render import ENDINGS, render
from axis.sheet.rows import PRELIMINARY, margin_rows, move_rows
from axis.sheet.settings import setting_rows
from axis.study import Study, check, opened
from tests.sheet.sample import NEVER, document, settled, study, trace

STUDY = study()

AGAIN = """
import hashlib, sys
from tests.sheet.test_pdf import STUDY, made
print(hashlib.sha256(made(STUDY)).hexdigest(), "matplotlib.pyplot" in sys.modules)
"""


def made(shown: Study, date: str | None = None) -> bytes:
    """The sheet of a hand-made study, tails included."""
    assert shown.settled is not None
    figures = [tail(shown.axis, move, trace(amplitude=120e-6), trace()) for move in shown.settled.moves]
    return typeset(shown, figures, date)


def text_of(data: bytes) -> str:
    """All text of a PDF, without the white space that typesetting puts where it likes."""
    return _plain("".join(page.extract_text() for page in pypdf.PdfReader(io.BytesIO(data)).pages))


def _plain(text: str) -> str:
    return "".join(text.replace("\u200b", "").split())


@cache
def _sheet() -> str:
    return text_of(made(STUDY))


def test_two_a4_pages() -> None:
    reader = pypdf.PdfReader(io.BytesIO(made(STUDY)))
    assert len(reader.pages) == 2
    for number, page in enumerate(reader.pages, start=1):
        width, height = (float(side) * 25.4 / 72.0 for side in page.mediabox[2:])
        assert (width, height) == pytest.approx((210.0, 297.0), abs=0.1)
        told = page.extract_text()
        assert f"page {number} of 2" in told
        assert PRELIMINARY in told


def test_a_sheet_that_fails_stays_on_two_pages() -> None:
    bad = replace(STUDY, settled=settled(STUDY.axis, NEVER))
    data = made(bad)
    assert len(pypdf.PdfReader(io.BytesIO(data)).pages) == 2
    told = text_of(data)
    assert _plain("still outside at the end") in told
    assert "fails" in told
    assert "remedy:" in told


def test_name_verdict_and_every_setting_stand_on_it() -> None:
    told = _sheet()
    assert _plain("Sample axis (invented)") in told
    assert _plain("not evaluated") in told
    for row in setting_rows(STUDY):
        assert _plain(row.name) in told, row
        assert _plain(row.text) in told, row
        assert _plain(row.origin) in told, row


def test_moves_margins_assumptions_and_cautions_stand_on_it() -> None:
    told = _sheet()
    for move in move_rows(STUDY):
        assert _plain(move.title) in told
        for figure in move.figures:
            assert _plain(figure.worst) in told
    for margin in margin_rows(STUDY):
        assert _plain(margin.found) in told
    assert _plain("assumed, nobody stated it") in told
    assert _plain("83.8 lb → 38 kg") in told
    assert "ISO13850" in told
    assert _plain("no guarantee") in told
    # The words of the pictures are text too.
    assert _plain("load settled, worst: 31.2 ms") in told
    assert _plain("window ±25 µm") in told


def test_same_bytes_twice_and_in_another_process() -> None:
    first = made(STUDY)
    assert first == made(study())
    root = Path(__file__).resolve().parents[2]
    ran = subprocess.run([sys.executable, "-c", AGAIN], cwd=root, capture_output=True, text=True, check=True)
    digest, drawn_with_state = ran.stdout.split()
    assert digest == hashlib.sha256(first).hexdigest()
    assert drawn_with_state == "False"


def test_a_date_is_printed_only_when_given() -> None:
    assert "2031-02-03" in text_of(made(STUDY, "2031-02-03"))
    assert "2031" not in _sheet()


HOSTILE = [
    ('#read("/etc/passwd")', "*bold* _italic_ `raw` $x^2$ = head"),
    ('#import "@preview/x:1.0.0": *', "<script>alert(1)</script> &amp; %s {0}"),
    ("]#pagebreak()[ ) ] } #sys.inputs #panic() \\u{41} // comment", "µ Ω → ≤ ² é ß Ж"),
]


@pytest.mark.parametrize(("name", "payload"), HOSTILE)
def test_hostile_names_are_only_text(name: str, payload: str) -> None:
    data = made(study(name, payload))
    told = text_of(data)
    assert _plain(name) in told
    assert _plain(payload) in told
    assert b"root:x:0" not in data
    assert len(pypdf.PdfReader(io.BytesIO(data)).pages) == 2


@pytest.mark.parametrize("name", ["W" * 120, "long words and more of them " * 4])
def test_a_long_name_breaks_across_lines(name: str) -> None:
    reader = pypdf.PdfReader(io.BytesIO(made(study(name.strip()))))
    assert len(reader.pages) == 2
    right = []

    def note(text: str, _cm: object, tm: list[float], _font: object, size: float) -> None:
        if "W" * 8 in text:
            right.append(tm[4])

    reader.pages[0].extract_text(visitor_text=note)
    assert all(place < 560.0 for place in right)  # A4 is 595 points wide
    assert _plain(name) in _plain("".join(page.extract_text() for page in reader.pages))


def test_a_study_without_settings_is_one_that_says_so() -> None:
    open_ = check(opened(document(loops=None)))
    told = text_of(pdf(open_))
    assert _plain("not evaluated") in told
    assert _plain("settlepoint tune") in told
    assert _plain("What to set") not in told


def test_the_ending_chooses_and_an_unknown_one_names_both() -> None:
    assert ENDINGS == (".pdf", ".json")
    open_ = check(opened(document(loops=None)))
    assert render(open_, ".pdf").startswith(b"%PDF")
    assert render(open_, ".json").startswith(b"{")
    with pytest.raises(InputError, match=r"\.pdf or \.json"):
        render(open_, ".docx")
