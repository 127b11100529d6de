"""The shipped axes as the tests of tuning use them."""

from dataclasses import replace

import axis
from axis.complete import complete
from axis.study import Study
from tests.cli.command import ROOT


def shipped(name: str) -> Study:
    return axis.load(ROOT / "catalog_demo" / name)


def changed(study: Study, **parts) -> Study:
    """The study of the same file with some of its tables replaced."""
    stated = replace(study.document.axis, **parts)
    return replace(study, document=replace(study.document, axis=stated), axis=complete(stated))


def failing_corners(study: Study) -> int:
    return max(move.failing_corners for move in study.settled.moves)
