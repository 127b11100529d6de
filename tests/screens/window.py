"""One window of the screens for tests: what an engineer does in it, and what he reads there."""

from __future__ import annotations

import html
import re
from pathlib import Path
from typing import Any

from streamlit.testing.v1 import AppTest

from axis.files.drafts import Draft, Drafts, new_key
from axis.files.write import with_loops
from axis.screens.desk import board
from axis.screens.jobs import Results
from tests.sheet.sample import LOOPS, TEXT

ROOT = Path(__file__).resolve().parents[2]
PAGES = ROOT / "axis" / "screens" / "app_pages"
WITH_LOOPS = with_loops(TEXT, LOOPS, False)  # the sample axis of the sheet's tests under its settings


class Window:
    """A browser window, or a reload of one when `key` is given."""

    def __init__(self, key: str | None = None) -> None:
        self.at = AppTest.from_file(str(ROOT / "app.py"), default_timeout=60)
        if key is not None:
            self.at.query_params["axis"] = key
        self.run()

    @classmethod
    def on(cls, text: str) -> Window:
        """A window in which an axis file was opened before."""
        key = new_key()
        Drafts().write(Draft(key, 0, "sample.toml", ""), text)
        return cls(key)

    def run(self) -> Window:
        self.at.run()
        assert not self.at.exception, self.at.exception
        return self

    def page(self, name: str) -> Window:
        self.at.switch_page(str(PAGES / f"{name}.py"))
        return self.run()

    def part(self, name: str) -> Window:
        """Another part of the axis."""
        self.at.session_state["part"] = name
        return self.run()

    def type(self, path: str, typed: str) -> Window:
        self.at.text_input(key=f"field {path}").set_value(typed)
        return self.run()

    def field(self, path: str) -> str:
        return str(self.at.text_input(key=f"field {path}").value)

    def press(self, key: str) -> Window:
        self.at.button(key=key).click()
        return self.run()

    @property
    def key(self) -> str:
        key = self.at.query_params["axis"]
        assert isinstance(key, str)
        return key

    @property
    def draft(self) -> Draft:
        """What lies on disk."""
        found = Drafts().read(self.key)
        assert found is not None
        return found

    @property
    def results(self) -> Results:
        return board().of(self.key)

    @property
    def html(self) -> str:
        """The pieces of HTML of the page, the style sheet left out."""
        pieces: list[Any] = [element.proto.body for element in self.at.get("html")]
        return "\n".join(piece for piece in pieces if "<style>" not in piece)

    @property
    def words(self) -> str:
        """What is read on the page outside of fields and buttons."""
        return re.sub(r"\s+", " ", html.unescape(re.sub(r"<[^>]*>", " ", self.html)))
