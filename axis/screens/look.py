"""The look of the screens: one style sheet, and the few pieces of HTML that the pages are made of.

Whatever comes from a user or a file is escaped here, in `text`; nothing of it reaches Markdown.
"""

from __future__ import annotations

import html
import math
from collections.abc import Iterable, Sequence
from pathlib import Path

from axis.sheet.shown import NOTHING, SHAPES, WORDS
from axis.verdicts import Verdict

_CLASSES: dict[Verdict, str] = {"pass": "pass", "fail": "fail", "not evaluated": "open", "not applicable": "none"}

STYLE = Path(__file__).with_name("style.css")


class Markup(str):
    """HTML made here; every other text is escaped before it stands in a page."""


def text(words: object) -> str:
    """Words of a user, a file or a result, safe inside HTML."""
    return html.escape(str(words), quote=True)


def verdict(value: Verdict, words: str = "") -> Markup:
    """A verdict: word, shape and colour."""
    said = text(words or WORDS[value])
    return Markup(f'<span class="sp-verdict sp-{_CLASSES[value]}"><i>{SHAPES[value]}</i>{said}</span>')


def symbol(name: str) -> Markup:
    """A symbol with its index: K_p."""
    head, _, index = name.partition("_")
    lowered = f"<sub>{text(index)}</sub>" if index else ""
    return Markup(f'<span class="sp-symbol">{text(head)}{lowered}</span>' if name else "")


def in_title(name: str, value: Verdict, words: str = "") -> str:
    """A step's name with its verdict beside it, for the navigation."""
    return f"{name}   {SHAPES[value]} {words or WORDS[value]}"


def heading(title: str, value: Verdict, sentence: str, words: str = "") -> str:
    """The head of a page: what it answers, the answer in a word, and in a sentence."""
    return f'<div class="sp-head"><h1>{text(title)}</h1>{verdict(value, words)}<p>{text(sentence)}</p></div>'


def part(title: str, note: str = "", value: Verdict | None = None) -> str:
    """The head of a part of a page, with its verdict where it has one."""
    said = "" if value is None else f" {verdict(value)}"
    return f'<div class="sp-part" role="heading" aria-level="2">{text(title)}{said} <small>{text(note)}</small></div>'


def box(sentence: str, items: Iterable[str] = (), kind: str = "", role: str = "note") -> str:
    """A framed notice; `kind` is "wrong" or "care" where it is more than a remark."""
    listed = "".join(f"<li>{text(item)}</li>" for item in items)
    inner = f"<ul>{listed}</ul>" if listed else ""
    return f'<div class="sp-box {kind}" role="{role}"><p>{text(sentence)}</p>{inner}</div>'


def stale(content: str, grey: bool) -> str:
    """Results that belong to an earlier input are drawn grey."""
    return f'<div class="sp-stale" aria-disabled="true">{content}</div>' if grey else content


def point(value: str) -> tuple[str, str, str]:
    """A number with its unit, cut at the decimal point and before the unit, so that a column can be aligned on it."""
    number, _, unit = value.partition(" ")
    if not number.lstrip("-+±≥≤>").replace(".", "").isdigit() or " / " in unit:
        return "", "", value
    whole, dot, rest = number.partition(".")
    return whole, f"{dot}{rest}", unit


def table(head: Sequence[str], rows: Iterable[Sequence[str]], numbers: Sequence[int] = ()) -> str:
    """A table of escaped text; the columns in `numbers` are aligned on the decimal point."""

    def cell(n: int, value: str, tag: str) -> str:
        if n not in numbers:
            return f"<{tag}>{value if isinstance(value, Markup) else text(value)}</{tag}>"
        if tag == "th":
            return f'<th colspan="3">{text(value)}</th>'
        whole, rest, unit = point(value)
        return f'<td class="w">{text(whole)}</td><td class="f">{text(rest)}</td><td class="u">{text(unit)}</td>'

    def row(values: Sequence[str], tag: str) -> str:
        return "<tr>" + "".join(cell(n, value, tag) for n, value in enumerate(values)) + "</tr>"

    body = "".join(row(values, "td") for values in rows)
    return f'<table class="sp-table"><thead>{row(head, "th")}</thead><tbody>{body}</tbody></table>'


def margin_bar(margin: float | None, words: str) -> str:
    """The demand as a bar against the limit, its upright at the right; hatched beyond it where the check fails."""
    if margin is None or not math.isfinite(margin):
        return f'<div class="sp-number">{NOTHING}</div>'
    over = " over" if margin < 0.0 else ""
    label = f"margin {words}"
    bar = f'<div class="sp-bar{over}" style="--margin:{margin:.4f}"><u></u></div>'
    return f'<div role="img" aria-label="{text(label)}">{bar}<small>{text(label)}</small></div>'
