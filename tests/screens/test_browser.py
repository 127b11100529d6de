"""The screens in a real browser: navigation, edits, two tabs, downloads, nothing asked of the outside.

Skipped where no Chromium is installed; SETTLEPOINT_BROWSER=required makes that a failure.
"""

from __future__ import annotations

import os
import shutil
import subprocess
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import pytest

from axis.files.drafts import Draft, Drafts, new_key
from axis.screens.launch import HOST, answers, command, environment, free_port
from tests.sheet.sample import TEXT

pytestmark = pytest.mark.browser

NAMES = ("chromium", "chromium-browser", "google-chrome", "chrome")
WAIT = 30_000.0  # [ms] a watchdog
PRESS = 80.0  # [ms] between button down and up, as a hand does it


@dataclass
class Server:
    """The running screens, and where they keep their drafts."""

    address: str
    drafts: Path

    def opened(self, text: str = TEXT) -> str:
        """The address of a draft."""
        key = new_key()
        Drafts(self.drafts).write(Draft(key, 0, "sample.toml", ""), text)
        return f"{self.address}/?axis={key}"


@pytest.fixture(scope="module")
def server(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Server]:
    drafts = tmp_path_factory.mktemp("drafts")
    port = free_port(None)
    surroundings = {**environment(), "SETTLEPOINT_DRAFTS": str(drafts)}
    process = subprocess.Popen(
        command(port), env=surroundings, cwd=drafts, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL
    )
    try:
        assert answers(process, port)
        yield Server(f"http://{HOST}:{port}", drafts)
    finally:
        process.terminate()
        process.wait(20.0)


@pytest.fixture(scope="module")
def chromium() -> Iterator[Any]:
    path = next((found for name in NAMES if (found := shutil.which(name))), None)
    if path is None:
        if os.environ.get("SETTLEPOINT_BROWSER") == "required":
            pytest.fail("no Chromium is installed, and SETTLEPOINT_BROWSER=required")
        pytest.skip("no Chromium is installed")
    from playwright.sync_api import sync_playwright

    with sync_playwright() as playwright:
        browser = playwright.chromium.launch(executable_path=path, args=["--no-sandbox"])
        yield browser
        browser.close()


@pytest.fixture
def context(chromium: Any) -> Iterator[Any]:
    context = chromium.new_context(viewport={"width": 1280, "height": 900}, accept_downloads=True)
    context.set_default_timeout(WAIT)
    yield context
    context.close()


def field(page: Any, path: str) -> Any:
    return page.locator(f'input[aria-label*="({path})"]')


def holds(page: Any, path: str, typed: str) -> None:
    from playwright.sync_api import expect

    expect(field(page, path)).to_have_value(typed, timeout=WAIT)


def type_value(page: Any, path: str, typed: str, expected: str) -> None:
    field(page, path).fill(typed)
    field(page, path).press("Enter")
    page.get_by_text(expected).first.wait_for()


def go(page: Any, step: str, expected: str) -> None:
    page.get_by_test_id("stTopNavLink").filter(has_text=step).click(delay=PRESS)
    page.get_by_text(expected).first.wait_for()


def test_steps_edits_reload_and_the_way_back(server: Server, context: Any) -> None:
    page = context.new_page()
    page.goto(server.opened())
    field(page, "load.mass").wait_for()
    type_value(page, "load.mass", "1,5 kg", "has a decimal comma")
    page.get_by_test_id("stTopNavLink").filter(has_text="1 to mend").wait_for()
    go(page, "Sizing", "Does it fit?")
    go(page, "Axis", "has a decimal comma")
    holds(page, "load.mass", "1,5 kg")
    page.reload()
    page.get_by_text("has a decimal comma").first.wait_for()
    holds(page, "load.mass", "1,5 kg")
    type_value(page, "load.mass", "90 lb", "typed 90 lb")
    go(page, "Sizing", "Motor peak torque")
    page.go_back()
    page.get_by_text("typed 90 lb").first.wait_for()
    holds(page, "load.mass", "90 lb")


def test_a_check_opens_by_the_keyboard_alone(server: Server, context: Any) -> None:
    page = context.new_page()
    page.goto(server.opened())
    field(page, "load.mass").wait_for()
    go(page, "Sizing", "Motor peak torque")
    line = page.locator("details.sp-check").first
    assert not line.evaluate("one => one.open")
    line.locator("summary").focus()
    page.keyboard.press("Enter")
    line.get_by_text("rule", exact=True).wait_for()
    assert line.evaluate("one => one.open")


