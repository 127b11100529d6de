"""The page of the axis: opens, takes values as text, says what is wrong by name, loses nothing."""

import pytest

from axis.files.axis_file import read_text
from axis.files.template import template
from axis.study import load
from tests.screens.window import ROOT, WITH_LOOPS, Window
from tests.sheet.sample import TEXT


def test_every_shipped_axis_opens_and_is_understood() -> None:
    shipped = sorted((ROOT / "catalog_demo").glob("*.toml"))
    assert shipped
    for path in shipped:
        window = Window().press(f"open {path.name}")
        assert load(path).document.axis.head.name in window.words
        assert "understood" in window.words
        assert window.draft.text == path.read_text()


def test_the_template_opens() -> None:
    window = Window().press("open template")
    assert window.draft.text == template()
    assert "understood" in window.words


@pytest.mark.parametrize(
    ("path", "typed", "said"),
    [
        ("load.mass", "12 m", 'load.mass: "12 m" has the dimension length; wanted mass'),
        ("load.mass", "1,5 kg", 'load.mass: "1,5 kg" has a decimal comma; write a point, for example "1.5 kg"'),
        ("load.mass", "-3 kg", "load.mass: "),
        ("load.mass", "nan kg", "does not start with a plain number"),
        ("load.mass", "10**10**10 kg", "load.mass: "),
        ("load.mass", "38", "load.mass: "),
        ("load.mass", "38 kgg", 'did you mean "kg"'),
        ("move[1].speed", "0.6 m", "move[1].speed: "),
        ("window.position", "0 um", "window.position: "),
    ],
)
def test_a_wrong_value_is_told_by_its_name_and_kept(path: str, typed: str, said: str) -> None:
    window = Window.on(TEXT).type(path, typed)
    assert said in window.words
    assert window.field(path) == typed
    assert typed in window.draft.text
    assert "cannot be computed" in window.words


def test_all_wrong_values_are_told_at_once_and_mended_one_by_one() -> None:
    window = Window.on(TEXT).type("load.mass", "1,5 kg").type("move[2].speed", "fast")
    assert window.words.count("load.mass: ") >= 1
    assert window.words.count("move[2].speed: ") >= 1
    window.type("load.mass", "1.5 kg")
    assert "load.mass: " not in window.words
    assert "move[2].speed: " in window.words
    window.type("move[2].speed", "24 in/s")
    assert "understood" in window.words
    # 1 in = 25.4 mm by definition
    assert read_text(window.draft.text).axis.moves[1].speed == pytest.approx(24 * 0.0254, rel=1e-12)


def test_two_values_that_need_each_other_can_be_changed_in_turn() -> None:
    window = Window.on(TEXT).type("load.friction.coulomb", "40 N")
    assert "load.friction.breakaway: " in window.words
    window.type("load.friction.breakaway", "50 N")
    assert "understood" in window.words


def test_a_value_echoes_as_typed_and_as_used_and_what_is_assumed_looks_different() -> None:
    window = Window.on(TEXT)
    assert '<span class="sp-tag stated">stated</span><b>38 kg</b> <small>typed 83.8 lb</small>' in window.html
    assert '<span class="sp-tag assumed">assumed</span>' in window.html
    window.type("window.settle_within", "").type("window.settle_within", "0.045 s")
    assert "typed 0.045 s" in window.words


def test_an_emptied_field_takes_the_key_out_of_the_file() -> None:
    window = Window.on(TEXT).type("window.following_error", "")
    assert "following_error" not in window.draft.text
    assert read_text(window.draft.text).axis.window.following_error is None


def test_a_value_may_be_typed_with_the_quotes_of_the_examples() -> None:
    window = Window.on(TEXT).type("load.mass", '"40 kg"')
    assert read_text(window.draft.text).axis.load.mass == 40.0


def test_a_change_keeps_comments_and_order() -> None:
    window = Window.on("# mine\n" + TEXT).type("load.mass", "40 kg")
    assert window.draft.text == "# mine\n" + TEXT.replace("83.8 lb", "40 kg")


def test_a_value_of_a_catalogue_says_so_and_may_be_overridden() -> None:
    window = Window().press("open carriage.toml").part("Motor")
    assert "motors.csv: " in window.words
    window.type("motor.rated_torque", "2.0 N*m")
    assert "understood" in window.words
    assert read_text(window.draft.text).axis.motor.rated_torque == 2.0


