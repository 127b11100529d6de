"""Runs `settlepoint` as a user does: in a process of its own."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).parents[2]
DATA = ROOT / "tests" / "data"
RAM = DATA / "ram_si.toml"  # carries [loops]; its first move fails, its second passes
DEMO = ROOT / "catalog_demo" / "carriage.toml"
WATCHDOG = 300  # [s] ends a test that hangs; no answer is measured against it

ENVIRONMENT = os.environ | {"PYTHONPATH": str(ROOT), "PYTHONIOENCODING": "utf-8"}


def settlepoint(*arguments: str | Path, folder: Path | None = None, **more: str) -> subprocess.CompletedProcess[str]:
    """The finished process; `more` are environment variables."""
    return subprocess.run(
        [sys.executable, "-m", "axis", *map(str, arguments)],
        cwd=folder,
        env=ENVIRONMENT | more,
        capture_output=True,
        encoding=(ENVIRONMENT | more)["PYTHONIOENCODING"],
        timeout=WATCHDOG,
        check=False,
    )


def changed(text: str, *changes: tuple[str, str]) -> str:
    """A text with each passage replaced once; every one of them must be there."""
    for old, new in changes:
        assert old in text, old
        text = text.replace(old, new, 1)
    return text
