"""Drafts on disk: nothing typed is lost, nothing of another window is overwritten."""

import os
import time
from pathlib import Path

import pytest

from axis.errors import CannotWrite, InputError
from axis.files import drafts
from axis.files.drafts import Draft, Drafts, new_key, plain_name, sections
from tests.sheet.sample import TEXT

KEY = "0a1b2c3d"


def test_a_text_right_or_wrong_comes_back_as_it_was() -> None:
    text = '# µ, Ω and ² stay\n[load]\nmass = "1,5 kg"   # wrong, and kept\nbroken = [\n'
    first = Drafts().write(Draft(KEY, 0, "my axis.toml", ""), text)
    assert first == Draft(KEY, 1, "my axis.toml", text)
    assert Drafts().read(KEY) == first


def test_revisions_count_up() -> None:
    draft = Drafts().write(Draft(KEY, 0, "a.toml", ""), "1")
    for n in range(2, 5):
        draft = Drafts().write(draft, str(n))
        assert (draft.key, draft.revision) == (KEY, n)


def test_an_edit_of_what_has_changed_meanwhile_goes_on_under_another_key() -> None:
    seen = Drafts().write(Draft(KEY, 0, "a.toml", ""), "as both windows see it")
    other = Drafts().write(seen, "changed in the other window")
    fork = Drafts().write(seen, "changed here")
    assert fork.key != KEY
    assert fork.revision == 1
    assert Drafts().read(KEY) == other
    assert Drafts().read(fork.key) == fork


def test_a_writer_waits_for_its_turn_and_then_says_so(drafts_folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    draft = Drafts().write(Draft(KEY, 0, "a.toml", ""), "kept")
    (drafts_folder / f"{KEY}.lock").touch()
    monkeypatch.setattr(drafts, "_PATIENCE", 0.05)
    os.utime(drafts_folder / f"{KEY}.lock", (time.time() + 60, time.time() + 60))
    with pytest.raises(CannotWrite, match="held by another window"):
        Drafts().write(draft, "lost?")
    assert Drafts().read(KEY) == draft


def test_the_lock_of_a_process_that_died_holds_nobody_up(drafts_folder: Path) -> None:
    draft = Drafts().write(Draft(KEY, 0, "a.toml", ""), "1")
    lock = drafts_folder / f"{KEY}.lock"
    lock.touch()
    long_ago = time.time() - 3600.0
    os.utime(lock, (long_ago, long_ago))
    assert Drafts().write(draft, "2").revision == 2
    assert not lock.exists()


def test_a_file_that_is_no_draft_is_refused_and_left_alone(drafts_folder: Path) -> None:
    drafts_folder.mkdir()
    (drafts_folder / f"{KEY}.toml").write_text("[load]\n")
    with pytest.raises(InputError, match="no draft"):
        Drafts().read(KEY)
    with pytest.raises(InputError, match="no draft"):
        Drafts().write(Draft(KEY, 0, "a.toml", ""), "over it")
    assert (drafts_folder / f"{KEY}.toml").read_text() == "[load]\n"


@pytest.mark.parametrize("key", ["", "0a1b2c3", "../../etc", "0A1B2C3D", "0a1b2c3d0"])
def test_only_eight_hex_digits_name_a_draft(key: str) -> None:
    with pytest.raises(InputError, match="no key"):
        Drafts().read(key)


def test_what_cannot_be_kept_is_said(tmp_path: Path) -> None:
    (tmp_path / "file").touch()
    with pytest.raises(CannotWrite):
        Drafts(tmp_path / "file" / "below").write(Draft(KEY, 0, "a.toml", ""), "text")
    with pytest.raises(CannotWrite, match="larger"):
        Drafts().write(Draft(KEY, 0, "a.toml", ""), "#" * 300_000)


def test_the_latest_drafts_come_first(drafts_folder: Path) -> None:
    for n, key in enumerate(["00000001", "00000002", "00000003"]):
        Drafts().write(Draft(key, 0, f"{n}.toml", ""), "")
        os.utime(drafts_folder / f"{key}.toml", (1e9 + n, 1e9 + n))
    (drafts_folder / "notes.toml").write_text("none of ours")
    assert [draft.key for draft in Drafts().recent(2)] == ["00000003", "00000002"]


@pytest.mark.parametrize(
    ("given", "kept"),
    [
        ("axis.toml", "axis.toml"),
        ("../../etc/passwd", "passwd"),
        ("C:\\machine\\x.toml", "x.toml"),
        ("a\nb.toml", "a_b.toml"),
        ("", "axis.toml"),
        ("x" * 200 + ".toml", ("x" * 200 + ".toml")[-60:]),
    ],
)
def test_names_stay_plain(given: str, kept: str) -> None:
    assert plain_name(given) == kept


def test_every_table_with_every_key_it_may_have() -> None:
    found = {section.path: section for section in sections(TEXT)}
    assert list(found)[:4] == ["axis", "load", "load.friction", "motor"]
    assert {"payload[1]", "transmission[1]", "move[2]", "tolerance", "tuning"} <= set(found)
    assert found["transmission[1]"].kind == "ball_screw"
    load = {field.path: field.typed for field in found["load"].fields}
    assert load == {"load.mass": "83.8 lb", "load.inertia": ""}
    tolerance = {field.path: field.typed for field in found["tolerance"].fields}
    assert tolerance["tolerance.friction"] == "0.4"


def test_no_fields_where_the_text_is_no_toml() -> None:
    assert sections("[load\n") == ()
    assert sections("a" * 2000) == ()


def test_keys_differ() -> None:
    assert len({new_key() for _ in range(100)}) == 100
