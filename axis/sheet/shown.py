"""Numbers as the sheet and the screens print them: three significant digits, the unit of the field's declaration."""

from __future__ import annotations

import math
from importlib.metadata import PackageNotFoundError, version

from axis.description.motor import Motor
from axis.description.moves import Window
from axis.units import Quantity, declarations, digits_of, pretty, show
from axis.verdicts import Check, Verdict

NOTHING = "–"
WORDS: dict[Verdict, str] = {
    "pass": "passes",
    "fail": "fails",
    "not evaluated": "not evaluated",
    "not applicable": "not applicable",
}
# A word and a shape for every verdict; colour comes on top and never alone.
SHAPES: dict[Verdict, str] = {"pass": "●", "fail": "▲", "not evaluated": "□", "not applicable": "·"}


def declared(holder: type, name: str) -> Quantity:
    """The declaration of a physical field."""
    found = declarations(holder)[name]
    assert isinstance(found, Quantity)
    return found


# The field whose shown unit a check's demand and limit are printed in, by the check's id without its move.
_LIKE: dict[str, tuple[type, str]] = {
    "settling": (Window, "settle_within"),
    "signal": (Window, "time"),
    "following_error": (Window, "following_error"),
    "overshoot": (Window, "max_overshoot"),
    "rest_band": (Window, "position"),
}
_LIKE_UNIT: dict[str, tuple[type, str]] = {"rad/s": (Motor, "max_speed"), "K": (Motor, "max_winding_temperature")}


def quantity_text(value: float | None, holder: type, name: str, rotary: bool = False, digits: int = 3) -> str:
    """A value in the shown unit of a field; a dash where there is none."""
    if value is None or not math.isfinite(value):
        return NOTHING
    return show(value, declared(holder, name), rotary, digits)


def in_unit(value: float | None, unit: str, digits: int = 3) -> str:
    """A value that is already in `unit`."""
    if value is None or not math.isfinite(value):
        return NOTHING
    return f"{digits_of(value, digits)} {pretty(unit)}".rstrip() if unit != "1" else digits_of(value, digits)


def time_text(seconds: float) -> str:
    """A time of the settling in milliseconds; "never" where it is infinite."""
    return "never" if math.isinf(seconds) else quantity_text(seconds, Window, "time")


def length_text(value: float, rotary: bool) -> str:
    """A length of the size of the window."""
    return quantity_text(value, Window, "position", rotary)


def check_numbers(check: Check, rotary: bool) -> tuple[str, str]:
    """Demand and limit of a check as they are printed."""
    like = _LIKE.get(check.id.partition("[")[0]) or _LIKE_UNIT.get(check.unit)
    if like is None:
        return in_unit(check.demand, check.unit), in_unit(check.limit, check.unit)
    return quantity_text(check.demand, *like, rotary), quantity_text(check.limit, *like, rotary)


def percent(share: float | None) -> str:
    """A share as whole or three-digit per cent."""
    return NOTHING if share is None or not math.isfinite(share) else f"{digits_of(100.0 * share, 3)} %"


def tool_version() -> str:
    """The installed version; a checkout that was never installed has none."""
    try:
        return version("settlepoint")
    except PackageNotFoundError:
        return "not installed"
