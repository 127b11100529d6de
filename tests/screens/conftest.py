"""Every test of the screens keeps its drafts in a folder of its own."""

from pathlib import Path

import pytest


@pytest.fixture(autouse=True)
def drafts_folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    folder = tmp_path / "drafts"
    monkeypatch.setenv("SETTLEPOINT_DRAFTS", str(folder))
    return folder