def test_words_of_a_file_are_never_drawn_as_anything_else() -> None:
    name = "<script>alert(1)</script> *not italic* $x$"
    window = Window.on(TEXT.replace("Sample axis (invented)", name))
    assert "<script>" not in window.html
    assert name in window.words
    window.type("load.mass", "<b>1 kg</b>")
    assert "<b>1 kg" not in window.html


def test_a_broken_file_opens_as_text_and_can_be_mended_there() -> None:
    window = Window.on(TEXT.replace("[load]", "[load"))
    assert "is not TOML" in window.words
    area = window.at.text_area(key="whole text")
    assert area.value == TEXT.replace("[load]", "[load")
    area.set_value(TEXT)
    window.run()
    assert window.draft.text == TEXT
    assert "understood" in window.words


def test_an_unknown_key_is_told_with_the_nearest() -> None:
    window = Window.on(TEXT.replace('mass = "83.8 lb"', 'mas = "83.8 lb"'))
    assert 'load.mas: "83.8 lb" stands under an unknown key; did you mean "mass"?' in window.words


def test_an_uploaded_file_opens_and_the_axis_before_stays_in_its_draft() -> None:
    window = Window.on(TEXT)
    before = window.key
    window.at.file_uploader(key="upload").upload("other.toml", WITH_LOOPS.encode(), "application/toml")
    window.run()
    assert window.key != before
    assert window.draft.text == WITH_LOOPS
    assert window.draft.name == "other.toml"
    assert Window(before).draft.text == TEXT


@pytest.mark.parametrize(
    ("data", "said"),
    [
        (b"\xff\xfe\x00\x01", "is not UTF-8 text"),
        (b"#" * 400_000, "is larger than"),
        (b"a." * 10_000 + b"a = 1\n", "is longer than 1000 characters"),
    ],
)
def test_an_upload_that_is_no_axis_file_leaves_the_open_axis_open(data: bytes, said: str) -> None:
    window = Window.on(TEXT)
    window.at.file_uploader(key="upload").upload("odd.toml", data, "application/toml")
    window.run()
    assert said in window.words
    assert "stays open" in window.words
    assert window.draft.text == TEXT


def test_values_stay_over_pages_and_reload() -> None:
    window = Window.on(TEXT).type("load.mass", "1,5 kg").page("sizing").page("take_along").page("describe")
    assert window.field("load.mass") == "1,5 kg"
    again = Window(window.key)
    assert again.field("load.mass") == "1,5 kg"
    assert "has a decimal comma" in again.words


def test_two_windows_are_two_axes() -> None:
    one, two = Window().press("open template"), Window().press("open template")
    assert one.key != two.key
    one.type("load.mass", "40 kg")
    assert two.run().field("load.mass") == "38 kg"


def test_a_duplicated_tab_that_edits_what_has_changed_goes_on_as_a_copy() -> None:
    one = Window.on(TEXT)
    two = Window(one.key)
    one.type("load.mass", "40 kg")
    two.type("load.friction.coulomb", "25 N")
    assert two.key != one.key
    assert "as a copy of its own" in two.words
    assert two.field("load.mass") == "83.8 lb"
    assert two.field("load.friction.coulomb") == "25 N"
    assert one.run().field("load.mass") == "40 kg"
    assert one.field("load.friction.coulomb") == "22 N"
    assert "as a copy of its own" not in two.run().words


@pytest.mark.parametrize("key", ["nonsense", "0a1b2c3d", "../../etc"])
def test_an_address_without_a_draft_starts_empty(key: str) -> None:
    window = Window(key)
    assert "Nothing is open" in window.words
    assert len(window.key) == 8


def test_an_edit_that_cannot_be_kept_on_disk_stays_on_the_screen(monkeypatch: pytest.MonkeyPatch) -> None:
    window = Window.on(TEXT)
    monkeypatch.setenv("SETTLEPOINT_DRAFTS", str(ROOT / "app.py" / "no folder"))
    window.type("load.mass", "40 kg")
    assert window.field("load.mass") == "40 kg"
    assert "could not be kept on disk" in window.words
