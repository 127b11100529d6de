"""The whole job over one axis: size, tune, check. Command line, screens and sheet call it and so cannot disagree."""

from __future__ import annotations

import os
from collections.abc import Callable
from concurrent.futures import Executor, ThreadPoolExecutor
from contextlib import AbstractContextManager, nullcontext
from dataclasses import dataclass, replace
from pathlib import Path
from typing import TYPE_CHECKING

from axis.complete import complete
from axis.completion import CompletedAxis
from axis.contradictions import contradictions
from axis.errors import NotComputable
from axis.files.axis_file import Document, read
from axis.verdicts import Verdict, worst

if TYPE_CHECKING:
    from axis.settling.verdict import Settled
    from axis.sizing.size import Sizing
    from axis.tuning.result import Tuned

DEFAULT_SEED = 1
DEFAULT_RUNS = 3_500

NO_LOOPS = "Whether it settles is not evaluated: the file has no [loops]. Next: settlepoint tune --write FILE"
NO_DESIGN = (
    "No settings are found: wish for smaller margins in [tuning], state narrower tolerances or a stiffer transmission"
)

Progress = Callable[[float, str], None]


@dataclass(frozen=True)
class Study:
    """One axis and what has been computed of it so far; None where it has not."""

    document: Document
    axis: CompletedAxis
    sizing: Sizing | None = None
    tuned: Tuned | None = None
    settled: Settled | None = None
    unevaluated: str = ""  # what was asked and could not be done, and what to do about it

    @property
    def verdict(self) -> Verdict:
        """The worst of what has been asked."""
        done = [part.verdict for part in (self.sizing, self.tuned, self.settled) if part is not None]
        return worst([*done, "not evaluated"] if self.unevaluated else done)


def load(path: str | Path, catalogues: str | Path | None = None) -> Study:
    """Read and complete an axis file; raises InputError with all that is wrong."""
    return opened(read(Path(path), None if catalogues is None else Path(catalogues), contradictions))


def opened(document: Document) -> Study:
    """A study of a document that is already read."""
    return Study(document, complete(document.axis))


def size(study: Study) -> Study:
    """Demand and checks of motor, drive and transmission."""
    from axis.sizing.size import size as size_axis

    return replace(study, sizing=size_axis(study.axis))


def tune(
    study: Study,
    seed: int = DEFAULT_SEED,
    runs: int = DEFAULT_RUNS,
    progress: Progress | None = None,
    executor: Executor | None = None,
) -> Study:
    """Search settings; the study then carries them, the moves with their jerk, and the verdict under them."""
    from axis.tuning.tune import tune as tune_axis

    try:
        with _workers(executor) as workers:
            tuned = tune_axis(study.axis, seed=seed, runs=runs, progress=progress, executor=workers)
    except NotComputable as error:
        return replace(study, tuned=None, settled=None, unevaluated=f"{NO_DESIGN} ({error}).")
    stated = replace(study.document.axis, loops=tuned.loops)
    found = replace(
        study,
        document=replace(study.document, axis=stated),
        axis=complete(stated),
        tuned=tuned,
        settled=tuned.result.settled,
        unevaluated="",
    )
    # The moves now carry the jerk that was chosen: what was sized with another is sized again.
    return found if study.sizing is None else size(found)


def check(study: Study, progress: Progress | None = None, executor: Executor | None = None) -> Study:
    """Simulate the settings in the file at every corner; without settings the study stays unevaluated."""
    from axis.settling.check import check as check_axis

    loops = study.document.axis.loops
    if loops is None:
        return replace(study, unevaluated=NO_LOOPS)
    with _workers(executor) as workers:
        return replace(study, settled=check_axis(study.axis, loops, progress, workers))


def _workers(executor: Executor | None) -> AbstractContextManager[Executor]:
    """The caller's executor, or threads on every core: the compiled simulation releases the interpreter lock."""
    if executor is not None:
        return nullcontext(executor)
    return ThreadPoolExecutor(max_workers=os.cpu_count() or 1)