def test_two_tabs_on_one_draft_part_and_neither_loses_anything(server: Server, context: Any) -> None:
    first, second = context.new_page(), context.new_page()
    address = server.opened()
    for page in (first, second):
        page.goto(address)
        field(page, "load.mass").wait_for()
    type_value(first, "load.mass", "40 kg", "Antiresonance")
    first.get_by_text("40 kg").first.wait_for()
    type_value(second, "load.friction.coulomb", "25 N", "as a copy of its own")
    assert second.url.partition("axis=")[2] != first.url.partition("axis=")[2]
    holds(second, "load.mass", "83.8 lb")
    first.reload()
    field(first, "load.mass").wait_for()
    holds(first, "load.mass", "40 kg")
    holds(first, "load.friction.coulomb", "22 N")


def test_sheet_and_axis_file_come_down(server: Server, context: Any, tmp_path: Path) -> None:
    page = context.new_page()
    page.goto(server.opened())
    field(page, "load.mass").wait_for()
    go(page, "Sheet", "What do I take along?")
    for label, start in (
        ("Settings sheet, PDF", b"%PDF-"),
        ("Settings sheet, JSON", b"{"),
        ("Axis file, TOML", b"\nfo"),
    ):
        with page.expect_download() as coming:
            page.get_by_role("button", name=label).click(delay=PRESS)
        kept = tmp_path / coming.value.suggested_filename
        coming.value.save_as(kept)
        assert kept.read_bytes().startswith(start), label
    assert (tmp_path / "sample.toml").read_text() == TEXT
    assert (tmp_path / "sample-settings.pdf").exists()


def test_nothing_is_asked_of_the_outside(server: Server, context: Any) -> None:
    asked: list[str] = []
    page = context.new_page()
    page.on("request", lambda request: asked.append(request.url))
    page.goto(server.address)
    page.get_by_text("A shipped axis").wait_for()
    page.get_by_role("button", name="Start from the template").click(delay=PRESS)
    field(page, "load.mass").wait_for()
    for step, expected in (
        ("Sizing", "Does it fit?"),
        ("Settling", "Does it settle?"),
        ("Sheet", "What do I take along?"),
    ):
        go(page, step, expected)
    assert asked
    own = (f"{server.address}/", server.address.replace("http", "ws") + "/", "data:", "blob:")
    assert [url for url in asked if not url.startswith(own)] == []


@pytest.mark.parametrize("scheme", ["light", "dark"])
def test_words_stand_out_from_the_ground_in_both_schemes(server: Server, chromium: Any, scheme: str) -> None:
    context = chromium.new_context(viewport={"width": 1280, "height": 900}, color_scheme=scheme)
    context.set_default_timeout(WAIT)
    page = context.new_page()
    page.goto(server.opened())
    field(page, "load.mass").wait_for()
    go(page, "Sizing", "Motor peak torque")
    for place in (".sp-head h1", ".sp-verdict", ".sp-check summary span"):
        ratio = page.locator(place).first.evaluate(CONTRAST)
        assert ratio >= 4.5, f"{place} in {scheme}: WCAG 2 asks 4.5 for text of this size"
    assert page.evaluate("document.documentElement.scrollWidth <= window.innerWidth"), "no sideways scrolling at 1280"
    context.close()


# Contrast after WCAG 2, of a text against the nearest ground that is painted behind it.
CONTRAST = """one => {
  const rgb = text => text.match(/[\\d.]+/g).map(Number);
  const light = colour => { const [r, g, b] = rgb(colour).map(v => v / 255).map(
    v => v <= 0.04045 ? v / 12.92 : ((v + 0.055) / 1.055) ** 2.4); return 0.2126 * r + 0.7152 * g + 0.0722 * b; };
  let ground = one;
  const painted = at => { const c = rgb(getComputedStyle(at).backgroundColor); return c.length < 4 || c[3] > 0; };
  while (ground.parentElement && !painted(ground)) ground = ground.parentElement;
  const [a, b] = [light(getComputedStyle(one).color), light(getComputedStyle(ground).backgroundColor)];
  return (Math.max(a, b) + 0.05) / (Math.min(a, b) + 0.05);
}"""
